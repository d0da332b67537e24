import { differencePlots } from "#shared/agreement/report/difference-plots.ts";
import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { basisOf, digitsOf, ends, fixed, percent, TableOf, text } from "#shared/agreement/report/report-text.ts";
import type { ContinuousAgreement, StudyQuantity } from "#shared/agreement/study/continuous.ts";
import type { ComponentName } from "#shared/agreement/variance-components.ts";

/** Lengths, radii and angles: an overview, then each quantity with all forms, errors and plots. */
export function continuousSection({ found, context }: ReportInput, quantities: readonly StudyQuantity[]): ReportSection {
  const primary = context.protocol?.primaryQuantity ?? null;
  const order = (one: ContinuousAgreement) => (one.quantity === primary ? 0 : 1);
  const list = [...found.continuous].sort((a, b) => order(a) - order(b));
  const blocks: ReportBlock[] = [
    text(
      "ICC: intraclass correlation, the share of the spread of values that is due to the items and not to who measured; it rises with the spread of the items measured, so it speaks of valves that differ as these do. SEM: standard error of one measurement; SDC: smallest difference between two single measurements that is beyond their error (95 %). ICC(A,1) and its interval over specimens are the main figures; intervals that treat items of the same valves as independent are marked as conditional on these valves.",
      "quiet",
    ),
    primary === null
      ? text("No primary quantity was set: all of these are descriptive, and none is singled out by its result.")
      : text(`Primary quantity, set beforehand: ${primary}. All others are descriptive; no p-value is given.`),
  ];
  if (list.length === 0) blocks.push(text("There is no quantity to speak of.", "refusal"));
  else blocks.push(overview(list, found.items));
  for (const one of list)
    blocks.push(...oneQuantity(one, quantities.find(({ quantity }) => quantity === one.quantity)!, found.annotators));
  return { id: "continuous", title: "Lengths, radii and angles", blocks };
}

function overview(list: readonly ContinuousAgreement[], items: ReportInput["found"]["items"]) {
  const table = new TableOf("Overview: all annotators' first passes", [
    { name: "quantity", words: true },
    { name: "rests on", words: true },
    "ICC(A,1)",
    "95 % interval over specimens",
    "SEM",
    "SDC",
    "interval alpha",
  ]);
  for (const { quantity, unit, title, rows, completeRows, overSpecimens, error, alpha } of list) {
    const main = overSpecimens["ICC(A,1)"];
    const digits = digitsOf(unit);
    table.row(
      unit === "count" ? quantity : `${quantity} (${unit})`,
      `${completeRows} of ${rows} rows complete, ${title}`,
      table.number(main.value, 3, main.reasons.value),
      table.interval(main.jackknife, 3, main.reasons.jackknife),
      table.of(error, "semAgreement", digits),
      table.of(error, "sdcAgreement", digits),
      table.number(alpha.value, 3, alpha.reasons.value),
    );
  }
  table.note(
    "SEM and SDC are of absolute agreement: systematic differences between annotators enter. Krippendorff's alpha rests on all rows, also incomplete ones.",
  );
  const near =
    items.nearGateShare === null ? "" : `; ${percent(items.nearGateShare)} of the pairs lie within 10 % of the matching gate`;
  table.note(`Numbers on matched items rest on ${items.matched} of ${items.union} strands and on nodes matched likewise${near}.`);
  return table.table;
}

function oneQuantity(one: ContinuousAgreement, study: StudyQuantity, annotators: readonly string[]): ReportBlock[] {
  const { quantity, unit, title, icc, completeRows, rows, coverage, reasons } = one;
  const blocks: ReportBlock[] = [
    { kind: "heading", text: unit === "count" ? `${quantity}` : `${quantity} (${unit})` },
    text(
      `${completeRows} of ${rows} rows are complete, ${title}.${one.on === "common paths" ? " Taken on paths between nodes that all annotators have." : ""}`,
    ),
  ];
  if (reasons.completeRows) blocks.push(text(reasons.completeRows, "refusal"));
  if (coverage) blocks.push(coverageTable(quantity, coverage, annotators));
  const table = new TableOf(`Intraclass correlations of ${quantity}, ${title}`, [
    { name: "form", words: true },
    { name: "also called", words: true },
    { name: "model", words: true },
    { name: "type", words: true },
    { name: "definition", words: true },
    "value",
    "95 % interval",
  ]);
  for (const { form, alsoCalled, model, type, definition, value, interval, reasons: why } of icc.forms)
    table.row(
      form,
      alsoCalled,
      model,
      type,
      definition,
      table.number(value, 3, why.value),
      table.interval(interval, 3, why.interval),
    );
  for (const form of ["ICC(A,1)", "ICC(C,1)"] as const) {
    const { jackknife, bootstrap, range, perSpecimen } = one.overSpecimens[form];
    if (jackknife) table.note(`${form} over specimens: ${ends(jackknife, 3)}. ${basisOf(jackknife)}`);
    if (bootstrap) table.note(`${form} over specimens: ${ends(bootstrap, 3)}. ${basisOf(bootstrap)}`);
    const known = perSpecimen.filter((value) => value !== null);
    if (range && known.length > 1)
      table.note(
        `${form} of single specimens: ${fixed(range[0], 3)} to ${fixed(range[1], 3)} (${known.map((value) => fixed(value, 2)).join(", ")}).`,
      );
  }
  blocks.push(table.table, errorTable(one), ...differencesTable(one), ...differencePlots(one, study, annotators));
  return blocks;
}

