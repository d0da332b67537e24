import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

const SIDE = 32;
/** Bricks overlap their neighbours by a voxel, so that one brick holds all eight corners of any place in it. */
const WITH_NEIGHBOUR = SIDE + 1;

/** Grey values between voxels, by linear interpolation, from bricks kept while they are in use. */
export interface Sampler {
  readonly pyramid: VoxelPyramid;
  /** Value at a continuous index of a level; outside the scan the nearest edge value. */
  at(level: number, x: number, y: number, z: number): number;
}

/** A sampler over a pyramid that keeps up to `keepBricks` bricks of 33^3 values (144 KB each). */
export function createSampler(pyramid: VoxelPyramid, keepBricks = 384): Sampler {
  const bricks = new Map<number, Float32Array>();
  // The brick of the place before: most places lie in the same one.
  let lastLevel = -1;
  let lastI = -1;
  let lastJ = -1;
  let lastK = -1;
  let last = new Float32Array(0);
  // Highest index of the level of the place before, along x, y, z.
  let topX = 0;
  let topY = 0;
  let topZ = 0;
  /** A brick's array: once enough are kept, that of the oldest. */
  const roomForOne = (): Float32Array<ArrayBuffer> => {
    if (bricks.size < keepBricks) return new Float32Array(WITH_NEIGHBOUR ** 3);
    const [key, brick] = bricks.entries().next().value!;
    bricks.delete(key);
    // It may be that of the place before, and filling it may fail.
    lastI = -1;
    return brick as Float32Array<ArrayBuffer>;
  };
  const brickOf = (level: number, i: number, j: number, k: number): Float32Array<ArrayBuffer> => {
    const key = ((level * 4096 + k) * 4096 + j) * 4096 + i;
    let brick = bricks.get(key) as Float32Array<ArrayBuffer> | undefined;
    if (!brick) {
      brick = roomForOne();
      pyramid.readBoxInto(level, [i * SIDE, j * SIDE, k * SIDE], [WITH_NEIGHBOUR, WITH_NEIGHBOUR, WITH_NEIGHBOUR], brick);
      bricks.set(key, brick);
    }
    return brick;
  };
  return {
    pyramid,
    at(level, x, y, z) {
      if (level !== lastLevel) {
        const { size } = pyramid.levels[level]!;
        topX = size[0] - 1;
        topY = size[1] - 1;
        topZ = size[2] - 1;
        lastLevel = level;
        lastI = -1;
      }
      const cx = Math.min(Math.max(x, 0), topX);
      const cy = Math.min(Math.max(y, 0), topY);
      const cz = Math.min(Math.max(z, 0), topZ);
      const ix = Math.floor(cx);
      const iy = Math.floor(cy);
      const iz = Math.floor(cz);
      const i = ix >> 5;
      const j = iy >> 5;
      const k = iz >> 5;
      if (i !== lastI || j !== lastJ || k !== lastK) {
        last = brickOf(level, i, j, k);
        lastI = i;
        lastJ = j;
        lastK = k;
      }
      const brick = last;
      const o = ((iz & 31) * WITH_NEIGHBOUR + (iy & 31)) * WITH_NEIGHBOUR + (ix & 31);
      const wx = cx - ix;
      const wy = cy - iy;
      const wz = cz - iz;
      const up = WITH_NEIGHBOUR * WITH_NEIGHBOUR;
      const a = brick[o]! + wx * (brick[o + 1]! - brick[o]!);
      const b = brick[o + WITH_NEIGHBOUR]! + wx * (brick[o + WITH_NEIGHBOUR + 1]! - brick[o + WITH_NEIGHBOUR]!);
      const c = brick[o + up]! + wx * (brick[o + up + 1]! - brick[o + up]!);
      const d = brick[o + up + WITH_NEIGHBOUR]! + wx * (brick[o + up + WITH_NEIGHBOUR + 1]! - brick[o + up + WITH_NEIGHBOUR]!);
      const ab = a + wy * (b - a);
      return ab + wz * (c + wy * (d - c) - ab);
    },
  };
}

/**
 * The level to look at a string of a given radius on: the coarsest whose finest spacing is at most a sixth of the radius,
 * or the scan itself. Enough samples across to place an edge, no more than needed.
 */
export function levelForRadius(pyramid: VoxelPyramid, radiusMm: number): number {
  let level = 0;
  while (level + 1 < pyramid.levels.length && Math.min(...pyramid.levels[level + 1]!.spacing) <= radiusMm / 6) level++;
  return level;
}
