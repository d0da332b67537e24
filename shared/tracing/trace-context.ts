import { extendedPyramid } from "#shared/tracing/extended-pyramid.ts";
import { type GreyLevels, greyLevels } from "#shared/tracing/grey-levels.ts";
import { createRidgeTiles, type RidgeTileStore, type RidgeTiles } from "#shared/tracing/ridge/ridge-tiles.ts";
import { finestSpacing } from "#shared/tracing/ridge/scales.ts";
import { createSampler, type Sampler } from "#shared/tracing/sampler.ts";
import type { StopSwitch } from "#shared/tracing/stop-switch.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** What all tracing on one scan and polarity shares. Caches only: no answer depends on what is in it. */
export interface TraceContext {
  /** The scan's pyramid, continued to the widest scale. */
  readonly pyramid: VoxelPyramid;
  readonly sign: 1 | -1;
  readonly levels: GreyLevels;
  readonly ridges: RidgeTiles;
  readonly sampler: Sampler;
  /** The level that paths are searched on. */
  readonly workingLevel: number;
  /** All work in this context stops when the signal in it says so; the pieces that are done are kept. */
  readonly stop: StopSwitch;
}

export { type StopSignal, stopIfTracingStopped } from "#shared/tracing/stop-switch.ts";

/** Finest strings have 0.1 to 0.15 mm: two to three voxels of this size see them, finer ones add only work. */
const WORKING_SPACING_MM = 0.05;

/** How much a context may keep; no answer depends on it. */
export interface TraceCaches {
  /** Ridge tiles (164 KB each). */
  readonly ridgeTiles?: number;
  /** Bricks of grey values (144 KB each). */
  readonly bricks?: number;
  /** Ridge answers of single levels shared with other contexts of this scan and polarity. */
  readonly ridgeStore?: RidgeTileStore | null;
}

/** The context of a scan and polarity; keep it as long as the scan is in use: it holds the ridge tiles already made. */
export function createTraceContext(scan: VoxelPyramid, polarity: Polarity, caches: TraceCaches = {}): TraceContext {
  const pyramid = extendedPyramid(scan);
  const stop: StopSwitch = { signal: null };
  return {
    pyramid,
    sign: polarity === "bright" ? 1 : -1,
    levels: greyLevels(pyramid, polarity),
    ridges: createRidgeTiles(pyramid, polarity, caches.ridgeTiles, caches.ridgeStore, stop),
    sampler: createSampler(pyramid, caches.bricks),
    workingLevel: workingLevel(pyramid),
    stop,
  };
}

/** The coarsest level that still shows the finest strings (spacing at most 0.05 mm), or the scan itself. */
export function workingLevel(pyramid: Pick<VoxelPyramid, "levels">): number {
  let level = 0;
  while (level + 1 < pyramid.levels.length && finestSpacing(pyramid, level + 1) <= WORKING_SPACING_MM * (1 + 1e-9)) level++;
  return level;
}
