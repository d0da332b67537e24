import chiSquare from "@stdlib/stats-base-dists-chisquare-quantile";
import f from "@stdlib/stats-base-dists-f-quantile";
import normalCumulative from "@stdlib/stats-base-dists-normal-cdf";
import normal from "@stdlib/stats-base-dists-normal-quantile";
import t from "@stdlib/stats-base-dists-t-quantile";

/** Standard normal quantile. @param p 0-1, both out. */
export function normalQuantile(p: number): number {
  return normal(p, 0, 1);
}

/** Standard normal distribution function, 0-1. */
export function normalCdf(z: number): number {
  return normalCumulative(z, 0, 1);
}

/** Quantile of Student's t. @param freedom degrees of freedom > 0, need not be whole. */
export function tQuantile(p: number, freedom: number): number {
  return t(p, freedom);
}

/** Quantile of F. @param numerator, denominator degrees of freedom > 0, need not be whole. */
export function fQuantile(p: number, numerator: number, denominator: number): number {
  return f(p, numerator, denominator);
}

/** Quantile of chi-square. @param freedom degrees of freedom > 0. */
export function chiSquareQuantile(p: number, freedom: number): number {
  return chiSquare(p, freedom);
}
