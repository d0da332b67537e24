import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";
import type { PairSummary } from "#shared/agreement/study/pairwise.ts";
import type { EventKind } from "#shared/compare/events/compare-event.ts";

const EVENT_WORDS: Readonly<Record<EventKind, string>> = {
  "missed-branch": "branch only in the first",
  "extra-branch": "branch only in the second",
  "moved-fork": "moved fork",
  "moved-end": "moved end",
  "short-end": "short end",
  "joined-differently": "joined differently",
  "exchanged-tails": "exchanged tails",
  renamed: "named differently",
};

/** Each two annotators' first passes over each specimen, as whole sets of trees. */
export function pairwiseSection({ found, options }: ReportInput): ReportSection {
  const title = "Each two annotators, specimen by specimen";
  if (found.pairwise.length === 0) {
    const why = "No two annotators did the same specimen: nothing can be held against each other.";
    return { id: "pairwise", title, blocks: [text(why, "refusal")] };
  }
  const { positionScale, merge } = options.compare;
  const blocks: ReportBlock[] = [
    text(
      `Edit distance: the least cost of turning one annotator's trees into the other's by putting in, taking out and changing nodes and strands (1 for a node or strand; a moved node its distance over ${positionScale} mm, at most 2; a strand its relative change of length; origins held to each other; forks joined by less than ${merge} mm are one). Over the cost of the first alone it is 0 for the same trees and about 1 for trees that have nothing in common. Mean distance: mean of the two directed mean distances of the centrelines; HD95: 95th percentile of both directions' distances. The first of the two is the reference where a number is not symmetric; neither is the truth.`,
      "quiet",
    ),
    distances(found.pairwise),
    events(found.pairwise),
  ];
  return { id: "pairwise", title, blocks };
}

function distances(pairs: readonly PairSummary[]) {
  const table = new TableOf("Distances between first passes", [
    { name: "specimen", words: true },
    { name: "first, second", words: true },
    "trees matched",
    "trees only in one",
    "edit distance",
    "over the first's cost",
    "mean distance (mm)",
    "HD95 (mm)",
    "overlap OV",
  ]);
  for (const pair of pairs) {
    const { specimen, a, b, matchedTrees, onlyA, onlyB, exact, ged, lower, upper, normalised, distances: lines, overlap } = pair;
    const empty = "One of the two has no centreline.";
    table.row(
      specimen,
      `${a}, ${b}`,
      String(matchedTrees),
      String(onlyA.length + onlyB.length),
      exact
        ? fixed(ged, 2)
        : table.marked(`${fixed(lower, 2)} to ${fixed(upper, 2)}`, "The least cost is not proven: it lies between these two."),
      table.number(normalised.reference, 3, "The first has no tree: there is no cost to divide by."),
      table.number(lines.mean, 3, empty),
      table.number(lines.hd95, 2, empty),
      table.number(overlap.ov, 3, overlap.reasons.ov ?? empty),
    );
  }
  return table.table;
}

/** Differences in an annotator's words, summed over specimens for each two annotators. */
function events(pairs: readonly PairSummary[]) {
  const kinds = (Object.keys(EVENT_WORDS) as EventKind[]).filter((kind) => pairs.some((pair) => (pair.events[kind] ?? 0) > 0));
  if (kinds.length === 0) return text("In matched trees no difference was found that has a name.");
  const sums = new Map<string, Map<EventKind, number>>();
  for (const { a, b, events: counts } of pairs) {
    const key = `${a}, ${b}`;
    if (!sums.has(key)) sums.set(key, new Map());
    for (const kind of kinds) sums.get(key)!.set(kind, (sums.get(key)!.get(kind) ?? 0) + (counts[kind] ?? 0));
  }
  const table = new TableOf("Kinds of differences in matched trees, all specimens together", [
    { name: "first, second", words: true },
    ...kinds.map((kind) => EVENT_WORDS[kind]),
  ]);
  for (const [key, counts] of sums) table.row(key, ...kinds.map((kind) => String(counts.get(kind) ?? 0)));
  return table.table;
}
