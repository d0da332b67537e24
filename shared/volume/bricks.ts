import { createStored, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Voxels along x and along y of a brick. */
export const BRICK_SIDE = 32;
/** log2 of {@link BRICK_SIDE}. */
export const BRICK_SHIFT = 5;

/**
 * log2 of a brick's voxels along z: a brick is one inner chunk of the store, but half of one (its slices are contiguous) for
 * float32, so that a brick never takes more than {@link BRICK_BYTES} and every slot of a cache has one size.
 */
export function brickDepthShift(dtype: StoredDtype): number {
  return dtype === "float32" ? 4 : 5;
}

/** Bytes of the largest brick: 32 x 32 x 32 of two bytes, or 32 x 32 x 16 of four. */
export const BRICK_BYTES = 65_536;

/** Numbers of bricks along x, y, z of a level. */
export function brickGrid(size: readonly [number, number, number], depthShift: number): [number, number, number] {
  return [Math.ceil(size[0] / BRICK_SIDE), Math.ceil(size[1] / BRICK_SIDE), Math.ceil(size[2] / (1 << depthShift))];
}

/**
 * A pyramid whose bricks can be read in place, without copying them to a box first. Voxels of a brick beyond the level's far
 * edges are undefined but finite. Not for use by two callers at once: one hold at a time.
 */
export interface BrickPyramid extends VoxelPyramid {
  /** The array all held bricks lie in; borrowed, never written to. */
  readonly voxels: StoredArray;
  /** log2 of a brick's voxels along z. */
  readonly depthShift: number;
  /** Most bricks of one hold. */
  readonly mostHeld: number;
  /**
   * Keeps bricks in place until {@link release}.
   * @param bricks brick numbers (z * gridY + y) * gridX + x on the level's {@link brickGrid}, each at most once.
   * @param count how many of them, at most `mostHeld`.
   * @param bases shape [count]; filled with the index in `voxels` of each brick's first voxel (x fastest, then y, then z).
   */
  holdInto(level: number, bricks: Int32Array, count: number, bases: Int32Array): void;
  release(): void;
}

/** A brick pyramid over any pyramid, by copying each brick; memory is `mostHeld` bricks. For scans in memory and for tests. */
export function bricksOf(pyramid: VoxelPyramid, mostHeld = 512): BrickPyramid {
  const depthShift = brickDepthShift(pyramid.dtype);
  const depth = 1 << depthShift;
  const perBrick = BRICK_SIDE * BRICK_SIDE * depth;
  const voxels = createStored(pyramid.dtype, perBrick * mostHeld);
  const box = new Float32Array(perBrick);
  return {
    grid: pyramid.grid,
    dtype: pyramid.dtype,
    levels: pyramid.levels,
    readBoxInto: (level, start, size, out) => pyramid.readBoxInto(level, start, size, out),
    voxels,
    depthShift,
    mostHeld,
    holdInto(level, bricks, count, bases) {
      const [gx, gy] = brickGrid(pyramid.levels[level]!.size, depthShift);
      for (let n = 0; n < count; n++) {
        const brick = bricks[n]!;
        const x = brick % gx;
        const y = Math.floor(brick / gx) % gy;
        const z = Math.floor(brick / (gx * gy));
        pyramid.readBoxInto(level, [x * BRICK_SIDE, y * BRICK_SIDE, z * depth], [BRICK_SIDE, BRICK_SIDE, depth], box);
        voxels.set(box, n * perBrick);
        bases[n] = n * perBrick;
      }
    },
    release() {},
  };
}
