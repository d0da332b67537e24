/** Half kernels of a Gaussian and its derivatives: index 0 is the centre, index k stands for +k and -k voxels. */
export interface GaussianKernels {
  /** Number of voxels to each side: 4 sigma, at least 1. */
  readonly reach: number;
  /** shape [reach + 1]; the full kernel is even and sums to 1. */
  readonly smooth: Float64Array;
  /** shape [reach + 1]; odd: weight of (value at +k) - (value at -k); gives 1 on the ramp x. */
  readonly first: Float64Array;
  /** shape [reach + 1]; even, sums to 0; gives 2 on the parabola x^2. */
  readonly second: Float64Array;
}

/**
 * Sampled Gaussian derivatives truncated at 4 sigma and corrected by their moments, so that constants, ramps and parabolas
 * are answered exactly at every sigma; towards sigma 0 they become the plain differences (1, -2, 1) and (-1, 0, 1) / 2.
 * @param sigma voxels, not negative.
 * @source Lindeberg 1990 (sampled derivatives of the Gaussian); moment correction own derivation.
 */
export function gaussianKernels(sigma: number): GaussianKernels {
  const reach = Math.max(1, Math.ceil(4 * sigma));
  const smooth = new Float64Array(reach + 1);
  const first = new Float64Array(reach + 1);
  const second = new Float64Array(reach + 1);
  const s2 = sigma * sigma;
  for (let k = 0; k <= reach; k++) {
    const g = s2 > 0 ? Math.exp((-k * k) / (2 * s2)) : k === 0 ? 1 : 0;
    smooth[k] = g;
    first[k] = k * g;
    second[k] = (k * k - s2) * g;
  }
  // Where the Gaussian is too narrow to reach the neighbour, only the differences are left. (From sigma 1 on the second
  // derivative at the neighbour is negative: that is no sign of it.)
  if (!(smooth[1]! > 1e-12)) {
    first[1] = 1;
    second.fill(0);
    second[1] = 1;
  }
  let sum = smooth[0]!;
  let ramp = 0;
  for (let k = 1; k <= reach; k++) {
    sum += 2 * smooth[k]!;
    ramp += 2 * k * first[k]!;
  }
  for (let k = 0; k <= reach; k++) {
    smooth[k] = smooth[k]! / sum;
    first[k] = first[k]! / ramp;
  }
  // The mean is taken off in proportion to the Gaussian, so that no weight turns up at its tails; at the narrow end
  // the centre carries it alone, as in (1, -2, 1).
  let zeroth = second[0]!;
  for (let k = 1; k <= reach; k++) zeroth += 2 * second[k]!;
  if (s2 >= 0.5) for (let k = 0; k <= reach; k++) second[k] = second[k]! - zeroth * smooth[k]!;
  else second[0] = second[0]! - zeroth;
  let parabola = 0;
  for (let k = 1; k <= reach; k++) parabola += 2 * k * k * second[k]!;
  for (let k = 0; k <= reach; k++) second[k] = (second[k]! * 2) / parabola;
  return { reach, smooth, first, second };
}
