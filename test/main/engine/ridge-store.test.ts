import { describe, expect, test } from "vitest";
import { createRidgeMemory, RidgeStore } from "#main/engine/ridge-store.ts";
import { RidgesAhead } from "#main/engine/ridges-ahead.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { createRidgeTiles, type RidgeTile } from "#shared/tracing/ridge/ridge-tiles.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";
import { seeded } from "#test/main/engine/write-store.ts";

const SIDE = 70;
const TILE_BYTES = 5 * 32 ** 3;
const random = seeded(5);
const noise = Float32Array.from({ length: SIDE ** 3 }, () => 100 * random());
const scan = memoryPyramid(plainGrid([SIDE, SIDE, SIDE], [0.05, 0.05, 0.05]), noise);
const places: readonly (readonly [number, number, number])[] = [
  [0, 0, 0],
  [1, 0, 1],
  [2, 2, 2],
];

/** True when two tiles are the same bytes (comparing element by element is slow). */
function same(a: RidgeTile, b: RidgeTile): boolean {
  const bytes = ({ buffer, byteOffset, byteLength }: Float32Array | Uint8Array) => Buffer.from(buffer, byteOffset, byteLength);
  return bytes(a.strength).equals(bytes(b.strength)) && bytes(a.scale).equals(bytes(b.scale));
}

/** The scan, and how many boxes were read from it. */
function counted(): { pyramid: VoxelPyramid; reads: () => number } {
  let reads = 0;
  const pyramid: VoxelPyramid = {
    ...scan,
    readBoxInto: (...box) => {
      reads++;
      scan.readBoxInto(...box);
    },
  };
  return { pyramid, reads: () => reads };
}

// Expected: the same tiles computed without any store.
describe("Ridge tiles shared by workers", () => {
  test("are bit for bit those of a worker alone, and the second worker computes none of them again", () => {
    const memory = createRidgeMemory(64 * TILE_BYTES, 2)!;
    const alone = createRidgeTiles(scan, "bright");
    const first = counted();
    const second = counted();
    const a = createRidgeTiles(first.pyramid, "bright", 512, new RidgeStore(memory, 0).of(3, "bright"));
    const b = createRidgeTiles(second.pyramid, "bright", 512, new RidgeStore(memory, 1).of(3, "bright"));
    for (const at of places) expect(same(a.tile(0, ...at), alone.tile(0, ...at))).toBe(true);
    for (const at of places) expect(same(b.tile(0, ...at), alone.tile(0, ...at))).toBe(true);
    expect(first.reads()).toBeGreaterThan(0);
    expect(second.reads()).toBe(0);
  });

  test("of another polarity, another opened store or fewer scales are other tiles", () => {
    const memory = createRidgeMemory(64 * TILE_BYTES, 1)!;
    const store = new RidgeStore(memory, 0);
    const bright = createRidgeTiles(scan, "bright", 512, store.of(1, "bright"));
    const dark = createRidgeTiles(scan, "dark", 512, store.of(1, "dark"));
    const other = memoryPyramid(plainGrid([SIDE, SIDE, SIDE], [0.05, 0.05, 0.05]), noise.toReversed());
    const again = createRidgeTiles(other, "bright", 512, store.of(2, "bright"));
    bright.tile(0, 1, 1, 1);
    expect(same(bright.tile(0, 1, 1, 1, 2), createRidgeTiles(scan, "bright").tile(0, 1, 1, 1, 2))).toBe(true);
    expect(same(dark.tile(0, 1, 1, 1), createRidgeTiles(scan, "dark").tile(0, 1, 1, 1))).toBe(true);
    expect(same(again.tile(0, 1, 1, 1), createRidgeTiles(other, "bright").tile(0, 1, 1, 1))).toBe(true);
  });

  test("stay right when there is room for few of them", () => {
    const store = new RidgeStore(createRidgeMemory(16 * TILE_BYTES, 1)!, 0);
    // Nothing is kept beside the store but one tile, so that slots are used again and again.
    const shared = createRidgeTiles(scan, "bright", 1, store.of(1, "bright"));
    const alone = createRidgeTiles(scan, "bright");
    for (let n = 0; n < 24; n++) {
      const at = [n % 3, Math.floor(n / 3) % 3, Math.floor(n / 9) % 2] as const;
      expect([n, same(shared.tile(0, ...at), alone.tile(0, ...at))]).toEqual([n, true]);
    }
  });

  test("are not shared where the memory is too little", () => {
    expect(createRidgeMemory(31 * TILE_BYTES, 2)).toBeNull();
  });
});

describe("Ridges made ahead", () => {
  test("are the tiles around the pointer, so that a snap and a pin there compute none; then coarse levels; then no more", () => {
    const { pyramid, reads } = counted();
    const context = createTraceContext(pyramid, "bright");
    const ahead = new RidgesAhead();
    ahead.warm(context, false);
    ahead.around(context, pointMm(1.7, 1.7, 1.7));
    let steps = 0;
    while (ahead.busy && steps < 1000) {
      ahead.makeNext({ aborted: false });
      steps++;
    }
    expect(ahead.busy).toBe(false);
    const before = reads();
    for (let n = 0; n < 27; n++) context.ridges.tile(0, n % 3, Math.floor(n / 3) % 3, Math.floor(n / 9));
    context.ridges.tile(2, 0, 0, 0);
    expect(reads()).toBe(before);
    ahead.around(context, pointMm(1.72, 1.7, 1.7));
    expect(ahead.busy).toBe(false);
  });
});
