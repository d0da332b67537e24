import type { StudyPass, StudySpecimen } from "#shared/agreement/study/study.ts";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { ComparedWhole, CompareOptions, Comparison, TimeLeft } from "#shared/compare/comparison.ts";
import type { EventKind } from "#shared/compare/events/compare-event.ts";

/** The whole comparison of two passes over one specimen; `a` is the reference of what is not symmetric. */
export interface PairSummary extends ComparedWhole {
  readonly specimen: string;
  readonly a: string;
  readonly b: string;
  readonly matchedTrees: number;
  readonly onlyA: readonly string[];
  readonly onlyB: readonly string[];
  /** How often the annotators differ in each way, in matched trees; `missed-branch` is one that only `a` has. */
  readonly events: Readonly<Partial<Record<EventKind, number>>>;
}

const STEP_WITHOUT_VOLUME_MM = 0.02;

/** Sampling step on a specimen: half its smallest voxel spacing, millimetres. */
export function stepOf(pass: StudyPass): number {
  const spacing = pass.file.volume?.spacing;
  return spacing ? Math.min(...spacing) / 2 : STEP_WITHOUT_VOLUME_MM;
}

/** Two annotators' first passes over one specimen. */
export interface PassPair {
  readonly specimen: string;
  readonly a: StudyPass;
  readonly b: StudyPass;
}

/** Each two annotators' first passes over each specimen, in order. */
export function passPairs(specimens: readonly StudySpecimen[]): PassPair[] {
  return specimens.flatMap(({ name, firstPass, passes }) => {
    const first = firstPass.filter((p) => p >= 0).map((p) => passes[p]!);
    return first.flatMap((a, i) => first.slice(i + 1).map((b) => ({ specimen: name, a, b })));
  });
}

/** The chosen pairs compared; the time that is left is shared evenly. */
export function comparePassPairs(
  pairs: readonly PassPair[],
  options: Omit<CompareOptions, "step">,
  timeLeft: TimeLeft,
): PairSummary[] {
  return pairs.map(({ specimen, a, b }, k) => {
    const until = timeLeft() - timeLeft() / (pairs.length - k);
    const found = compareSets(a.set, b.set, { ...options, step: stepOf(a) }, () => timeLeft() - until);
    return {
      specimen,
      a: a.annotator,
      b: b.annotator,
      matchedTrees: found.pairs.length,
      onlyA: found.onlyA,
      onlyB: found.onlyB,
      events: countedEvents(found),
      ...found.whole,
    };
  });
}

function countedEvents({ pairs }: Comparison): PairSummary["events"] {
  const counts: Partial<Record<EventKind, number>> = {};
  for (const { event } of pairs.flatMap(({ events }) => events)) counts[event] = (counts[event] ?? 0) + 1;
  return counts;
}
