import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Fixed grey-value statistics of a scan: what its background is, how noisy it is, and how much strings and tissue stand out. */
export interface GreyLevels {
  /** Most frequent grey value. */
  readonly background: number;
  /** Standard deviation of the background. */
  readonly noise: number;
  /** How far tissue lies from the background towards the polarity's side, grey values, positive. */
  readonly contrast: number;
}

const PATCH = 16;
const PATCHES_PER_AXIS = 5;

/**
 * Estimates the grey levels from 16-voxel cubes spread evenly over the finest level: a function of scan and polarity alone.
 * The background is the mode; its noise comes from the values on its far side, where no string is; the contrast is the
 * median excess of the voxels beyond 4 SD on the strings' side.
 * @source own derivation (mode and one-sided spread of a histogram).
 */
export function greyLevels(pyramid: VoxelPyramid, polarity: Polarity): GreyLevels {
  const values = sampleValues(pyramid);
  const sign = polarity === "bright" ? 1 : -1;
  let min = Number.POSITIVE_INFINITY;
  let max = Number.NEGATIVE_INFINITY;
  const n = values.length;
  for (let i = 0; i < n; i++) {
    const value = values[i]!;
    if (value < min) min = value;
    if (value > max) max = value;
  }
  if (!(max > min)) return { background: Number.isFinite(min) ? min : 0, noise: 1, contrast: 1 };
  const background = modeOf(values, min, max);
  // Values beyond the mode on the side away from the strings are background alone: their spread is the noise.
  const away = new Float64Array(n);
  const towards = new Float64Array(n);
  let awayCount = 0;
  let towardsCount = 0;
  for (let i = 0; i < n; i++) {
    const excess = sign * (values[i]! - background);
    if (excess <= 0) away[awayCount++] = -excess;
    else towards[towardsCount++] = excess;
  }
  // The 68.3 % point of the folded half of a normal distribution is one standard deviation.
  const noise = Math.max(quantile(away.subarray(0, awayCount), 0.683), (max - min) / 1000);
  const beyond = towards.subarray(0, towardsCount).filter((excess) => excess > 4 * noise);
  const contrast = beyond.length >= 32 ? quantile(beyond, 0.5) : 5 * noise;
  return { background, noise, contrast: Math.max(contrast, 3 * noise) };
}

function sampleValues(pyramid: VoxelPyramid): Float32Array {
  const { size } = pyramid.levels[0]!;
  const starts = size.map((side) => {
    const room = Math.max(0, side - PATCH);
    const count = Math.max(1, Math.min(PATCHES_PER_AXIS, Math.floor(side / PATCH)));
    return Array.from({ length: count }, (_, k) => (count === 1 ? room >> 1 : Math.round((room * k) / (count - 1))));
  });
  const patch = size.map((side) => Math.min(PATCH, side)) as [number, number, number];
  const voxels = patch[0] * patch[1] * patch[2];
  const values = new Float32Array(voxels * starts[0]!.length * starts[1]!.length * starts[2]!.length);
  const finite = new Float32Array(voxels);
  let at = 0;
  for (const z of starts[2]!)
    for (const y of starts[1]!)
      for (const x of starts[0]!) {
        pyramid.readBoxInto(0, [x, y, z], patch, finite);
        for (let v = 0; v < voxels; v++) if (Number.isFinite(finite[v]!)) values[at++] = finite[v]!;
      }
  return values.subarray(0, at);
}

/** Centre of the fullest bin after a light smoothing; the bins are refined around it once. */
function modeOf(values: Float32Array, min: number, max: number): number {
  let low = min;
  let high = max;
  let mode = min;
  for (let round = 0; round < 2; round++) {
    const bins = round === 0 ? 256 : 64;
    const counts = new Float64Array(bins + 4);
    const scale = bins / (high - low);
    for (let i = 0; i < values.length; i++) {
      const value = values[i]!;
      if (value < low || value > high) continue;
      const bin = Math.min(bins - 1, Math.floor((value - low) * scale)) + 2;
      counts[bin] = counts[bin]! + 1;
    }
    let best = -1;
    let bestBin = 0;
    for (let b = 2; b < bins + 2; b++) {
      const smooth = counts[b - 2]! + 2 * counts[b - 1]! + 3 * counts[b]! + 2 * counts[b + 1]! + counts[b + 2]!;
      if (smooth > best) {
        best = smooth;
        bestBin = b - 2;
      }
    }
    mode = low + (bestBin + 0.5) / scale;
    const half = 8 / scale;
    low = Math.max(min, mode - half);
    high = Math.min(max, mode + half);
    if (!(high > low)) break;
  }
  return mode;
}

/** The value below which a share of the values lies; reorders them. */
function quantile(values: Float64Array, share: number): number {
  if (values.length === 0) return 0;
  return selectInPlace(values, Math.min(values.length - 1, Math.floor(share * values.length)));
}

/** What would stand at place `k` if the values were sorted; reorders them. @source Hoare 1961 (quickselect). */
function selectInPlace(values: Float64Array, k: number): number {
  let left = 0;
  let right = values.length - 1;
  while (left < right) {
    const pivot = values[(left + right) >> 1]!;
    let i = left;
    let j = right;
    while (i <= j) {
      while (values[i]! < pivot) i++;
      while (values[j]! > pivot) j--;
      if (i <= j) {
        const kept = values[i]!;
        values[i++] = values[j]!;
        values[j--] = kept;
      }
    }
    if (k <= j) right = j;
    else if (k >= i) left = i;
    else break;
  }
  return values[k]!;
}
