import { type CaptureRecapture, captureRecapture } from "#shared/agreement/capture-recapture.ts";
import { type DetectionRates, detectionRates } from "#shared/agreement/em-detection.ts";
import { type OverSpecimens, overSpecimens } from "#shared/agreement/jackknife.ts";
import { type PositiveAgreement, positiveAgreementOf } from "#shared/agreement/positive-agreement.ts";
import type { SpecimenItems, StudySpecimen } from "#shared/agreement/study/study.ts";

/** How far annotators mark the same strands. */
export interface FoundItems {
  readonly positive: PositiveAgreement;
  readonly overSpecimens: OverSpecimens;
  /** Each two annotators. */
  readonly pairs: readonly ({ readonly a: string; readonly b: string } & PositiveAgreement)[];
  /** On specimens that all annotators did. */
  readonly captureRecapture: CaptureRecapture;
  readonly rates: DetectionRates;
}

/**
 * Positive agreement on strands, what share each annotator is likely to have found, and rates where they can be known.
 * @param declinedByAll candidates that were shown to every annotator and declined by all; 0 = none were shown.
 */
export function foundItems(
  annotators: readonly string[],
  specimens: readonly StudySpecimen[],
  items: readonly SpecimenItems[],
  declinedByAll: number,
  seed: number,
): FoundItems {
  const rows = specimens.map((specimen, s) => markedRows(specimen, items[s]!));
  const everyone = rows.flat().filter((row) => row.every((marked) => marked !== null)) as boolean[][];
  const decisions = annotators.map((_, j) => [
    ...everyone.map((row) => row[j]!),
    ...Array.from({ length: declinedByAll }, () => false),
  ]);
  const pairs = annotators.flatMap((a, i) =>
    annotators
      .slice(i + 1)
      .map((b, k) => ({ a, b, ...positiveAgreementOf(rows.flat().map((row) => [row[i]!, row[i + 1 + k]!])) })),
  );
  return {
    positive: positiveAgreementOf(rows.flat()),
    overSpecimens: overSpecimens((chosen) => positiveAgreementOf(chosen.flatMap((s) => rows[s]!)).value, rows.length, seed),
    pairs,
    captureRecapture: captureRecapture(everyone, annotators.length),
    rates: detectionRates(decisions, null, seed),
  };
}

/** shape [strand items][annotators]: marked or not; null = specimen not done. Items of repeats alone are left out. */
export function markedRows(specimen: StudySpecimen, { strands }: SpecimenItems): (boolean | null)[][] {
  return strands.items
    .map(({ members }) => specimen.firstPass.map((p) => (p < 0 ? null : members[p]! >= 0)))
    .filter((row) => row.includes(true));
}
