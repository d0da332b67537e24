import { join } from "node:path";
import type { BrickCache } from "#main/engine/brick-cache.ts";
import { StoreFiles } from "#main/engine/store-files.ts";
import type { SpecimenVolume } from "#shared/api/specimen.ts";
import { BRICK_BYTES, BRICK_SIDE, type BrickPyramid, brickDepthShift, brickGrid } from "#shared/volume/bricks.ts";
import { BYTES_OF_DTYPE, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import { type PyramidLevel, pyramidLevels } from "#shared/volume/pyramid.ts";
import { STORE_NAME } from "#shared/volume/store/layout.ts";

/** A specimen's store read through a brick cache. */
export interface CachedPyramid extends BrickPyramid {
  /** Closes the store's files; the cache keeps its bricks until they are evicted. */
  close(): void;
}

/** Levels a store number is spread over in the cache's keys. */
const LEVELS_PER_STORE = 32;

/**
 * Opens a specimen's store; files are opened when first needed.
 * @param folder the specimen's folder.
 * @param store number of this store in the cache; another store, or the same folder with new content, needs another number.
 */
export function cachedPyramid(cache: BrickCache, folder: string, volume: SpecimenVolume, store: number): CachedPyramid {
  const { dtype, size, spacing, origin, direction, frame } = volume;
  const grid = { size, spacing, origin, direction, frame };
  const levels = pyramidLevels(grid);
  const files = new StoreFiles(join(folder, STORE_NAME), volume, levels);
  const depthShift = brickDepthShift(dtype);
  const perSlot = BRICK_BYTES / BYTES_OF_DTYPE[dtype];
  const voxels = viewAs(dtype, cache.memory.voxels);
  const scratch = new Int32Array(cache.mostHeld);

  const pyramid: CachedPyramid = {
    grid,
    dtype,
    levels,
    voxels,
    depthShift,
    mostHeld: cache.mostHeld,
    holdInto(level, bricks, count, bases) {
      cache.hold(store * LEVELS_PER_STORE + level, bricks, count, bases, (brick, into) => files.readBrick(level, brick, into));
      for (let n = 0; n < count; n++) bases[n] = bases[n]! * perSlot;
    },
    release: () => cache.release(),
    readBoxInto(level, start, size, out) {
      readBoxInto(pyramid, levels[level]!, start, size, out, scratch);
    },
    close: () => files.close(),
  };
  return pyramid;
}

/** A whole cache's slots as voxels of a type. */
function viewAs(dtype: StoredDtype, buffer: SharedArrayBuffer | ArrayBuffer): StoredArray {
  switch (dtype) {
    case "uint8":
      return new Uint8Array(buffer);
    case "uint16":
      return new Uint16Array(buffer);
    case "int16":
      return new Int16Array(buffer);
    case "float32":
      return new Float32Array(buffer);
  }
}

/** Offsets o of a box along an axis whose voxel, clamped to the level, lies in [from, to): the range [first, last). */
function rangeInBrick(start: number, count: number, side: number, from: number, to: number): [number, number] {
  const first = from === 0 ? 0 : Math.min(Math.max(from - start, 0), count);
  const last = to >= side ? count : Math.min(Math.max(to - start, 0), count);
  return [first, last];
}

/** Copies a box brick by brick; voxels outside the level repeat its nearest edge voxel. */
function readBoxInto(
  pyramid: BrickPyramid,
  level: PyramidLevel,
  start: readonly [number, number, number],
  size: readonly [number, number, number],
  out: Float32Array,
  bases: Int32Array,
): void {
  const { depthShift, voxels, mostHeld } = pyramid;
  const sides = [BRICK_SIDE, BRICK_SIDE, 1 << depthShift] as const;
  const [gx, gy] = brickGrid(level.size, depthShift);
  const clamp = (at: number, axis: 0 | 1 | 2) => Math.min(Math.max(at, 0), level.size[axis] - 1);
  const brickOf = (at: number, axis: 0 | 1 | 2) => Math.floor(clamp(at, axis) / sides[axis]);
  const first = [brickOf(start[0], 0), brickOf(start[1], 1), brickOf(start[2], 2)] as const;
  const last = [
    brickOf(start[0] + size[0] - 1, 0),
    brickOf(start[1] + size[1] - 1, 1),
    brickOf(start[2] + size[2] - 1, 2),
  ] as const;
  const numbers: number[] = [];
  for (let z = first[2]; z <= last[2]; z++)
    for (let y = first[1]; y <= last[1]; y++) for (let x = first[0]; x <= last[0]; x++) numbers.push((z * gy + y) * gx + x);

  for (let done = 0; done < numbers.length; done += mostHeld) {
    const batch = Int32Array.from(numbers.slice(done, done + mostHeld));
    pyramid.holdInto(level.level, batch, batch.length, bases);
    try {
      for (let n = 0; n < batch.length; n++) copyBrick(batch[n]!, bases[n]!);
    } finally {
      pyramid.release();
    }
  }

  function copyBrick(brick: number, base: number): void {
    const bx = (brick % gx) * sides[0];
    const by = (Math.floor(brick / gx) % gy) * sides[1];
    const bz = Math.floor(brick / (gx * gy)) * sides[2];
    const [x0, x1] = rangeInBrick(start[0], size[0], level.size[0], bx, bx + sides[0]);
    const [y0, y1] = rangeInBrick(start[1], size[1], level.size[1], by, by + sides[1]);
    const [z0, z1] = rangeInBrick(start[2], size[2], level.size[2], bz, bz + sides[2]);
    // Between these the box's voxels follow the brick's; before and after, the edge voxel repeats.
    const within0 = Math.min(Math.max(-start[0], x0), x1);
    const within1 = Math.max(Math.min(level.size[0] - start[0], x1), within0);
    for (let z = z0; z < z1; z++)
      for (let y = y0; y < y1; y++) {
        const row = base + ((clamp(start[2] + z, 2) - bz) * BRICK_SIDE + clamp(start[1] + y, 1) - by) * BRICK_SIDE - bx;
        const to = (z * size[1] + y) * size[0];
        const before = voxels[row + clamp(start[0] + x0, 0)]!;
        for (let x = x0; x < within0; x++) out[to + x] = before;
        const shift = row + start[0];
        for (let x = within0; x < within1; x++) out[to + x] = voxels[shift + x]!;
        const after = voxels[row + clamp(start[0] + x1 - 1, 0)]!;
        for (let x = within1; x < x1; x++) out[to + x] = after;
      }
  }
}
