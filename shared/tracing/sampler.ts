import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

const SIDE = 32;
/** Bricks overlap their neighbours by a voxel, so that one brick holds all eight corners of any place in it. */
const WITH_NEIGHBOUR = SIDE + 1;

/** Equally spaced places on a line, in the continuous index of a level: from + n step + offset, n = first, first + 1, ... */
export interface SampledLine {
  readonly level: number;
  readonly from: Triple;
  readonly step: Triple;
  readonly offset: Triple;
  readonly first: number;
  readonly count: number;
}

type Triple = readonly [number, number, number];

/** Grey values between voxels, by linear interpolation, from bricks kept while they are in use. */
export interface Sampler {
  readonly pyramid: VoxelPyramid;
  /** Value at a continuous index of a level; outside the scan the nearest edge value. */
  at(level: number, x: number, y: number, z: number): number;
  /** Adds the values at the places of a line to `out[at]` and on: the same numbers as by `at`, in a fraction of the time. */
  addLine(line: SampledLine, out: Float64Array, at: number): void;
}

/** A sampler over a pyramid that keeps up to `keepBricks` bricks of 33^3 values (144 KB each). */
export function createSampler(pyramid: VoxelPyramid, keepBricks = 384): Sampler {
  const bricks = new Map<number, Float32Array>();
  // The bricks of the places before, by whether their numbers are odd: lines across a corner of eight bricks find them all here.
  const recentKeys = new Float64Array(8).fill(-1);
  const recent: Float32Array[] = Array.from({ length: 8 }, () => new Float32Array(0));
  /** A brick's array: once enough are kept, that of the oldest. */
  const roomForOne = (): Float32Array<ArrayBuffer> => {
    if (bricks.size < keepBricks) return new Float32Array(WITH_NEIGHBOUR ** 3);
    const [key, brick] = bricks.entries().next().value!;
    bricks.delete(key);
    // It may be one of the places before, and filling it may fail.
    recentKeys.fill(-1);
    return brick as Float32Array<ArrayBuffer>;
  };
  const brickOf = (level: number, i: number, j: number, k: number): Float32Array => {
    const key = ((level * 4096 + k) * 4096 + j) * 4096 + i;
    const place = (i & 1) | ((j & 1) << 1) | ((k & 1) << 2);
    if (recentKeys[place] === key) return recent[place]!;
    let brick = bricks.get(key);
    if (!brick) {
      const made = roomForOne();
      pyramid.readBoxInto(level, [i * SIDE, j * SIDE, k * SIDE], [WITH_NEIGHBOUR, WITH_NEIGHBOUR, WITH_NEIGHBOUR], made);
      bricks.set(key, made);
      brick = made;
    }
    recentKeys[place] = key;
    recent[place] = brick;
    return brick;
  };
  const addLine = ({ level, from, step, offset, first, count }: SampledLine, out: Float64Array, at: number): void => {
    const { size } = pyramid.levels[level]!;
    const topX = size[0] - 1;
    const topY = size[1] - 1;
    const topZ = size[2] - 1;
    const [fromX, fromY, fromZ] = from;
    const [stepX, stepY, stepZ] = step;
    const [offsetX, offsetY, offsetZ] = offset;
    // First voxel of the brick at hand.
    let brickX = -1;
    let brickY = -1;
    let brickZ = -1;
    let brick: Float32Array = NO_BRICK;
    for (let n = 0; n < count; n++) {
      const x = fromX + (first + n) * stepX + offsetX;
      const y = fromY + (first + n) * stepY + offsetY;
      const z = fromZ + (first + n) * stepZ + offsetZ;
      const cx = Math.min(Math.max(x, 0), topX);
      const cy = Math.min(Math.max(y, 0), topY);
      const cz = Math.min(Math.max(z, 0), topZ);
      const ix = cx | 0;
      const iy = cy | 0;
      const iz = cz | 0;
      if ((ix & -SIDE) !== brickX || (iy & -SIDE) !== brickY || (iz & -SIDE) !== brickZ) {
        brick = brickOf(level, ix >> 5, iy >> 5, iz >> 5);
        brickX = ix & -SIDE;
        brickY = iy & -SIDE;
        brickZ = iz & -SIDE;
      }
      const o = ((iz & 31) * WITH_NEIGHBOUR + (iy & 31)) * WITH_NEIGHBOUR + (ix & 31);
      const wx = cx - ix;
      const wy = cy - iy;
      const wz = cz - iz;
      const a = brick[o]! + wx * (brick[o + 1]! - brick[o]!);
      const b = brick[o + ROW]! + wx * (brick[o + ROW + 1]! - brick[o + ROW]!);
      const c = brick[o + UP]! + wx * (brick[o + UP + 1]! - brick[o + UP]!);
      const d = brick[o + UP + ROW]! + wx * (brick[o + UP + ROW + 1]! - brick[o + UP + ROW]!);
      const ab = a + wy * (b - a);
      out[at + n] = out[at + n]! + (ab + wz * (c + wy * (d - c) - ab));
    }
  };
  const single = new Float64Array(1);
  const place: [number, number, number] = [0, 0, 0];
  const line = { level: 0, from: place, step: NOWHERE, offset: NOWHERE, first: 0, count: 1 };
  return {
    pyramid,
    addLine,
    at(level, x, y, z) {
      single[0] = 0;
      line.level = level;
      place[0] = x;
      place[1] = y;
      place[2] = z;
      addLine(line, single, 0);
      return single[0]!;
    },
  };
}

const NO_BRICK = new Float32Array(0);
const NOWHERE = [0, 0, 0] as const;
/** From a value of a brick to that a voxel further along y, and along z. */
const ROW = WITH_NEIGHBOUR;
const UP = WITH_NEIGHBOUR * WITH_NEIGHBOUR;

/**
 * The level to look at a string of a given radius on: the coarsest whose finest spacing is at most a sixth of the radius,
 * or the scan itself. Enough samples across to place an edge, no more than needed.
 */
export function levelForRadius(pyramid: VoxelPyramid, radiusMm: number): number {
  let level = 0;
  while (level + 1 < pyramid.levels.length && Math.min(...pyramid.levels[level + 1]!.spacing) <= radiusMm / 6) level++;
  return level;
}
