import { normalQuantile } from "#shared/agreement/distributions.ts";
import type { Reasons } from "#shared/agreement/interval.ts";
import { meanSquares } from "#shared/agreement/mean-squares.ts";

/** Standard error of measurement and smallest detectable change, in the values' unit. */
export interface MeasurementError {
  /** Without the raters' systematic differences. */
  readonly semConsistency: number | null;
  /** With them; a negative variance between raters counts as 0. */
  readonly semAgreement: number | null;
  readonly sdcConsistency: number | null;
  readonly sdcAgreement: number | null;
  /** True when the variance between raters came out negative and was taken as 0. */
  readonly raterVarianceSetToZero: boolean;
  readonly reasons: Reasons;
}

/**
 * Standard error of measurement and smallest detectable change (95 %) of a complete table.
 * @param rows shape [items][raters].
 * @source de Vet et al., J Clin Epidemiol 2006;59:1033-1039
 */
export function measurementError(rows: readonly (readonly number[])[]): MeasurementError {
  const squares = meanSquares(rows);
  if (!squares) {
    const why = "The error of measurement needs two items and two raters or more.";
    const reasons = { semConsistency: why, semAgreement: why, sdcConsistency: why, sdcAgreement: why };
    return {
      semConsistency: null,
      semAgreement: null,
      sdcConsistency: null,
      sdcAgreement: null,
      raterVarianceSetToZero: false,
      reasons,
    };
  }
  const between = (squares.rater - squares.residual) / squares.items;
  const semConsistency = Math.sqrt(squares.residual);
  const semAgreement = Math.sqrt(Math.max(0, between) + squares.residual);
  const factor = normalQuantile(0.975) * Math.SQRT2;
  return {
    semConsistency,
    semAgreement,
    sdcConsistency: factor * semConsistency,
    sdcAgreement: factor * semAgreement,
    raterVarianceSetToZero: between < 0,
    reasons: {},
  };
}
