import { BRICK_SHIFT, brickGrid } from "#shared/volume/bricks.ts";
import type { Lattice } from "#shared/volume/section/lattice.ts";

/** A part of a lattice: i0 <= i < i1 and so on. */
export interface Block {
  readonly i0: number;
  readonly i1: number;
  readonly j0: number;
  readonly j1: number;
  readonly k0: number;
  readonly k1: number;
}

/** Bricks that trilinear sampling of a block may touch. */
export interface BlockBricks {
  /** First brick of the surrounding box of bricks, order xyz, and the box's sides in bricks. */
  readonly first: readonly [number, number, number];
  readonly sides: readonly [number, number, number];
  /** Number of bricks; each `numbers[n]` counts on the level's brick grid, `places[n]` within the box. */
  readonly count: number;
  readonly numbers: Int32Array;
  readonly places: Int32Array;
  /** Every sample lies between the level's first and last voxel centre, so none needs clamping. */
  readonly allInside: boolean;
}

/** Rounding of sample places must not fall out of the bricks found: they are looked for this much farther, voxels. */
const SLACK = 1e-3;

/**
 * The bricks of a block; null when no sample lies in the level. A brick of the surrounding box counts when it meets the block
 * between the two planes along the lattice's normal as well. Bounded by the box: callers keep blocks small.
 */
export function bricksInBlock(
  size: readonly [number, number, number],
  depthShift: number,
  lattice: Lattice,
  block: Block,
): BlockBricks | null {
  const { at, u, v, w } = lattice;
  const low = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
  const high = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
  const normal = [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
  let normalLow = Number.POSITIVE_INFINITY;
  let normalHigh = Number.NEGATIVE_INFINITY;
  for (let corner = 0; corner < 8; corner++) {
    const i = corner & 1 ? block.i1 - 1 : block.i0;
    const j = corner & 2 ? block.j1 - 1 : block.j0;
    const k = corner & 4 ? block.k1 - 1 : block.k0;
    let along = 0;
    for (let axis = 0; axis < 3; axis++) {
      const p = at[axis]! + i * u[axis]! + j * v[axis]! + k * w[axis]!;
      low[axis] = Math.min(low[axis]!, p);
      high[axis] = Math.max(high[axis]!, p);
      along += p * normal[axis]!;
    }
    normalLow = Math.min(normalLow, along);
    normalHigh = Math.max(normalHigh, along);
  }

  const shifts = [BRICK_SHIFT, BRICK_SHIFT, depthShift];
  const first: [number, number, number] = [0, 0, 0];
  const sides: [number, number, number] = [0, 0, 0];
  let allInside = true;
  for (let axis = 0; axis < 3; axis++) {
    const last = size[axis]! - 1;
    if (!(high[axis]! >= -0.5 - SLACK && low[axis]! <= last + 0.5 + SLACK)) return null;
    if (low[axis]! < 0 || high[axis]! > last) allInside = false;
    const from = Math.min(Math.max(Math.floor(low[axis]! - SLACK), 0), last);
    const to = Math.min(Math.max(Math.floor(high[axis]! + SLACK) + 1, 0), last);
    // A sample on the last voxel reads the one before it, with weight 1 on the last: see sample-block.
    const start = Math.min(from, Math.max(last - 1, 0));
    first[axis] = start >> shifts[axis]!;
    sides[axis] = (to >> shifts[axis]!) - first[axis]! + 1;
  }

  const [gx, gy] = brickGrid(size, depthShift);
  const most = sides[0] * sides[1] * sides[2];
  const numbers = new Int32Array(most);
  const places = new Int32Array(most);
  let count = 0;
  // A brick serves samples from its first voxel - 1 (whose far neighbour it holds) to its last voxel + 1; clamped samples
  // lie up to half a voxel farther out.
  const half = shifts.map((shift) => (1 << shift) / 2 + 1 + SLACK);
  const reach = Math.abs(normal[0]!) * half[0]! + Math.abs(normal[1]!) * half[1]! + Math.abs(normal[2]!) * half[2]!;
  for (let z = 0; z < sides[2]; z++)
    for (let y = 0; y < sides[1]; y++)
      for (let x = 0; x < sides[0]; x++) {
        const middle =
          normal[0]! * ((first[0] + x + 0.5) * (1 << BRICK_SHIFT) - 0.5) +
          normal[1]! * ((first[1] + y + 0.5) * (1 << BRICK_SHIFT) - 0.5) +
          normal[2]! * ((first[2] + z + 0.5) * (1 << depthShift) - 0.5);
        if (middle + reach < normalLow || middle - reach > normalHigh) continue;
        numbers[count] = ((first[2] + z) * gy + first[1] + y) * gx + first[0] + x;
        places[count] = (z * sides[1] + y) * sides[0] + x;
        count++;
      }
  return { first, sides, count, numbers, places, allInside };
}