function coverageTable(quantity: string, coverage: NonNullable<ContinuousAgreement["coverage"]>, annotators: readonly string[]) {
  const table = new TableOf(`Share of each pass's length that lies on common paths (${quantity})`, [
    { name: "specimen", words: true },
    ...annotators,
  ]);
  const why = "This annotator did not do the specimen, or drew nothing.";
  for (const { specimen, shares } of coverage) table.row(specimen, ...shares.map((share) => table.share(share, why)));
  return table.table;
}

const COMPONENTS: readonly (readonly [ComponentName, string])[] = [
  ["specimen", "between specimens"],
  ["item", "between items"],
  ["annotator", "between annotators"],
  ["pass", "between passes"],
  ["residual", "residual"],
];

function errorTable({ quantity, unit, error, components }: ContinuousAgreement) {
  const digits = digitsOf(unit);
  const unitWords = unit === "count" ? "" : ` (${unit})`;
  const table = new TableOf(`Errors of measurement and where the spread of ${quantity} comes from${unitWords}`, [
    { name: "what", words: true },
    "value",
    { name: "definition", words: true },
  ]);
  table.row("SEM, consistency", table.of(error, "semConsistency", digits), "without systematic differences between annotators");
  table.row("SEM, agreement", table.of(error, "semAgreement", digits), "with them");
  table.row("SDC, consistency", table.of(error, "sdcConsistency", digits), "1.96 root 2 SEM");
  table.row("SDC, agreement", table.of(error, "sdcAgreement", digits), "1.96 root 2 SEM");
  for (const [name, words] of COMPONENTS) {
    const variance = components[name];
    const root = variance === null ? null : Math.sqrt(variance);
    const zero = components.setToZero.includes(name) ? "; its estimate came out below zero and is given as 0" : "";
    table.row(
      `SD ${words}`,
      table.number(root, digits, components.reasons[name]),
      `root of the variance component, repeats included${zero}`,
    );
  }
  if (error.raterVarianceSetToZero) table.note("The variance between annotators came out below zero and was taken as 0.");
  return table.table;
}

function differencesTable({ quantity, unit, blandAltman }: ContinuousAgreement): ReportBlock[] {
  if (blandAltman.length === 0)
    return [text("Two annotators are needed for differences between annotators; there is one.", "refusal")];
  const digits = digitsOf(unit);
  const table = new TableOf(
    `Differences of two annotators in ${quantity}${unit === "count" ? "" : ` (${unit})`}, the first minus the second`,
    [
      { name: "annotators", words: true },
      "readings",
      "bias",
      "its interval",
      "lower limit",
      "its interval",
      "upper limit",
      "its interval",
      "slope",
      "its interval",
    ],
  );
  for (const one of blandAltman) {
    const { a, b, readings, reasons } = one;
    const interval = (key: "biasInterval" | "lowerLimitInterval" | "upperLimitInterval") =>
      table.interval(one[key], digits, reasons[key]);
    table.row(
      `${a} \u2212 ${b}`,
      String(readings),
      table.of(one, "bias", digits),
      interval("biasInterval"),
      table.of(one, "lowerLimit", digits),
      interval("lowerLimitInterval"),
      table.of(one, "upperLimit", digits),
      interval("upperLimitInterval"),
      table.of(one, "slope", 3),
      table.interval(one.slopeInterval, 3, reasons.slopeInterval),
    );
  }
  const methods = [...new Set(blandAltman.map(({ method }) => method))];
  table.note(
    `Limits of agreement hold ${percent(0.95)} of differences, z = 1.959964: ${methods.join("; ")}. Slope: change of the difference with the mean of the two, a bias that grows with size.`,
  );
  return [table.table];
}
