import { normalCdf } from "#shared/agreement/distributions.ts";

const PIECES = 1200;

/**
 * Distribution function of noncentral t: the normal probability of t s - shift, averaged over the spread s of a standard
 * deviation with these degrees of freedom (Simpson's rule; the weights are normalised by their own sum). Good to about 1e-9.
 * @param freedom degrees of freedom >= 1. @source definition of the distribution
 */
export function noncentralTCdf(t: number, freedom: number, shift: number): number {
  const peak = Math.sqrt((freedom - 1) / freedom);
  const spread = 1 / Math.sqrt(2 * freedom);
  const low = Math.max(0, peak - 9 * spread);
  const step = (peak + 9 * spread - low) / PIECES;
  const log = (s: number) => (freedom === 1 ? 0 : (freedom - 1) * Math.log(s)) - (freedom * s * s) / 2;
  const highest = freedom === 1 ? 0 : log(peak);
  let sum = 0;
  let all = 0;
  for (let i = 0; i <= PIECES; i++) {
    const s = low + i * step;
    const weight = (i === 0 || i === PIECES ? 1 : i % 2 === 1 ? 4 : 2) * Math.exp(log(s) - highest);
    all += weight;
    sum += weight * normalCdf(t * s - shift);
  }
  return sum / all;
}

/** Quantile of noncentral t by bisection. @param p 0-1, both out. @param freedom degrees of freedom >= 1. */
export function noncentralTQuantile(p: number, freedom: number, shift: number): number {
  let [low, high] = [shift - 1, shift + 1];
  for (let reach = 1; noncentralTCdf(low, freedom, shift) > p; reach *= 2) low -= reach;
  for (let reach = 1; noncentralTCdf(high, freedom, shift) < p; reach *= 2) high += reach;
  for (let i = 0; i < 100 && high - low > 1e-12 * Math.max(1, Math.abs(high)); i++) {
    const middle = (low + high) / 2;
    if (noncentralTCdf(middle, freedom, shift) < p) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
