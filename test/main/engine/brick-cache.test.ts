import { describe, expect, test } from "vitest";
import { BrickCache, createCacheMemory } from "#main/engine/brick-cache.ts";
import { isTautlineError } from "#shared/errors.ts";
import { seeded } from "#test/main/engine/write-store.ts";

const SLOT = 65_536;

/** Loads a brick whose bytes tell its number; counts the loads. */
function loader(loads: number[] = []) {
  return (brick: number, into: Uint8Array) => {
    loads.push(brick);
    new Int32Array(into.buffer, into.byteOffset, into.length / 4).fill(brick * 7 + 1);
  };
}

function contentOf(cache: BrickCache, slot: number): number {
  const words = new Int32Array(cache.memory.voxels, slot * SLOT, SLOT / 4);
  return words[0] === words[SLOT / 4 - 1] ? (words[0]! - 1) / 7 : Number.NaN;
}

function hold(cache: BrickCache, bricks: readonly number[], load = loader(), space = 0): number[] {
  const slots = new Int32Array(bricks.length);
  cache.hold(space, Int32Array.from(bricks), bricks.length, slots, load);
  return [...slots];
}

const sequence = (from: number, count: number) => Array.from({ length: count }, (_, n) => from + n);

describe("The brick cache", () => {
  test("loads a brick once and gives it again without loading", () => {
    const cache = new BrickCache(createCacheMemory(32 * SLOT, 1), 0);
    const loads: number[] = [];
    for (let round = 0; round < 3; round++) {
      const slots = hold(cache, [5, 3, 9], loader(loads));
      expect(slots.map((slot) => contentOf(cache, slot))).toEqual([5, 3, 9]);
      cache.release();
    }
    expect(loads).toEqual([5, 3, 9]);
    expect(cache.figures()).toMatchObject({ loads: 3, hits: 6, evictions: 0, used: 3, pinned: 0 });
  });

  test("keeps bricks of two stores and levels apart though their numbers are the same", () => {
    const cache = new BrickCache(createCacheMemory(32 * SLOT, 1), 0);
    const [a] = hold(cache, [4], loader(), 1);
    const [b] = hold(cache, [4], loader(), 2);
    expect(a).not.toBe(b);
  });

  test("never evicts what is held, by whichever worker, and evicts the rest", () => {
    const memory = createCacheMemory(64 * SLOT, 2);
    const a = new BrickCache(memory, 0);
    const b = new BrickCache(memory, 1);
    const kept = hold(a, sequence(0, 20));
    for (let round = 0; round < 30; round++) {
      hold(b, sequence(100 + 25 * round, 25));
      b.release();
      expect(kept.map((slot) => contentOf(a, slot))).toEqual(sequence(0, 20));
    }
    expect(a.figures().evictions).toBeGreaterThan(500);
    expect(a.figures().used).toBeLessThanOrEqual(64);
    a.release();
    hold(b, sequence(5000, 32));
    b.release();
    hold(b, sequence(6000, 32));
    b.release();
    const loads: number[] = [];
    hold(a, sequence(0, 20), loader(loads));
    expect(loads.length).toBe(20);
  });

  test("refuses more than its part, so that all workers together never pin every slot", () => {
    const cache = new BrickCache(createCacheMemory(64 * SLOT, 2), 0);
    expect(cache.mostHeld).toBe(32);
    expect(() => hold(cache, sequence(0, 33))).toThrow(RangeError);
    expect(() => createCacheMemory(10 * SLOT, 2)).toThrow(/at least/);
  });

  test("random holds of three workers always find the right bytes (seed 11), against a plain count of loads", () => {
    const memory = createCacheMemory(96 * SLOT, 3);
    const caches = [0, 1, 2].map((worker) => new BrickCache(memory, worker));
    const random = seeded(11);
    let loads = 0;
    let asked = 0;
    for (let step = 0; step < 3000; step++) {
      const cache = caches[Math.floor(random() * 3)]!;
      cache.release();
      const bricks = [...new Set(Array.from({ length: 1 + Math.floor(random() * 30) }, () => Math.floor(random() * 300)))];
      const seen: number[] = [];
      const slots = hold(cache, bricks, loader(seen), Math.floor(step / 1000));
      loads += seen.length;
      asked += bricks.length;
      expect(new Set(slots).size).toBe(slots.length);
      expect(slots.map((slot) => contentOf(cache, slot))).toEqual(bricks);
    }
    for (const cache of caches) cache.release();
    const figures = caches[0]!.figures();
    expect(figures).toMatchObject({ loads, hits: asked - loads, pinned: 0 });
    expect(figures.used).toBe(loads - figures.evictions);
  });

  test("a load that fails leaves nothing behind: no pin, no brick; the next one loads again", () => {
    const cache = new BrickCache(createCacheMemory(32 * SLOT, 1), 0);
    const failing = (brick: number, into: Uint8Array) => {
      if (brick === 2) throw new Error("cannot be read");
      loader()(brick, into);
    };
    expect(() => hold(cache, [1, 2, 3], failing)).toThrow("cannot be read");
    expect(cache.figures()).toMatchObject({ used: 1, pinned: 0 });
    const loads: number[] = [];
    expect(hold(cache, [1, 2, 3], loader(loads)).map((slot) => contentOf(cache, slot))).toEqual([1, 2, 3]);
    expect(loads).toEqual([2, 3]);
  });

  test("a worker that comes after a dead one of its number frees its pins, its unfinished loads and its lock", () => {
    const memory = createCacheMemory(64 * SLOT, 2);
    const dying = new BrickCache(memory, 0);
    hold(dying, [1, 2, 3]);
    const [slot] = hold(dying, [4]);
    // Where a thread leaves these words when it ends inside a load, or inside a change of the directory.
    const words = new Int32Array(memory.control);
    const states = 8 + 2 * 64;
    expect(words[states + slot!]).toBe(2);
    words[states + slot!] = 1;
    words[0] = 1;
    expect(dying.figures().pinned).toBe(4);
    const next = new BrickCache(memory, 0);
    const other = new BrickCache(memory, 1);
    expect(next.figures().pinned).toBe(0);
    const loads: number[] = [];
    hold(other, [1, 2, 3, 4], loader(loads));
    expect(loads).toEqual([4]);
  });

  test("says how many bytes it needs when the limit is too small", () => {
    let error: unknown;
    try {
      createCacheMemory(1000, 2);
    } catch (thrown) {
      error = thrown;
    }
    expect(isTautlineError(error, "misuse")).toBe(true);
  });
});
