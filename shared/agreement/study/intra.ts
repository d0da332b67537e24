import { type BlandAltman, blandAltman } from "#shared/agreement/bland-altman.ts";
import { type IccTable, icc } from "#shared/agreement/icc.ts";
import type { Reasons } from "#shared/agreement/interval.ts";
import { mean } from "#shared/agreement/mean-squares.ts";
import { type PositiveAgreement, positiveAgreement } from "#shared/agreement/positive-agreement.ts";
import { itemsOn } from "#shared/agreement/study/found-items.ts";
import { matchedRows, type QuantityRows, totalRows } from "#shared/agreement/study/quantities.ts";
import type { SpecimenItems, StudyPass, StudySpecimen } from "#shared/agreement/study/study.ts";

/** One annotator against the same annotator's later pass over the same specimen. */
export interface IntraAgreement {
  readonly annotator: string;
  readonly specimen: string;
  readonly passes: readonly [number, number];
  /** Days between the two; null when a file does not say when it was made. */
  readonly days: number | null;
  readonly strands: PositiveAgreement;
  /** A branch that one of the two passes misses takes one end. */
  readonly ends: PositiveAgreement;
  /** Later minus earlier on what both passes have; a mean far from 0 is drift. */
  readonly quantities: readonly {
    readonly quantity: string;
    readonly unit: string;
    readonly items: number;
    readonly meanDifference: number | null;
    /** Standard error of one measurement: root of the mean squared difference over 2. */
    readonly sem: number | null;
    readonly reasons: Reasons;
  }[];
  readonly reasons: Reasons;
}

/** One annotator's later passes against the earlier ones over all specimens: drift, and agreement with oneself. */
export interface OwnAgreement {
  readonly annotator: string;
  readonly quantity: string;
  readonly unit: string;
  readonly title: string;
  readonly rows: number;
  readonly specimens: number;
  /** Of the first two passes over each specimen. */
  readonly icc: IccTable;
  /** Later minus earlier; its bias is the drift. */
  readonly drift: BlandAltman;
}

const DAY_MS = 86_400_000;

/** Every annotator's neighbouring passes over each specimen; never pooled with differences between annotators. */
export function intraAgreement(specimens: readonly StudySpecimen[], items: readonly SpecimenItems[]): IntraAgreement[] {
  return specimens.flatMap((specimen, s) =>
    specimen.passes.flatMap((later, p) => {
      const earlier = specimen.passes[p - 1];
      return earlier?.annotator === later.annotator ? [onePair(specimen, items[s]!, p - 1, p, earlier, later)] : [];
    }),
  );
}

/** Drift and agreement of each annotator with the same annotator's own second pass, over all specimens done twice. */
export function ownAgreement(
  annotators: readonly string[],
  specimens: readonly StudySpecimen[],
  items: readonly SpecimenItems[],
): OwnAgreement[] {
  return annotators.flatMap((annotator, j) => {
    const twice = specimens.flatMap((specimen, s) => {
      const i = specimen.firstPass[j]!;
      const repeated = i >= 0 && specimen.passes[i + 1]?.annotator === annotator;
      return repeated ? [{ name: specimen.name, rows: rowsOfBoth(specimen, items[s]!, i, i + 1) }] : [];
    });
    return (twice[0]?.rows ?? []).map(({ quantity, unit, on }, q): OwnAgreement => {
      const perSpecimen = twice.map(({ name, rows }) => ({
        name,
        values: rows[q]!.rows.flatMap(({ values: [a, b] }) => (a == null || b == null ? [] : [[a, b] as const])),
      }));
      const all = perSpecimen.flatMap(({ values }) => values);
      const single = perSpecimen.every(({ values }) => values.length <= 1);
      return {
        annotator,
        quantity,
        unit,
        title: on === "specimen" ? "totals of each specimen" : "given that both passes marked it",
        rows: all.length,
        specimens: twice.length,
        icc: icc(all, single ? "one-item-per-specimen" : "items-of-these-valves"),
        drift: blandAltman(perSpecimen.flatMap(({ name, values }) => values.map(([a, b]) => ({ specimen: name, a: b, b: a })))),
      };
    });
  });
}

function rowsOfBoth(specimen: StudySpecimen, items: SpecimenItems, i: number, j: number): QuantityRows[] {
  return [...totalRows(specimen, [i, j]), ...matchedRows(specimen, items, [i, j])];
}

function onePair(
  specimen: StudySpecimen,
  items: SpecimenItems,
  i: number,
  j: number,
  earlier: StudyPass,
  later: StudyPass,
): IntraAgreement {
  const found = (on: "strands" | "ends") => {
    const rows = itemsOn(specimen, items, on).map(({ members }) => [members[i]! >= 0, members[j]! >= 0] as const);
    const count = (a: boolean, b: boolean) => rows.filter(([x, y]) => x === a && y === b).length;
    return positiveAgreement(count(true, true), count(true, false), count(false, true));
  };
  const days = earlier.created && later.created ? (Date.parse(later.created) - Date.parse(earlier.created)) / DAY_MS : Number.NaN;
  return {
    annotator: later.annotator,
    specimen: specimen.name,
    passes: [earlier.pass, later.pass],
    days: Number.isFinite(days) ? days : null,
    strands: found("strands"),
    ends: found("ends"),
    quantities: rowsOfBoth(specimen, items, i, j).map(differences),
    reasons: Number.isFinite(days) ? {} : { days: "One of the two files does not say when it was made." },
  };
}

function differences({ quantity, unit, rows }: QuantityRows): IntraAgreement["quantities"][number] {
  const found = rows.flatMap(({ values: [a, b] }) => (a == null || b == null ? [] : [b - a]));
  if (found.length === 0) {
    const why = "Both passes have no item with this quantity in common.";
    return { quantity, unit, items: 0, meanDifference: null, sem: null, reasons: { meanDifference: why, sem: why } };
  }
  const squares = mean(found.map((d) => d * d));
  return { quantity, unit, items: found.length, meanDifference: mean(found), sem: Math.sqrt(squares / 2), reasons: {} };
}
