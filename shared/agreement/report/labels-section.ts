import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { ends, fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";
import type { CategoricalAgreement } from "#shared/agreement/study/categorical.ts";

/** Agreement on labels: all coefficients, and who calls what which. */
export function labelsSection({ found }: ReportInput): ReportSection {
  const title = "Labels";
  if (found.categorical.length === 0)
    return { id: "labels", title, blocks: [text("No item that annotators share carries a label.", "refusal")] };
  const both = found.categorical.filter(({ absentCounts }) => !absentCounts);
  const withAbsent = found.categorical.filter(({ absentCounts }) => absentCounts);
  const blocks: ReportBlock[] = [
    text(
      "Coefficients of agreement beyond chance; they differ in what they take for chance, and fall towards 0 where nearly all items have one label, although annotators hardly ever differ (AC1 does so least). Alpha with its interval over specimens is the main figure.",
      "quiet",
    ),
    overview("Labels of items that both annotators marked", both),
    overview("The same, not marking an item counted as a label of its own", withAbsent),
  ];
  const same = both.filter((one) => differing(one).length === 0).map(({ label }) => label);
  if (same.length > 0) blocks.push(text(`No two annotators differ on any item that both labelled in: ${same.join(", ")}.`));
  blocks.push(...both.flatMap(pairTables));
  return { id: "labels", title, blocks };
}

function overview(caption: string, list: readonly CategoricalAgreement[]) {
  const table = new TableOf(caption, [
    { name: "label", words: true },
    "items",
    "alpha, nominal",
    "95 % interval over specimens",
    "alpha, ordinal",
    "Fleiss kappa",
    "AC1",
    "AC2, quadratic",
  ]);
  const unordered = "This label's values have no order, or there are fewer than three of them.";
  for (const { label, items, alphaNominal, alphaOrdinal, overSpecimens, fleiss, ac1, ac2 } of list) {
    table.row(
      label,
      String(items),
      table.number(alphaNominal.value, 3, alphaNominal.reasons.value),
      table.interval(overSpecimens.jackknife, 3, overSpecimens.reasons.jackknife),
      alphaOrdinal ? table.number(alphaOrdinal.value, 3, alphaOrdinal.reasons.value) : table.number(null, 3, unordered),
      table.number(fleiss.value, 3, fleiss.reasons.value),
      table.number(ac1.value, 3, ac1.reasons.value),
      ac2 ? table.number(ac2.value, 3, ac2.reasons.value) : table.number(null, 3, unordered),
    );
    const known = overSpecimens.perSpecimen.filter((value) => value !== null);
    if (!overSpecimens.jackknife && known.length > 1)
      table.note(`${label}, alpha of single specimens: ${known.map((value) => fixed(value, 2)).join(", ")}.`);
    if (overSpecimens.bootstrap) table.note(`${label}, ${overSpecimens.bootstrap.method}: ${ends(overSpecimens.bootstrap, 3)}.`);
  }
  return table.table;
}

/** Pairs of annotators who call at least one item differently. */
function differing({ cohen }: CategoricalAgreement): CategoricalAgreement["cohen"] {
  return cohen.filter(({ table }) => table.some((row, i) => row.some((count, j) => i !== j && count > 0)));
}

/** Each two annotators' kappas, and their labels against each other where they differ. */
function pairTables(one: CategoricalAgreement): ReportBlock[] {
  const { label, cohen, ordered, categories, title } = one;
  if (differing(one).length === 0) return [];
  const out = new TableOf(`Cohen's kappa of each two annotators on ${label}, ${title}`, [
    { name: "annotators", words: true },
    "items",
    "agree on",
    "kappa",
    "SE",
    "95 % interval",
    ...(ordered ? ["kappa, linear", "kappa, quadratic"] : []),
  ]);
  for (const { a, b, table, plain, linear, quadratic } of cohen) {
    const items = table.flat().reduce((sum, count) => sum + count, 0);
    const agreed = table.reduce((sum, row, i) => sum + row[i]!, 0);
    out.row(
      `${a}, ${b}`,
      String(items),
      String(agreed),
      out.number(plain.value, 3, plain.reasons.value),
      out.number(plain.se, 3, plain.reasons.se),
      out.interval(plain.interval, 3, plain.reasons.interval),
      ...(ordered ? [linear, quadratic].map((one) => out.number(one?.value, 3, one?.reasons.value)) : []),
    );
  }
  return [{ kind: "heading", text: label }, out.table, ...differing(one).map((pair) => crossTable(label, categories, pair))];
}

function crossTable(label: string, categories: readonly string[], { a, b, table }: CategoricalAgreement["cohen"][number]) {
  const used = categories.filter((_, k) => table[k]!.some((count) => count > 0) || table.some((row) => row[k]! > 0));
  const out = new TableOf(`${label}: what ${a} (rows) and ${b} (columns) call the same items`, [
    { name: `${a} \\ ${b}`, words: true },
    ...used,
  ]);
  const at = (name: string) => categories.indexOf(name);
  for (const row of used) out.row(row, ...used.map((column) => fixed(table[at(row)]![at(column)]!, 0)));
  return out.table;
}
