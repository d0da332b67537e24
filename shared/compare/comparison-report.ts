import type { Comparison } from "#shared/compare/comparison.ts";
import {
  DIFFERENCE_WORDS,
  differenceSentence,
  distanceWords,
  treeTitle,
  wholeNumbers,
} from "#shared/compare/comparison-words.ts";
import { type Difference, type DifferenceGroup, differenceGroups } from "#shared/compare/differences.ts";
import { escapeHtml, htmlPage, htmlTable, REPORT_CAUTIONS } from "#shared/report/html-page.ts";
import { barChart } from "#shared/report/svg-plots.ts";
import { treePairPicture } from "#shared/report/tree-picture.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

export interface ComparisonReportInput {
  readonly specimen: string;
  readonly synthetic: boolean;
  readonly nameA: string;
  readonly nameB: string;
  readonly a: PlainSet;
  readonly b: PlainSet;
  readonly comparison: Comparison;
  readonly toleranceMm: number;
  /** The whole distance over A's cost at other merge tolerances; null = A is empty. */
  readonly atMerges: readonly { readonly merge: number; readonly whole: number | null }[];
  readonly software: string;
}

/** One self-contained HTML report on two sets of trees; readable without the program. */
export function comparisonReport(input: ComparisonReportInput): string {
  const { comparison, a, b } = input;
  const { costs } = comparison;
  const groups = differenceGroups(comparison, a, b);
  const rules = `Costs: ${costs.preset === "geometry" ? `places and lengths (${costs.positionScale} mm of displacement cost as much as an insertion)` : "structure alone"}. Origins ${costs.origin}. Forks nearer together than ${costs.merge} mm count as one. Lines and places agree within ${input.toleranceMm} mm.`;
  const whole = wholeNumbers(comparison.whole, input.toleranceMm);
  const numbers = htmlTable(
    "The whole sets",
    ["number", "value"],
    whole.map(({ label, text }) => [label, text]),
  );
  const meanings = whole.map(
    ({ label, definition }) => `<li><strong>${escapeHtml(label)}</strong>: ${escapeHtml(definition)}</li>`,
  );
  const body = `
<h1>Side by side: ${escapeHtml(input.specimen)}</h1>
<p>A, the reference: ${escapeHtml(input.nameA)}. B: ${escapeHtml(input.nameB)}.${input.synthetic ? " The specimen is synthetic." : ""}</p>
<p class="quiet">${escapeHtml(input.software)}. ${escapeHtml(rules)}</p>
<p class="cautions">${escapeHtml(REPORT_CAUTIONS)}</p>
${comparison.warnings.map((warning) => `<p>${escapeHtml(warning)}</p>`).join("\n")}
${numbers}
<ul>${meanings.join("")}</ul>
<h2>Differences by kind</h2>
${kinds(groups)}
<h2>Every difference</h2>
<p class="quiet">A as a broad pale band, B as a thin dark dashed line, both as they lie in the scan.</p>
${groups.length === 0 ? "<p>None.</p>" : groups.map((group) => groupPart(input, group)).join("\n")}
<h2>Every pair of trees</h2>
${pairTable(input)}
<h2>Other merge tolerances</h2>
${mergeTable(input)}
`;
  return htmlPage(`${input.nameB} against ${input.nameA}: ${input.specimen}`, body);
}

function kinds(groups: readonly DifferenceGroup[]): string {
  const counts = new Map<string, number>();
  for (const { kind } of groups.flatMap((group) => group.differences)) {
    const words = DIFFERENCE_WORDS[kind];
    counts.set(words, (counts.get(words) ?? 0) + 1);
  }
  if (counts.size === 0) return "<p>The two sets have no difference that can be named.</p>";
  return `<figure>${barChart(
    "Differences by kind",
    [...counts].map(([name, value]) => ({ name, value })),
  )}<figcaption>One human error is counted once.</figcaption></figure>`;
}

function groupPart(input: ComparisonReportInput, { of, pair, differences }: DifferenceGroup): string {
  const { a, b } = input;
  const sentences = (some: readonly Difference[]) =>
    `<ul>${some
      .map((one) => {
        const place = one.at.map((mm) => mm.toFixed(2)).join(", ");
        return `<li><strong>${escapeHtml(DIFFERENCE_WORDS[one.kind])}</strong> at (${place}) mm. ${escapeHtml(differenceSentence(one, a, b))}</li>`;
      })
      .join("")}</ul>`;
  if (pair === null) {
    const title = of === "only-a" ? "Trees only in A" : of === "only-b" ? "Trees only in B" : "Cross-links of one side";
    return `<h3>${title}</h3>${sentences(differences)}`;
  }
  const title = `${treeTitle(a, pair.a)} in A, ${treeTitle(b, pair.b)} in B`;
  const picture = treePairPicture(
    title,
    a.trees.find((tree) => tree.id === pair.a)!,
    b.trees.find((tree) => tree.id === pair.b),
  );
  return `<h3>${escapeHtml(title)}</h3><p>Edit distance ${escapeHtml(distanceWords(pair))}.</p>${sentences(differences)}<figure>${picture}</figure>`;
}

function pairTable({ comparison, a, b }: ComparisonReportInput): string {
  const number = (value: number | null) => (value === null ? "none" : value.toFixed(3));
  return htmlTable(
    "Trees are matched by where they lie",
    ["A", "B", "edit distance", "of A's cost", "mean distance mm", "OV", "differences"],
    comparison.pairs.map((pair) => [
      treeTitle(a, pair.a),
      treeTitle(b, pair.b),
      distanceWords(pair),
      number(pair.normalised.reference),
      number(pair.distances.mean),
      number(pair.overlap.ov),
      String(pair.events.length),
    ]),
  );
}

function mergeTable({ atMerges }: ComparisonReportInput): string {
  return htmlTable(
    "The whole distance over A's cost when forks are merged below another length",
    ["merge mm", "of A's cost"],
    atMerges.map(({ merge, whole }) => [String(merge), whole === null ? "none" : whole.toFixed(3)]),
  );
}
