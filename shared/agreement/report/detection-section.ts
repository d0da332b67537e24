import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, percent, TableOf, text } from "#shared/agreement/report/report-text.ts";
import type { FoundTogether } from "#shared/agreement/study/found-items.ts";

/** Whether annotators mark the same things: positive agreement, and what of rates can be known. */
export function detectionSection({ found }: ReportInput): ReportSection {
  const { detection, annotators } = found;
  const both = [
    ["ends", detection.ends],
    ["strands", detection.strands],
  ] as const;
  const blocks: ReportBlock[] = [
    text(
      "Positive agreement = 2 a / (2 a + b + c): a items that both of two annotators marked, b and c items that only the one or only the other marked. Places where neither marked anything cannot be counted, so nothing here is corrected for chance, and neither kappa nor a specificity exists. A missed branch takes one end, but two strands: itself, and one part of the strand that it no longer cuts in two. An end placed beyond the tolerance counts as another end.",
    ),
    overview(both),
  ];
  const pairs = new TableOf("Each two annotators, their first passes", [
    { name: "on", words: true },
    { name: "annotators", words: true },
    "marked by both",
    "by one of the two",
    "positive agreement",
  ]);
  for (const [name, { pairs: list }] of both)
    for (const { a, b, both: shared, onlyOne, value, reasons } of list)
      pairs.row(name, `${a}, ${b}`, String(shared), String(onlyOne), pairs.number(value, 3, reasons.value));
  if (!pairs.isEmpty) blocks.push(pairs.table);
  blocks.push({ kind: "heading", text: "What share each annotator is likely to have marked" }, captured(both, annotators));
  const { assumptions } = detection.ends.captureRecapture;
  blocks.push(text("These shares mean something only as far as this holds:", "quiet"), { kind: "list", items: assumptions });
  const { best, others, prior, reasons } = detection.rates;
  if (!best) blocks.push(text(reasons.best ?? "Rates cannot be given.", "refusal"));
  else {
    const rates = new TableOf("Sensitivity and specificity without a reference (expectation-maximisation)", [
      { name: "annotator", words: true },
      "sensitivity",
      "specificity",
    ]);
    annotators.forEach((name, j) => {
      rates.row(name, percent(best.sensitivity[j]!, 1), percent(best.specificity[j]!, 1));
    });
    rates.note(
      `Beta(2,2) maximum a posteriori, 20 seeded starts, share of real candidates ${prior === null ? "not set" : fixed(prior, 3)}.`,
    );
    rates.note(
      others.length === 0
        ? "No other optimum within 2 log-units."
        : `${others.length} other optima lie within 2 log-units of the best: these rates are not the only ones that fit.`,
    );
    blocks.push(rates.table);
  }
  return { id: "detection", title: "Did they mark the same things", blocks };
}

type Named = readonly (readonly [string, FoundTogether])[];

function overview(both: Named) {
  const table = new TableOf("Positive agreement over all pairs of annotators", [
    { name: "on", words: true },
    "positive agreement",
    "95 % interval",
    { name: "each specimen", words: true },
  ]);
  for (const [name, { positive, overSpecimens }] of both) {
    const { jackknife, bootstrap, perSpecimen, reasons } = overSpecimens;
    table.row(
      name,
      table.number(positive.value, 3, positive.reasons.value),
      table.interval(jackknife, 3, reasons.jackknife),
      perSpecimen.map((value) => (value === null ? "none" : fixed(value, 2))).join(", ") || "none",
    );
    if (bootstrap) table.note(`On ${name}, ${bootstrap.method}: ${fixed(bootstrap.low, 3)} to ${fixed(bootstrap.high, 3)}.`);
  }
  return table.table;
}

function captured(both: Named, annotators: readonly string[]) {
  const table = new TableOf("Capture and recapture, on specimens that all annotators did", [
    { name: "on", words: true },
    "seen by anyone",
    "likely in all",
    ...annotators.map((name) => `share by ${name}`),
  ]);
  for (const [name, { captureRecapture }] of both) {
    const { seen, total, sensitivity, reasons } = captureRecapture;
    table.row(
      name,
      String(seen),
      table.number(total, 1, reasons.total),
      ...sensitivity.map((share) => table.share(share, reasons.sensitivity)),
    );
  }
  return table.table;
}
