import type { SurfaceHeader } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import { indexToMm } from "#shared/volume/grid.ts";
import type { PyramidLevel, VoxelPyramid } from "#shared/volume/pyramid.ts";
import { type AbortSignalLike, stopIfAborted } from "#shared/volume/section/sample-lattice.ts";

/** Most voxels of the level that is read as a whole: 24 MB as float32. */
const MOST_VOXELS = 6_000_000;

/**
 * Points on the surface of what is bright (or dark) at a coarse level: for each voxel beyond the threshold with a neighbour
 * before it, the mean of the places where the lines to such neighbours cross the threshold. The threshold parts the level's
 * values best into two classes. When there are more than `limit` points, an even selection in a fixed scattered order, so
 * that any first part of it shows the whole surface. Where tissue is cut off by the scan's edge there is no surface.
 * @throws cancelled when the signal says so.
 * @source threshold: Otsu, IEEE Trans Syst Man Cybern 1979;9:62-66. Points: own derivation.
 */
export function surfacePoints(
  pyramid: VoxelPyramid,
  request: { readonly limit: number; readonly polarity: Polarity },
  signal?: AbortSignalLike,
): BinaryFrame<SurfaceHeader> {
  const level = pyramid.levels.find((l) => l.size[0] * l.size[1] * l.size[2] <= MOST_VOXELS) ?? pyramid.levels.at(-1)!;
  const sign = request.polarity === "bright" ? 1 : -1;
  const [nx, ny, nz] = level.size;
  const slice = new Float32Array(nx * ny);
  const read = (z: number) => {
    stopIfAborted(signal);
    pyramid.readBoxInto(level.level, [0, 0, z], [nx, ny, 1], slice);
    return slice;
  };
  const threshold = otsuThreshold(nz, read);
  if (threshold === null) return frameOf(new Float32Array(0), level, 0);

  // Once to count, once to keep: only points that are asked for are ever held.
  let count = 0;
  eachSurfacePoint(level, read, sign, threshold, () => count++);
  const place = scattered(count);
  const points = new Float32Array(3 * Math.min(count, request.limit));
  let number = 0;
  eachSurfacePoint(level, read, sign, threshold, (x, y, z) => {
    const to = place(number++);
    if (3 * to < points.length) points.set(indexToMm(level, [x, y, z]), 3 * to);
  });
  return frameOf(points, level, threshold);
}

/** Calls `found` with the voxel index of each point of the surface, in the order of its voxel. */
function eachSurfacePoint(
  level: PyramidLevel,
  read: (z: number) => Float32Array,
  sign: 1 | -1,
  threshold: number,
  found: (x: number, y: number, z: number) => void,
): void {
  const [nx, ny, nz] = level.size;
  const slices = [new Float32Array(nx * ny), new Float32Array(nx * ny), new Float32Array(nx * ny)];
  for (let z = 0; z < Math.min(2, nz); z++) slices[z]!.set(read(z));
  for (let z = 0; z < nz; z++) {
    const here = slices[z % 3]!;
    const below = z > 0 ? slices[(z + 2) % 3]! : null;
    const above = z + 1 < nz ? slices[(z + 1) % 3]! : null;
    for (let y = 0; y < ny; y++)
      for (let x = 0; x < nx; x++) {
        const p = y * nx + x;
        const own = sign * (here[p]! - threshold);
        if (!(own > 0)) continue;
        let crossings = 0;
        let dx = 0;
        let dy = 0;
        let dz = 0;
        for (let side = 0; side < 6; side++) {
          const step = side & 1 ? 1 : -1;
          let other: number;
          if (side < 2) {
            if (x + step < 0 || x + step >= nx) continue;
            other = here[p + step]!;
          } else if (side < 4) {
            if (y + step < 0 || y + step >= ny) continue;
            other = here[p + step * nx]!;
          } else {
            const slab = step < 0 ? below : above;
            if (slab === null) continue;
            other = slab[p]!;
          }
          const theirs = sign * (other - threshold);
          if (!(theirs <= 0)) continue;
          crossings++;
          const share = (own / (own - theirs)) * step;
          if (side < 2) dx += share;
          else if (side < 4) dy += share;
          else dz += share;
        }
        if (crossings > 0) found(x + dx / crossings, y + dy / crossings, z + dz / crossings);
      }
    if (z + 2 < nz) slices[(z + 2) % 3]!.set(read(z + 2));
  }
}

/** The threshold between two classes of a level's finite values; null when they are all the same. */
function otsuThreshold(slices: number, read: (z: number) => Float32Array): number | null {
  let min = Number.POSITIVE_INFINITY;
  let max = Number.NEGATIVE_INFINITY;
  for (let z = 0; z < slices; z++)
    for (const value of read(z)) {
      if (!Number.isFinite(value)) continue;
      if (value < min) min = value;
      if (value > max) max = value;
    }
  if (!(max > min)) return null;
  const bins = 512;
  const counts = new Float64Array(bins);
  const toBin = bins / (max - min);
  for (let z = 0; z < slices; z++)
    for (const value of read(z)) {
      if (!Number.isFinite(value)) continue;
      const bin = Math.min(bins - 1, Math.floor((value - min) * toBin));
      counts[bin] = counts[bin]! + 1;
    }
  let total = 0;
  let moment = 0;
  for (let b = 0; b < bins; b++) {
    total += counts[b]!;
    moment += b * counts[b]!;
  }
  let best = -1;
  let first = 0;
  let last = 0;
  let below = 0;
  let momentBelow = 0;
  for (let b = 0; b + 1 < bins; b++) {
    below += counts[b]!;
    momentBelow += b * counts[b]!;
    if (below === 0 || below === total) continue;
    const between = (moment * below - momentBelow * total) ** 2 / (below * (total - below));
    if (between > best * (1 + 1e-12)) {
      best = between;
      first = b;
    }
    // Empty bins between the classes part them equally well: the middle of such a gap is taken.
    if (between >= best * (1 - 1e-12)) last = b;
  }
  return min + ((first + last) / 2 + 1) / toBin;
}

/** The places of `count` numbers in a fixed scattered order, any first part of which is spread evenly over the numbers. */
function scattered(count: number): (number: number) => number {
  if (count <= 1) return (number) => number;
  // Steps of the golden section, made coprime to the count, visit each number once: number = place * step modulo count.
  let step = Math.max(1, Math.round(count * 0.6180339887498949));
  let back = inverse(step, count);
  while (back === null) back = inverse(++step, count);
  const turn = back;
  return (number) => (number * turn) % count;
}

/** The number that times `a` is 1 modulo `n`; null when they have a common divisor. @source extended Euclidean algorithm. */
function inverse(a: number, n: number): number | null {
  let [high, low] = [n, a % n];
  let [from, to] = [0, 1];
  while (low !== 0) {
    const times = Math.floor(high / low);
    [high, low] = [low, high - times * low];
    [from, to] = [to, from - times * to];
  }
  return high === 1 ? ((from % n) + n) % n : null;
}

/** @param points shape [n, 3], millimetres; its buffer is handed on. */
function frameOf(points: Float32Array<ArrayBuffer>, level: PyramidLevel, threshold: number): BinaryFrame<SurfaceHeader> {
  return {
    header: { dtype: "float32", count: points.length / 3, level: level.level, threshold },
    body: new Uint8Array(points.buffer),
  };
}
