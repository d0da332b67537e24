import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { digitsOf, fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";

/** Each annotator against the same annotator's later pass: agreement with oneself, and drift. */
export function ownSection({ found, context }: ReportInput): ReportSection {
  const title = "The same annotator again";
  if (found.intra.length === 0) {
    const why = `${found.reasons.intra ?? "No annotator did a specimen twice."} How far annotators differ from themselves, and whether they drift, cannot be said.`;
    return { id: "own", title, blocks: [text(why, "refusal")] };
  }
  const blocks: ReportBlock[] = [
    text(
      "Later passes against the same annotator's earlier one over the same specimen; never pooled with differences between annotators.",
    ),
    repeats(found.intra),
    drifts(found.own),
    reliabilities(found.own),
  ];
  const washout = context.protocol?.washoutDays ?? null;
  const short = found.intra.filter(({ days }) => days !== null && washout !== null && days < washout);
  if (short.length > 0)
    blocks.push(
      text(
        `${short.length} repeats came before the ${washout} days that the protocol asks for: the annotator may have remembered the valve.`,
        "refusal",
      ),
    );
  return { id: "own", title, blocks };
}

function repeats(intra: ReportInput["found"]["intra"]) {
  const table = new TableOf("Each repeat: what both passes marked", [
    { name: "annotator", words: true },
    { name: "specimen", words: true },
    "passes",
    "days between",
    "positive agreement, ends",
    "strands",
    "path length, later \u2212 earlier (mm)",
    "SEM of path length (mm)",
  ]);
  for (const { annotator, specimen, passes, days, ends, strands, quantities, reasons } of intra) {
    const path = quantities.find(({ quantity }) => quantity === "path length");
    table.row(
      annotator,
      specimen,
      passes.join(", "),
      table.number(days, 0, reasons.days),
      table.number(ends.value, 3, ends.reasons.value),
      table.number(strands.value, 3, strands.reasons.value),
      table.number(path?.meanDifference, 3, path?.reasons.meanDifference),
      table.number(path?.sem, 3, path?.reasons.sem),
    );
  }
  return table.table;
}

function drifts(own: ReportInput["found"]["own"]) {
  const table = new TableOf("Drift: later minus earlier, over the specimens done twice", [
    { name: "annotator", words: true },
    { name: "quantity", words: true },
    { name: "rests on", words: true },
    "drift",
    "95 % interval",
    "SD of one difference",
    "limits of agreement",
  ]);
  for (const { annotator, quantity, unit, title, rows, specimens, drift } of own) {
    const digits = digitsOf(unit);
    const { lowerLimit, upperLimit, reasons } = drift;
    table.row(
      annotator,
      unit === "count" ? quantity : `${quantity} (${unit})`,
      `${rows} rows on ${specimens} specimens, ${title}`,
      table.number(drift.bias, digits, reasons.bias),
      table.interval(drift.biasInterval, digits, reasons.biasInterval),
      table.number(drift.sd, digits, reasons.sd),
      lowerLimit === null || upperLimit === null
        ? table.number(null, digits, reasons.lowerLimit)
        : `${fixed(lowerLimit, digits)} to ${fixed(upperLimit, digits)}`,
    );
  }
  table.note("An interval that holds 0 shows no drift; that is not the same as showing that there is none.");
  return table.table;
}

function reliabilities(own: ReportInput["found"]["own"]) {
  const table = new TableOf("Intraclass correlation of the first two passes of one annotator", [
    { name: "annotator", words: true },
    { name: "quantity", words: true },
    "rows",
    "ICC(A,1)",
    "95 % interval",
    "ICC(C,1)",
    "95 % interval",
  ]);
  for (const { annotator, quantity, rows, icc } of own) {
    const [agreement, consistency] = ["ICC(A,1)", "ICC(C,1)"].map((name) => icc.forms.find(({ form }) => form === name)!);
    table.row(
      annotator,
      quantity,
      String(rows),
      ...[agreement!, consistency!].flatMap(({ value, interval, reasons }) => [
        table.number(value, 3, reasons.value),
        table.interval(interval, 3, reasons.interval),
      ]),
    );
  }
  table.note(
    "ICC(A,1): two-way, single pass, absolute agreement; ICC(C,1): two-way, single pass, consistency. The two passes take the place of raters.",
  );
  return table.table;
}
