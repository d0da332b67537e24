import { BrickCache, type CacheMemory, createCacheMemory, LEAST_HELD } from "#main/engine/brick-cache.ts";
import { RIDGE_TILE_VOXELS, type RidgeTileStore } from "#shared/tracing/ridge/ridge-tiles.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";

/** Strength as float32, then the scale as a byte. */
const SLOT_BYTES = 5 * RIDGE_TILE_VOXELS;

/** Memory for the ridge tiles that all workers share; null when `bytes` is too little for sharing. */
export function createRidgeMemory(bytes: number, workers: number): CacheMemory | null {
  return bytes >= LEAST_HELD * workers * SLOT_BYTES ? createCacheMemory(bytes, workers, true, SLOT_BYTES) : null;
}

/**
 * One worker's view of the ridge tiles shared by all: a tile is computed by the worker that needs it first, straight into its
 * slot, while others that need the same one wait for it. Nobody waits in a circle: computing a tile needs no other tile.
 */
export class RidgeStore {
  readonly #cache: BrickCache;
  readonly #number = new Int32Array(1);
  readonly #slot = new Int32Array(1);

  constructor(memory: CacheMemory, worker: number) {
    this.#cache = new BrickCache(memory, worker);
  }

  /** The tiles of one scan and polarity. @param store number of the opened store; another one never shares its tiles. */
  of(store: number, polarity: Polarity): RidgeTileStore {
    const cache = this.#cache;
    const scan = 2 * store + (polarity === "bright" ? 0 : 1);
    return {
      tileInto: ({ working, count, level, number }, strength, scale, compute) => {
        this.#number[0] = number;
        const space = ((scan * 16 + working) * 32 + count) * 16 + level;
        cache.hold(space, this.#number, 1, this.#slot, (_, { buffer, byteOffset }) => {
          compute(
            new Float32Array(buffer, byteOffset, RIDGE_TILE_VOXELS),
            new Uint8Array(buffer, byteOffset + 4 * RIDGE_TILE_VOXELS, RIDGE_TILE_VOXELS),
          );
        });
        const from = this.#slot[0]! * SLOT_BYTES;
        const { voxels } = cache.memory;
        strength.set(new Float32Array(voxels, from, RIDGE_TILE_VOXELS));
        scale.set(new Uint8Array(voxels, from + 4 * RIDGE_TILE_VOXELS, RIDGE_TILE_VOXELS));
        cache.release();
      },
    };
  }
}
