import { type SizeXyz, sizeXyz } from "#shared/geometry/types.ts";
import type { StoredArray } from "#shared/volume/dtype.ts";

/** Which axes are halved, order xyz. */
export type HalvedAxes = readonly [boolean, boolean, boolean];

/** Size of a level after halving the given axes: sides rounded up. */
export function halvedSize(size: readonly [number, number, number], halve: HalvedAxes): SizeXyz {
  const side = (axis: 0 | 1 | 2) => (halve[axis] ? Math.ceil(size[axis] / 2) : size[axis]);
  return sizeXyz(side(0), side(1), side(2));
}

/**
 * Fills `out` with the next coarser level: each voxel is the mean of its existing children (1, 2, 4 or 8 of them).
 * Integers are rounded half up (towards +infinity), float32 is only stored. The one rule of every pyramid, on disk and in
 * memory. Also serves a slab of whole rows and slices as long as it starts at an even index of each halved axis.
 * @param source shape [nz, ny, nx], x fastest; borrowed.
 * @param size nx, ny, nz of `source`.
 * @param out shape of {@link halvedSize}, same dtype as `source`; overwritten. Children are summed in float64 in the order z, y, x.
 * @throws RangeError when an array is smaller than its size says (a fault of the caller).
 * @source own derivation.
 */
export function downsampleInto(
  source: StoredArray,
  size: readonly [number, number, number],
  halve: HalvedAxes,
  out: StoredArray,
): void {
  const [nx, ny, nz] = size;
  const [mx, my, mz] = halvedSize(size, halve);
  if (source.length < nx * ny * nz) throw new RangeError(`${nx * ny * nz} source voxels expected, found ${source.length}`);
  if (out.length < mx * my * mz) throw new RangeError(`${mx * my * mz} output voxels expected, found ${out.length}`);
  const round = !(out instanceof Float32Array);
  const stepY = halve[1] ? 2 : 1;
  const stepZ = halve[2] ? 2 : 1;
  const row = new Float64Array(mx);
  const pairs = halve[0] ? nx >> 1 : 0;
  for (let z = 0; z < mz; z++) {
    const z1 = Math.min((z + 1) * stepZ, nz);
    for (let y = 0; y < my; y++) {
      const y1 = Math.min((y + 1) * stepY, ny);
      if (halve[0] && z1 - z * stepZ === 2 && y1 - y * stepY === 2 && (nx & 1) === 0) {
        meansOfEight(source, (z * 2 * ny + y * 2) * nx, nx, nx * ny, out, (z * my + y) * mx, mx, round);
        continue;
      }
      row.fill(0);
      let rows = 0;
      for (let cz = z * stepZ; cz < z1; cz++) {
        for (let cy = y * stepY; cy < y1; cy++) {
          let at = (cz * ny + cy) * nx;
          rows++;
          if (halve[0]) {
            for (let x = 0; x < pairs; x++, at += 2) row[x] = row[x]! + source[at]! + source[at + 1]!;
            if (nx & 1) row[pairs] = row[pairs]! + source[at]!;
          } else for (let x = 0; x < mx; x++) row[x] = row[x]! + source[at + x]!;
        }
      }
      const to = (z * my + y) * mx;
      for (let x = 0; x < mx; x++) {
        const mean = row[x]! / (x < pairs ? 2 * rows : rows);
        out[to + x] = round ? Math.floor(mean + 0.5) : mean;
      }
    }
  }
}

/** One row of means where all eight children exist: nearly all of a scan, so it goes without the general sums. Same order of sums. */
function meansOfEight(
  source: StoredArray,
  from: number,
  pitch: number,
  plane: number,
  out: StoredArray,
  to: number,
  count: number,
  round: boolean,
): void {
  for (let x = 0, a = from; x < count; x++, a += 2) {
    const b = a + pitch;
    const c = a + plane;
    const d = c + pitch;
    const front = source[a]! + source[a + 1]! + source[b]! + source[b + 1]!;
    const sum = front + source[c]! + source[c + 1]! + source[d]! + source[d + 1]!;
    // Eight integers of 16 bits fit 32 bits, and the shift rounds down: half up in all.
    out[to + x] = round ? (sum + 4) >> 3 : sum / 8;
  }
}
