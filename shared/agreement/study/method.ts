import { type Equivalence, equivalence, type SpecimenDisagreement } from "#shared/agreement/equivalence.ts";
import { FEWEST_SPECIMENS } from "#shared/agreement/interval.ts";
import { mean } from "#shared/agreement/mean-squares.ts";
import { stepOf } from "#shared/agreement/study/pairwise.ts";
import type { StudyPass, StudySpecimen } from "#shared/agreement/study/study.ts";
import { overlapOf } from "#shared/compare/overlap.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

/** A computed set of trees against annotators: distances, and squared distances (gamma and the coefficient of individual agreement). */
export interface MethodAgreement {
  readonly method: string;
  readonly distances: Equivalence;
  readonly squared: Equivalence;
  readonly perSpecimen: readonly ({ readonly specimen: string } & SpecimenDisagreement)[];
}

/**
 * Mean distance of the method from each annotator against that of the annotators from each other, specimen by specimen.
 * @param margin millimetres, set beforehand by the protocol; null = none, and no verdict.
 */
export function methodAgreement(
  method: string,
  specimens: readonly StudySpecimen[],
  margin: number | null,
  sameEngine: boolean,
): MethodAgreement {
  const found = specimens.flatMap((specimen) => {
    const people = specimen.firstPass.filter((p) => p >= 0).map((p) => specimen.passes[p]!);
    if (!specimen.method || people.length < 2) return [];
    const own = people.map((pass) => meanDistance(pass, specimen.method!));
    const others = people.flatMap((a, i) => people.slice(i + 1).map((b) => meanDistance(a, b)));
    const [mine, theirs] = [own, others].map((list) => list.filter((d) => d !== null)) as [number[], number[]];
    return mine.length === 0 || theirs.length === 0 ? [] : [{ specimen: specimen.name, mine, theirs }];
  });
  const disagreement = (power: 1 | 2) =>
    found.map(({ mine, theirs }) => ({
      methodAnnotator: mean(mine.map((d) => d ** power)),
      annotatorAnnotator: mean(theirs.map((d) => d ** power)),
    }));
  const distances = disagreement(1);
  const squared = equivalence(disagreement(2), null, sameEngine);
  const noVerdict = { verdict: "A margin is one of distances; on squared ones no verdict is given." };
  return {
    method,
    distances: equivalence(distances, margin, sameEngine),
    squared: { ...squared, reasons: found.length < FEWEST_SPECIMENS ? squared.reasons : { ...squared.reasons, ...noVerdict } },
    perSpecimen: found.map(({ specimen }, k) => ({ specimen, ...distances[k]! })),
  };
}

/** Mean of the two directed mean distances of two passes' centrelines, millimetres; null when a side is empty. */
function meanDistance(a: StudyPass, b: StudyPass): number | null {
  const strands = (pass: StudyPass): RootedStrand[] =>
    pass.set.trees.flatMap(rootedStrands).map((strand) => ({ ...strand, before: -1 }));
  return overlapOf(strands(a), strands(b), { step: stepOf(a), toleranceMm: 1, minimumDiameterMm: null }).distances.mean;
}
