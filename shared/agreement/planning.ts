import { normalQuantile } from "#shared/agreement/distributions.ts";
import { TautlineError } from "#shared/errors.ts";

/** A planned number of subjects. */
export interface PlannedSubjects {
  /** As the formula gives it. */
  readonly exact: number;
  /** Rounded up: independent subjects, that is specimens when one quantity is taken per specimen. */
  readonly subjects: number;
}

/**
 * Subjects for a 95 % interval of the intraclass correlation no wider than wished.
 * @param icc expected value, 0-1, both out. @param raters >= 2. @param width of the whole interval, 0-2.
 * @throws TautlineError misuse when a value is outside its range.
 * @source Bonett, Stat Med 2002;21:1331-1335, with its correction for two raters and a correlation of 0.7 or more
 */
export function subjectsForWidth(icc: number, raters: number, width: number): PlannedSubjects & { readonly corrected: boolean } {
  need(icc > 0 && icc < 1, `an expected intraclass correlation between 0 and 1, found ${icc}`);
  need(raters >= 2 && Number.isInteger(raters), `two annotators or more, found ${raters}`);
  need(width > 0 && width < 2, `an interval width between 0 and 2, found ${width}`);
  const z = normalQuantile(0.975);
  const spread = (8 * z * z * (1 - icc) ** 2 * (1 + (raters - 1) * icc) ** 2) / (raters * (raters - 1) * width * width);
  const corrected = raters === 2 && icc >= 0.7;
  const exact = spread + 1 + (corrected ? 5 * icc : 0);
  return { exact, subjects: Math.ceil(exact), corrected };
}

/**
 * Subjects for a one-sided test (5 %) that the intraclass correlation exceeds the least acceptable one.
 * @param least acceptable and @param expected correlation, 0 <= least < expected < 1. @param raters >= 2. @param power 0-1.
 * @throws TautlineError misuse when a value is outside its range.
 * @source Walter, Eliasziw & Donner, Stat Med 1998;17:101-110
 */
export function subjectsForTest(least: number, expected: number, raters: number, power = 0.8): PlannedSubjects {
  need(least >= 0 && expected < 1 && least < expected, `0 <= least acceptable < expected < 1, found ${least} and ${expected}`);
  need(raters >= 2 && Number.isInteger(raters), `two annotators or more, found ${raters}`);
  need(power > 0.05 && power < 1, `a power between 0.05 and 1, found ${power}`);
  const ratio = (icc: number) => 1 + (raters * icc) / (1 - icc);
  const gap = Math.log(ratio(least) / ratio(expected));
  const z = normalQuantile(0.95) + normalQuantile(power);
  const exact = 1 + (2 * z * z * raters) / (gap * gap * (raters - 1));
  return { exact, subjects: Math.ceil(exact) };
}

/** The same for several strands a specimen, which are not independent. */
export interface PlannedSpecimens {
  /** 1 + (strands a specimen - 1) rho. */
  readonly designEffect: number;
  readonly strands: number;
  readonly specimens: number;
}

/**
 * Specimens that give as much as the planned independent subjects when each gives several strands.
 * @param planned from {@link subjectsForWidth} or {@link subjectsForTest}. @param strandsPerSpecimen >= 1.
 * @param rho correlation of strands of one specimen, 0-1.
 * @throws TautlineError misuse when a value is outside its range.
 */
export function specimensFor(planned: PlannedSubjects, strandsPerSpecimen: number, rho: number): PlannedSpecimens {
  need(strandsPerSpecimen >= 1, `one strand a specimen or more, found ${strandsPerSpecimen}`);
  need(rho >= 0 && rho <= 1, `a correlation within specimens between 0 and 1, found ${rho}`);
  const designEffect = 1 + (strandsPerSpecimen - 1) * rho;
  const strands = Math.ceil(planned.exact * designEffect);
  return { designEffect, strands, specimens: Math.ceil(strands / strandsPerSpecimen) };
}

function need(fits: boolean, what: string): void {
  if (fits) return;
  throw new TautlineError("misuse", `Planning expects ${what}. Correct the value.`, { what });
}
