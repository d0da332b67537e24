import type { StraightVolume } from "#shared/tracing/own-string/straight-volume.ts";
import { type GaussianKernels, gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";

/** How much a place beside the crest is damped; narrower than for the ridge of a whole scan, so that a string on a thick one's flank keeps a crest. */
const DAMPING = 0.5;

/**
 * How much a string is seen across each place of a straightened volume, shape as its values, grey values: sqrt(l1 l2) of minus the
 * scale-normalised second derivatives in the plane, 0 where they are not both positive, damped off the crest by the slope.
 * @param sigma samples.
 * @source Sato et al. 1998 (geometric mean of the two cross-sectional curvatures), in the plane across the string.
 */
export function planeRidge({ count, half, values }: StraightVolume, sigma: number): Float64Array {
  const side = 2 * half + 1;
  const plane = side * side;
  const { reach, smooth, first, second } = gaussianKernels(sigma);
  const out = new Float64Array(count * plane);
  // One line of a plane, its ends repeated, and the line's three answers, per row.
  const padded = new Float64Array(side + 2 * reach);
  const [s, d, c] = [new Float64Array(plane), new Float64Array(plane), new Float64Array(plane)];
  const rowOf = (row: number) => Math.min(side - 1, Math.max(0, row)) * side;
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < side; j++) {
      const base = i * plane + j * side;
      padded.fill(values[base]!, 0, reach);
      for (let k = 0; k < side; k++) padded[reach + k] = values[base + k]!;
      padded.fill(values[base + side - 1]!, reach + side);
      for (let k = 0, o = j * side; k < side; k++, o++) {
        const middle = padded[reach + k]!;
        let [s0, s1, s2] = [smooth[0]! * middle, 0, second[0]! * middle];
        for (let q = 1; q <= reach; q++) {
          const after = padded[reach + k + q]!;
          const before = padded[reach + k - q]!;
          s0 += smooth[q]! * (after + before);
          s1 += first[q]! * (after - before);
          s2 += second[q]! * (after + before);
        }
        s[o] = s0;
        d[o] = s1;
        c[o] = s2;
      }
    }
    for (let j = 0; j < side; j++)
      for (let k = 0; k < side; k++) {
        const o = j * side + k;
        let gu = smooth[0]! * d[o]!;
        let huu = smooth[0]! * c[o]!;
        let gv = 0;
        let huv = 0;
        let hvv = second[0]! * s[o]!;
        for (let q = 1; q <= reach; q++) {
          const a = rowOf(j + q) + k;
          const b = rowOf(j - q) + k;
          gu += smooth[q]! * (d[a]! + d[b]!);
          huu += smooth[q]! * (c[a]! + c[b]!);
          gv += first[q]! * (s[a]! - s[b]!);
          huv += first[q]! * (d[a]! - d[b]!);
          hvv += second[q]! * (s[a]! + s[b]!);
        }
        const determinant = huu * hvv - huv * huv;
        if (!(determinant > 0 && huu + hvv < 0)) continue;
        const measure2 = sigma ** 4 * determinant;
        const slope2 = sigma * sigma * (gu * gu + gv * gv);
        out[i * plane + o] = (Math.sqrt(measure2) * measure2) / (measure2 + DAMPING * slope2);
      }
  }
  return out;
}

/**
 * The measure of {@link planeRidge} at one place, neither damped nor normalised for its scale.
 * @param at index of the place in its plane.
 */
export function ridgeAtPlace({ half, values }: StraightVolume, plane: number, at: number, kernels: GaussianKernels): number {
  const side = 2 * half + 1;
  const u = at % side;
  const v = Math.floor(at / side);
  const { reach, smooth, first, second } = kernels;
  const inPlane = (place: number) => Math.min(side - 1, Math.max(0, place));
  let huu = 0;
  let huv = 0;
  let hvv = 0;
  for (let j = -reach; j <= reach; j++) {
    const row = (plane * side + inPlane(v + j)) * side;
    let [s0, s1, s2] = [0, 0, 0];
    for (let k = -reach; k <= reach; k++) {
      const value = values[row + inPlane(u + k)]!;
      const q = Math.abs(k);
      s0 += smooth[q]! * value;
      s1 += Math.sign(k) * first[q]! * value;
      s2 += second[q]! * value;
    }
    const q = Math.abs(j);
    huu += smooth[q]! * s2;
    huv += Math.sign(j) * first[q]! * s1;
    hvv += second[q]! * s0;
  }
  const determinant = huu * hvv - huv * huv;
  return determinant > 0 && huu + hvv < 0 ? Math.sqrt(determinant) : 0;
}
