import type { Reasons } from "#shared/agreement/interval.ts";

/** How many items there are likely to be, seen and unseen, and what share each annotator marked. */
export interface CaptureRecapture {
  /** Items that at least one annotator marked. */
  readonly seen: number;
  /** Estimated number of all real items. */
  readonly total: number | null;
  /** Estimated share that each annotator marked, 0-1; shape [annotators]. */
  readonly sensitivity: readonly (number | null)[];
  /** Estimated share that at least one marked. */
  readonly together: number | null;
  /** What has to hold for these numbers to mean anything; printed beside them. */
  readonly assumptions: readonly string[];
  readonly reasons: Reasons;
}

const ASSUMPTIONS: readonly string[] = [
  "Every marked item is real.",
  "Annotators miss items independently of each other.",
  "All items are equally easy to see; where thin ones are missed by everyone, sensitivity is overstated.",
];

/**
 * Sensitivity without a reference from how far annotators mark the same items: the number of items N at which independent
 * annotators would leave as many unseen as N has beyond the seen ones. With two annotators it is n1 n2 / both.
 * @param marked shape [items][annotators]; items that somebody marked.
 * @source Darroch, Biometrika 1958;45:343-359 (maximum likelihood, several captures; its equation from memory)
 */
export function captureRecapture(marked: readonly (readonly boolean[])[], annotators: number): CaptureRecapture {
  const counts = Array.from({ length: annotators }, (_, j) => marked.filter((item) => item[j]).length);
  const seen = marked.filter((item) => item.some(Boolean)).length;
  const refuse = (why: string): CaptureRecapture => ({
    seen,
    total: null,
    sensitivity: counts.map(() => null),
    together: null,
    assumptions: ASSUMPTIONS,
    reasons: { total: why, sensitivity: why, together: why },
  });
  const active = counts.filter((count) => count > 0);
  if (annotators < 2) return refuse("Capture and recapture need two annotators or more.");
  if (seen === 0) return refuse("Nobody marked anything.");
  if (active.length < 2) return refuse("Only one annotator marked anything: how much is unseen cannot be told.");
  if (active.reduce((sum, count) => sum + count, 0) === seen)
    return refuse("No item was marked twice: how much is unseen cannot be told.");
  const total = likelyTotal(seen, active);
  return {
    seen,
    total,
    sensitivity: counts.map((count) => count / total),
    together: seen / total,
    assumptions: ASSUMPTIONS,
    reasons: {},
  };
}

/** Root N >= seen of 1 - seen / N = product of (1 - count / N). */
function likelyTotal(seen: number, counts: readonly number[]): number {
  if (counts.some((count) => count === seen)) return seen;
  const excess = (n: number) => 1 - seen / n - counts.reduce((product, count) => product * (1 - count / n), 1);
  let [low, high] = [seen, 2 * seen];
  while (excess(high) < 0) [low, high] = [high, 2 * high];
  for (let i = 0; i < 200 && high - low > 1e-12 * high; i++) {
    const middle = (low + high) / 2;
    if (excess(middle) < 0) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
