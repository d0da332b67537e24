import type { ComparedWhole } from "#shared/compare/comparison.ts";
import type { Difference, DifferenceKind } from "#shared/compare/differences.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

/** Each kind of difference in an annotator's words. */
export const DIFFERENCE_WORDS: Readonly<Record<DifferenceKind, string>> = {
  "missed-branch": "missed branch",
  "extra-branch": "extra branch",
  "moved-fork": "moved fork",
  "moved-end": "moved end",
  "short-end": "short end",
  "joined-differently": "joined differently",
  "exchanged-tails": "exchanged tails",
  renamed: "named differently",
  "tree-only-a": "missed tree",
  "tree-only-b": "extra tree",
  "link-only-a": "missed cross-link",
  "link-only-b": "extra cross-link",
};

/** One difference as a sentence, lengths in millimetres. */
export function differenceSentence(difference: Difference, setA: PlainSet, setB: PlainSet): string {
  const { kind, length, treeA, treeB, followedBy, a, b } = difference;
  const mm = `${length.toFixed(2)} mm`;
  switch (kind) {
    case "missed-branch":
      return `A has a branch here, B has not (${mm} away from B's tree).`;
    case "extra-branch":
      return `B has a branch here, A has not (${mm} away from A's tree).`;
    case "moved-fork":
      return `B's fork lies ${mm} from A's.`;
    case "moved-end":
      return `B's end lies ${mm} from A's.`;
    case "short-end":
      return `B ends ${mm} before A does.`;
    case "joined-differently":
      if (a === null) return "B has a fork here that A has not.";
      if (b === null) return "A has a fork here that B has not.";
      if (followedBy !== null) return `This string of ${mm} belongs to ${treeTitle(setB, followedBy)} in B.`;
      return length > 0 ? `This string of ${mm} hangs elsewhere in B.` : "This string hangs elsewhere in B.";
    case "exchanged-tails":
      return `From here on two strings have changed places in B${followedBy === null ? "" : `, this one with ${treeTitle(setB, followedBy)}`} (${mm} of string).`;
    case "renamed":
      return `${treeTitle(setA, treeA)} in A is ${treeTitle(setB, treeB)} in B.`;
    case "tree-only-a":
      return `${treeTitle(setA, treeA)} matches no tree of B (${mm} of string).`;
    case "tree-only-b":
      return `${treeTitle(setB, treeB)} matches no tree of A (${mm} of string).`;
    case "link-only-a":
      return `A has a cross-link here, B has not (${mm} of string).`;
    case "link-only-b":
      return `B has a cross-link here, A has not (${mm} of string).`;
  }
}

/** A tree's name, else its id; empty for no tree. */
export function treeTitle(set: PlainSet, id: string | null): string {
  if (id === null) return "";
  return set.trees.find((tree) => tree.id === id)?.name || id;
}

/** A distance with its proof: the number when it is proven, else the bounds. */
export function distanceWords({
  ged,
  lower,
  upper,
  exact,
}: {
  ged: number;
  lower: number;
  upper: number;
  exact: boolean;
}): string {
  return exact ? `${ged.toFixed(2)}, proven` : `between ${lower.toFixed(2)} and ${upper.toFixed(2)}`;
}

/** One number on two whole sets, and what it means in one plain sentence. */
export interface WholeNumber {
  readonly name: "distance" | "reference" | "pair" | "recall" | "precision" | "mean";
  readonly label: string;
  readonly text: string;
  readonly definition: string;
}

/** The numbers on two whole sets, A being the reference, each with its definition. */
export function wholeNumbers(whole: ComparedWhole, toleranceMm: number): WholeNumber[] {
  const share = (value: number | null) => (value === null ? "none" : value.toFixed(3));
  const { recall, precision } = whole.detection.length;
  const { mean } = whole.distances;
  // The distance may be smaller than the answer where it is not proven; what is divided says so.
  const most = whole.exact ? "" : "at most ";
  return [
    {
      name: "distance",
      label: "edit distance",
      text: distanceWords(whole),
      definition:
        "The least total cost of edits that turn A's trees into B's, trees without a partner at full cost; it is proven when no cheaper way can exist, else the true distance lies between the two numbers.",
    },
    {
      name: "reference",
      label: "of A's cost",
      text: whole.normalised.reference === null ? "none" : most + share(whole.normalised.reference),
      definition:
        "The edit distance divided by the cost of deleting all of A: 0 when B says the same as A, and above 1 when B has much that A has not.",
    },
    {
      name: "pair",
      label: "of both costs",
      text: most + share(whole.normalised.pair),
      definition:
        "The edit distance divided by the cost of deleting all of A and inserting all of B: 0 when both say the same, 1 when nothing of A is kept.",
    },
    {
      name: "recall",
      label: "recall by length",
      text: share(recall),
      definition: `The share of A's string length that lies within ${toleranceMm} mm of a string of B.`,
    },
    {
      name: "precision",
      label: "precision by length",
      text: share(precision),
      definition: `The share of B's string length that lies within ${toleranceMm} mm of a string of A.`,
    },
    {
      name: "mean",
      label: "mean distance",
      text: mean === null ? "none" : `${mean.toFixed(3)} mm`,
      definition:
        "How far the centrelines lie apart: the distance from a place on one side to the nearest place on the other, averaged over A's places and over B's, and the two averages averaged.",
    },
  ];
}
