import type { CandidateScore } from "#shared/score/score-candidate.ts";

const HEADER = [
  "candidate",
  "reference_tree",
  "reference_name",
  "candidate_tree",
  "accepted",
  "distance_of_reference",
  "lower_bound",
  "exact",
  "mean_distance_mm",
  "events",
];

/** The scores in long form, a row per candidate and reference tree; RFC 4180, empty where a value cannot be given. */
export function scoreCsv(scores: readonly CandidateScore[]): string {
  const rows = scores.flatMap((score) =>
    score.trees.map((tree) => [
      score.candidate,
      tree.tree,
      tree.name,
      tree.candidate ?? "",
      tree.accepted ? "yes" : "no",
      number(tree.distance),
      number(tree.lower),
      tree.exact ? "yes" : "no",
      number(tree.meanDistance),
      tree.events.map((event) => event.event).join(" "),
    ]),
  );
  return [HEADER, ...rows]
    .map((row) => row.map(quoted).join(","))
    .join("\r\n")
    .concat("\r\n");
}

function number(value: number | null): string {
  return value === null ? "" : String(Math.round(value * 1e6) / 1e6);
}

function quoted(cell: string): string {
  return /[",\r\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell;
}

/** The scores as a terminal table, a row per candidate. */
export function scoreText(scores: readonly CandidateScore[], limit: number): string {
  const percent = (value: number | null) => (value === null ? "-" : `${(100 * value).toFixed(1)} %`);
  const header = ["candidate", `accepted at ${limit}`, "distance", "recall", "precision", "mean mm", "extra trees"];
  const rows = scores.map((score) => [
    score.candidate,
    `${score.accepted} of ${score.trees.length} (${percent(score.acceptedShare)})`,
    score.whole.normalised.reference === null
      ? "-"
      : `${score.whole.normalised.reference.toFixed(3)}${score.whole.exact ? "" : " at most"}`,
    percent(score.whole.detection.length.recall),
    percent(score.whole.detection.length.precision),
    score.whole.distances.mean === null ? "-" : score.whole.distances.mean.toFixed(3),
    String(score.unmatchedCandidates),
  ]);
  const widths = header.map((_, column) => Math.max(...[header, ...rows].map((row) => row[column]!.length)));
  return [header, ...rows]
    .map((row) => row.map((cell, column) => (column === 0 ? cell.padEnd(widths[0]!) : cell.padStart(widths[column]!))).join("  "))
    .join("\n");
}
