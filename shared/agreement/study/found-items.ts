import { type CaptureRecapture, captureRecapture } from "#shared/agreement/capture-recapture.ts";
import { type DetectionRates, detectionRates } from "#shared/agreement/em-detection.ts";
import type { Reasons } from "#shared/agreement/interval.ts";
import type { Item } from "#shared/agreement/items.ts";
import { type OverSpecimens, overSpecimens } from "#shared/agreement/jackknife.ts";
import { type PositiveAgreement, positiveAgreement, positiveAgreementOf } from "#shared/agreement/positive-agreement.ts";
import type { SpecimenItems, StudySpecimen } from "#shared/agreement/study/study.ts";

/** How far annotators mark the same things. */
export interface FoundTogether {
  readonly positive: PositiveAgreement;
  readonly overSpecimens: OverSpecimens;
  /** Each two annotators. */
  readonly pairs: readonly ({ readonly a: string; readonly b: string } & PositiveAgreement)[];
  /** On specimens that all annotators did. */
  readonly captureRecapture: CaptureRecapture;
}

/** The same on strands and on ends, and rates of strands where they can be known. */
export interface FoundItems {
  /** On strands, over all pairs of annotators. */
  readonly positiveAgreement: number | null;
  /** A missed branch takes two strands: itself, and the shorter part of the strand that it cuts in two. */
  readonly strands: FoundTogether;
  /** A missed branch takes one end; an end placed beyond the tolerance counts as another end. */
  readonly ends: FoundTogether;
  readonly rates: DetectionRates;
  readonly reasons: Reasons;
}

/**
 * Positive agreement on strands and ends, what share each annotator is likely to have found, and rates where they can be
 * known.
 * @param declinedByAll candidates that were shown to every annotator and declined by all; 0 = none were shown.
 */
export function foundItems(
  annotators: readonly string[],
  specimens: readonly StudySpecimen[],
  items: readonly SpecimenItems[],
  declinedByAll: number,
  seed: number,
): FoundItems {
  const rowsOn = (on: "strands" | "ends") => specimens.map((specimen, s) => markedRows(specimen, items[s]!, on));
  const strands = rowsOn("strands");
  const declined = Array.from({ length: declinedByAll }, () => false);
  const decisions = annotators.map((_, j) => [...doneByAll(strands).map((row) => row[j]!), ...declined]);
  const onStrands = foundTogether(annotators, strands, seed);
  const { value, reasons } = onStrands.positive;
  return {
    positiveAgreement: value,
    strands: onStrands,
    ends: foundTogether(annotators, rowsOn("ends"), seed),
    rates: detectionRates(decisions, null, seed),
    reasons: value === null ? { positiveAgreement: reasons.value! } : {},
  };
}

/** shape [specimens][items][annotators]: marked or not; null = specimen not done. */
type MarkedRows = readonly (readonly (readonly (boolean | null)[])[])[];

function foundTogether(annotators: readonly string[], rows: MarkedRows, seed: number): FoundTogether {
  const all = rows.flat();
  const counts = rows.map((specimen) => positiveAgreementOf(specimen));
  const together = (chosen: readonly number[]) =>
    positiveAgreement(
      chosen.reduce((sum, k) => sum + counts[k]!.both, 0),
      chosen.reduce((sum, k) => sum + counts[k]!.onlyOne, 0),
      0,
    ).value;
  const pairs = annotators.flatMap((a, i) =>
    annotators.slice(i + 1).map((b, k) => ({ a, b, ...positiveAgreementOf(all.map((row) => [row[i]!, row[i + 1 + k]!])) })),
  );
  return {
    positive: positiveAgreementOf(all),
    overSpecimens: overSpecimens(together, rows.length, seed, 1),
    pairs,
    captureRecapture: captureRecapture(doneByAll(rows), annotators.length),
  };
}

function doneByAll(rows: MarkedRows): boolean[][] {
  return rows.flat().filter((row) => row.every((marked) => marked !== null)) as boolean[][];
}

/** shape [items][annotators]: marked or not; null = specimen not done. Items of repeats alone are left out. */
export function markedRows(specimen: StudySpecimen, items: SpecimenItems, on: "strands" | "ends"): (boolean | null)[][] {
  return itemsOn(specimen, items, on)
    .map(({ members }) => specimen.firstPass.map((p) => (p < 0 ? null : members[p]! >= 0)))
    .filter((row) => row.includes(true));
}

/** Items that are strands, or nodes at the end of one. */
export function itemsOn(specimen: StudySpecimen, items: SpecimenItems, on: "strands" | "ends"): readonly Item[] {
  if (on === "strands") return items.strands.items;
  return items.nodes.items.filter(({ members }) => {
    const p = members.findIndex((member) => member >= 0);
    return specimen.passes[p]!.canonical.nodes[members[p]!]!.type === "end";
  });
}
