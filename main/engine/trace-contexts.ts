import type { RidgeStore } from "#main/engine/ridge-store.ts";
import { RIDGE_TILE_VOXELS } from "#shared/tracing/ridge/ridge-tiles.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import { createTraceContext, type TraceContext } from "#shared/tracing/trace-context.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Strength as float32 and scale as a byte. */
const BYTES_PER_TILE = 5 * RIDGE_TILE_VOXELS;
/** A brick of the sampler, 33^3 float32. */
const BYTES_PER_BRICK = 4 * 33 ** 3;
/** Contexts a worker keeps: one specimen in both polarities, or two specimens. */
const MOST_CONTEXTS = 2;

/** The tracing contexts of a worker, by store and polarity; the one used longest ago goes first. */
export class TraceContexts {
  readonly #bytes: number;
  readonly #store: RidgeStore | null;
  readonly #kept = new Map<string, TraceContext>();

  /**
   * @param bytes most memory of all contexts together, for ridge tiles and grey values.
   * @param store tiles shared with the other workers; without it each level's answers are kept here, beside those over all.
   */
  constructor(bytes: number, store: RidgeStore | null) {
    this.#bytes = bytes;
    this.#store = store;
  }

  of(store: number, pyramid: VoxelPyramid, polarity: Polarity): TraceContext {
    const key = `${store} ${polarity}`;
    let context = this.#kept.get(key);
    if (context) this.#kept.delete(key);
    else {
      const share = this.#bytes / MOST_CONTEXTS;
      const tiles = Math.max(32, Math.floor((0.7 * share) / BYTES_PER_TILE));
      const bricks = Math.max(32, Math.floor((0.3 * share) / BYTES_PER_BRICK));
      context = createTraceContext(pyramid, polarity, {
        ridgeTiles: tiles,
        bricks,
        ridgeStore: this.#store?.of(store, polarity) ?? null,
      });
    }
    this.#kept.set(key, context);
    if (this.#kept.size > MOST_CONTEXTS) this.#kept.delete(this.#kept.keys().next().value!);
    return context;
  }

  forget(store: number): void {
    for (const key of this.#kept.keys()) if (key.startsWith(`${store} `)) this.#kept.delete(key);
  }
}
