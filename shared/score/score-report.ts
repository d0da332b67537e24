import { escapeHtml, htmlPage, htmlTable, REPORT_CAUTIONS } from "#shared/report/html-page.ts";
import { barChart, lineChart } from "#shared/report/svg-plots.ts";
import { treePairPicture } from "#shared/report/tree-picture.ts";
import { type CandidateScore, REPORTED_LIMITS, type ScoredTree } from "#shared/score/score-candidate.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

export interface ScoreReportInput {
  readonly referenceName: string;
  readonly reference: PlainSet;
  readonly limit: number;
  readonly tolerance: number;
  readonly scores: readonly CandidateScore[];
  /** Trees of each scored candidate, by its name, for the pictures. */
  readonly candidateTrees: ReadonlyMap<string, PlainSet>;
  /** Annotators' own passes scored the same way; empty when none were given. */
  readonly annotators: readonly CandidateScore[];
  readonly trivial: CandidateScore;
  readonly gateFailures: readonly string[];
  readonly software: string;
}

/** Trees pictured for each candidate. */
const WORST = 4;

/** One self-contained HTML report on candidates scored against a reference; readable without the program. */
export function scoreReport(input: ScoreReportInput): string {
  const { scores, annotators, trivial, limit } = input;
  const percent = (value: number | null) => (value === null ? "-" : `${(100 * value).toFixed(1)} %`);
  const number = (value: number | null, digits = 3) => (value === null ? "-" : value.toFixed(digits));
  const lines = [
    ...scores.map((score) => ({ name: score.candidate, values: score.acceptedAt })),
    ...annotators.map((score) => ({ name: `${score.candidate} (annotator)`, values: score.acceptedAt, quiet: true })),
    { name: "straight strands", values: trivial.acceptedAt, quiet: true },
  ];
  const summary = htmlTable(
    `Against the reference, tolerance ${input.tolerance} mm`,
    [
      "candidate",
      `accepted at ${limit}`,
      "distance / reference",
      "proven",
      "recall (length)",
      "precision (length)",
      "mean distance mm",
      "OV",
    ],
    [...scores, ...annotators.map((one) => ({ ...one, candidate: `${one.candidate} (annotator)` })), trivial].map((score) => [
      score.candidate,
      `${score.accepted} of ${score.trees.length}`,
      number(score.whole.normalised.reference),
      score.whole.exact ? "exact" : `from ${number(score.whole.lower, 2)}`,
      percent(score.whole.detection.length.recall),
      percent(score.whole.detection.length.precision),
      number(score.whole.distances.mean),
      number(score.whole.overlap.ov),
    ]),
  );
  const sensitivity = htmlTable(
    "Accepted share (and whole distance / reference) with other merge tolerances",
    ["candidate", ...(scores[0]?.sensitivity ?? []).map((entry) => `merge ${entry.merge} mm`)],
    scores.map((score) => [
      score.candidate,
      ...score.sensitivity.map((entry) => `${percent(entry.acceptedShare)} (${number(entry.distance)})`),
    ]),
  );
  const verdict =
    input.gateFailures.length === 0
      ? "<p>Every gate is passed.</p>"
      : `<p>Gates not passed:</p><ul>${input.gateFailures.map((line) => `<li>${escapeHtml(line)}</li>`).join("")}</ul>`;
  const body = `
<h1>Trees scored against a reference</h1>
<p class="quiet">Reference: ${escapeHtml(input.referenceName)}. ${escapeHtml(input.software)}.</p>
<p class="cautions">${escapeHtml(REPORT_CAUTIONS)}</p>
${verdict}
<h2>Summary</h2>
${summary}
<p>Trees are matched by where they lie. A tree's distance is its edit distance divided by the cost of deleting the reference tree; a reference tree is accepted when that is below the limit, and fails when no tree matches it. The limit of 0.6 is common practice without a source: read the whole curve.</p>
<h2>Accepted share over the limit</h2>
<figure>${lineChart("Accepted share of reference trees over the limit", REPORTED_LIMITS, lines, "limit of the reference-normalised distance", "accepted share", [0, 1])}
<figcaption>Grey: ${annotators.length > 0 ? "the annotators' own passes, and " : ""}a candidate that knows nothing, one straight strand per reference tree from its origin to its farthest end.${annotators.length === 0 ? " No annotator's pass was given, so human variability is not shown." : ""}</figcaption></figure>
<h2>Errors by kind</h2>
${scores.map((score) => `<figure>${barChart(`Errors of ${score.candidate}`, eventBars(score))}<figcaption>${escapeHtml(score.candidate)}: each error once, as a person would name it. ${score.unmatchedCandidates} of its trees match no reference tree.</figcaption></figure>`).join("\n")}
<h2>Trees farthest from the reference</h2>
${scores.map((score) => worstTrees(input, score)).join("\n")}
<h2>Sensitivity to the merge tolerance</h2>
${sensitivity}
<p>Forks joined by strands shorter than the merge tolerance count as one.</p>
`;
  return htmlPage(`Score against ${input.referenceName}`, body);
}

function eventBars(score: CandidateScore): { name: string; value: number }[] {
  return Object.entries(score.eventCounts).map(([event, value]) => ({ name: event.replaceAll("-", " "), value }));
}

function worstTrees(input: ScoreReportInput, score: CandidateScore): string {
  const worst = [...score.trees]
    .sort((a, b) => (b.distance ?? Number.POSITIVE_INFINITY) - (a.distance ?? Number.POSITIVE_INFINITY))
    .slice(0, WORST);
  const figures = worst.map((tree) => {
    const reference = input.reference.trees.find((one) => one.id === tree.tree)!;
    const candidate = input.candidateTrees.get(score.candidate)?.trees.find((one) => one.id === tree.candidate);
    const label = `${tree.name || tree.tree}: ${inWords(tree)}`;
    return `<figure>${treePairPicture(label, reference, candidate)}<figcaption>${escapeHtml(label)}</figcaption></figure>`;
  });
  return `<h3>${escapeHtml(score.candidate)}</h3><div class="row">${figures.join("\n")}</div>`;
}

function inWords(tree: ScoredTree): string {
  if (tree.distance === null) return "no tree matches it";
  const events = tree.events.map((event) => event.event.replaceAll("-", " ")).join(", ");
  return `distance ${tree.distance.toFixed(3)}${events ? ` (${events})` : ""}`;
}
