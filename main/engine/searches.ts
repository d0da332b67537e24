import { type ExplainingLine, findStretches } from "#shared/tracing/overlooked/find-stretches.ts";
import { type FoundPoints, searchBlock } from "#shared/tracing/overlooked/search-block.ts";
import type { OverlookedStretch } from "#shared/tracing/overlooked/stretch.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import { createTraceContext, type TraceContext } from "#shared/tracing/trace-context.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** A search keeps to itself, so that the tiles and grey values that guides need stay: 20 MB a worker. */
const RIDGE_TILES = 40;
const BRICKS = 48;

/** What a worker does for the search of a scan: its own context, let go of when the search ends. */
export class Searches {
  #key = "";
  #context: TraceContext | null = null;

  block(
    store: number,
    pyramid: VoxelPyramid,
    polarity: Polarity,
    block: number,
    signal: { readonly aborted: boolean },
  ): FoundPoints {
    return searchBlock(this.#of(store, pyramid, polarity), block, signal);
  }

  stretches(
    store: number,
    pyramid: VoxelPyramid,
    polarity: Polarity,
    found: readonly FoundPoints[],
    lines: readonly ExplainingLine[],
    minimumMm: number,
  ): OverlookedStretch[] {
    return findStretches(this.#of(store, pyramid, polarity), found, lines, { minimumMm });
  }

  /** The level that a scan is searched on, of the pyramid as it is searched. */
  context(store: number, pyramid: VoxelPyramid, polarity: Polarity): TraceContext {
    return this.#of(store, pyramid, polarity);
  }

  rest(): void {
    this.#context = null;
    this.#key = "";
  }

  #of(store: number, pyramid: VoxelPyramid, polarity: Polarity): TraceContext {
    const key = `${store} ${polarity}`;
    if (this.#context === null || this.#key !== key) {
      this.#context = null;
      this.#context = createTraceContext(pyramid, polarity, { ridgeTiles: RIDGE_TILES, bricks: BRICKS });
      this.#key = key;
    }
    return this.#context;
  }
}
