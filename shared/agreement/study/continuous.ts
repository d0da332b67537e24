import { type Alpha, krippendorffAlpha } from "#shared/agreement/alpha.ts";
import { type BlandAltman, blandAltman } from "#shared/agreement/bland-altman.ts";
import { type IccForm, type IccTable, icc, iccValue } from "#shared/agreement/icc.ts";
import type { Reasons } from "#shared/agreement/interval.ts";
import { type OverSpecimens, overSpecimens } from "#shared/agreement/jackknife.ts";
import { mean, meanSquaresOf, squareSums } from "#shared/agreement/mean-squares.ts";
import { type MeasurementError, measurementError } from "#shared/agreement/sem.ts";
import type { QuantityRow } from "#shared/agreement/study/quantities.ts";
import { type LongValue, type VarianceComponents, varianceComponents } from "#shared/agreement/variance-components.ts";

/** A quantity over all specimens: rows of each specimen, one value for each annotator of the study. */
export interface StudyQuantity {
  readonly quantity: string;
  readonly unit: string;
  readonly on: "nodes" | "common paths" | "specimen";
  readonly specimens: readonly string[];
  /** shape [specimens][rows]. */
  readonly rows: readonly (readonly QuantityRow[])[];
  /** shape [specimens][annotators]; null for quantities that are not taken on common paths. */
  readonly coverage: readonly (readonly (number | null)[])[] | null;
  /** Values of all passes, repeats included, for the variance components. */
  readonly long: readonly LongValue[];
}

/** Agreement of annotators on one continuous quantity. */
export interface ContinuousAgreement {
  readonly quantity: string;
  readonly unit: string;
  readonly on: StudyQuantity["on"];
  /** Heading that every number below carries. */
  readonly title: string;
  readonly rows: number;
  /** Rows that every annotator of the study has; intraclass correlations and errors of measurement rest on these. */
  readonly completeRows: number;
  readonly icc: IccTable;
  /** ICC(A,1) and ICC(C,1) with intervals over specimens: the main ones. */
  readonly overSpecimens: Readonly<Record<"ICC(A,1)" | "ICC(C,1)", OverSpecimens>>;
  readonly error: MeasurementError;
  readonly components: VarianceComponents;
  /** Interval alpha on all rows, also incomplete ones. */
  readonly alpha: Alpha;
  readonly blandAltman: readonly ({ readonly a: string; readonly b: string } & BlandAltman)[];
  readonly coverage: readonly { readonly specimen: string; readonly shares: readonly (number | null)[] }[] | null;
  readonly reasons: Reasons;
}

/** All statistics of one continuous quantity. @param title such as "given that both marked it". @param seed of the bootstrap. */
export function continuousAgreement(
  study: StudyQuantity,
  annotators: readonly string[],
  title: string,
  seed: number,
): ContinuousAgreement {
  const complete = study.rows.map((rows) => rows.filter((row) => row.values.every((value) => value !== null)));
  const tables = complete.map((rows) => rows.map((row) => row.values as readonly number[]));
  const all = tables.flat();
  const single = tables.every((rows) => rows.length <= 1);
  const centre = all.length === 0 ? 0 : mean(all.map(mean));
  const sums = tables.map((rows) => squareSums(rows, annotators.length, centre));
  const ofForm = (form: IccForm) =>
    overSpecimens(
      (chosen) => {
        const squares = meanSquaresOf(chosen.map((s) => sums[s]!));
        return squares && iccValue(form, squares);
      },
      study.specimens.length,
      seed,
      1,
    );
  const pairs = annotators.flatMap((a, i) => annotators.slice(i + 1).map((b, k) => ({ a, b, i, j: i + 1 + k })));
  const reasons: Record<string, string> = {};
  if (all.length === 0) reasons.completeRows = "No item has a value by every annotator of the study.";
  return {
    quantity: study.quantity,
    unit: study.unit,
    on: study.on,
    title,
    rows: study.rows.flat().length,
    completeRows: all.length,
    icc: icc(all, single ? "one-item-per-specimen" : "items-of-these-valves"),
    overSpecimens: { "ICC(A,1)": ofForm("ICC(A,1)"), "ICC(C,1)": ofForm("ICC(C,1)") },
    error: measurementError(all),
    components: varianceComponents(study.long),
    alpha: krippendorffAlpha(
      study.rows.flat().map((row) => row.values),
      "interval",
    ),
    blandAltman: pairs.map(({ a, b, i, j }) => {
      const readings = study.rows.flatMap((rows, s) =>
        rows.flatMap(({ values }) => {
          const [x, y] = [values[i]!, values[j]!];
          return x === null || y === null ? [] : [{ specimen: study.specimens[s]!, a: x, b: y }];
        }),
      );
      return { a, b, ...blandAltman(readings) };
    }),
    coverage: study.coverage && study.specimens.map((specimen, s) => ({ specimen, shares: study.coverage![s]! })),
    reasons,
  };
}
