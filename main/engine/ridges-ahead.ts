import { isTautlineError } from "#shared/errors.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import { RIDGE_TILE_SIDE } from "#shared/tracing/ridge/ridge-tiles.ts";
import { type StopSignal, stoppable } from "#shared/tracing/stop-switch.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** Most tiles of a coarse level that are made for a whole scan; larger levels are left to the pins. */
const MOST_WARM_TILES = 192;
/** Levels above the working level whose paths are shown first, the sooner needed one first. */
const WARM_LEVELS = [2, 1];

interface Tile {
  readonly context: TraceContext;
  readonly level: number;
  readonly at: readonly [number, number, number];
}

/**
 * Ridge tiles that will be wanted soon, made one at a time while nothing else is asked for: around the pointer, where the next
 * pin will be, and whole coarse levels, on which the first path to anywhere is found.
 */
export class RidgesAhead {
  #around: Tile[] = [];
  #warm: Tile[] = [];
  #pointer = "";

  get busy(): boolean {
    return this.#around.length + this.#warm.length > 0;
  }

  /** @param backwards begins at the far end, for a second worker that shares its tiles with a first. */
  warm(context: TraceContext, backwards: boolean): void {
    const tiles = WARM_LEVELS.flatMap((above) => {
      const level = context.workingLevel + above;
      const [nx, ny, nz] = tileCounts(context, level);
      if (nx * ny * nz > MOST_WARM_TILES) return [];
      return Array.from({ length: nx * ny * nz }, (_, n): Tile => {
        return { context, level, at: [n % nx, Math.floor(n / nx) % ny, Math.floor(n / (nx * ny))] };
      });
    });
    this.#warm = backwards ? tiles : tiles.reverse();
  }

  /** The tiles around a place on the working level, the nearest first; they take the place of those around an earlier one. */
  around(context: TraceContext, place: PointMm): void {
    const level = context.workingLevel;
    const grid = context.pyramid.levels[level]!;
    const index = localToIndex(grid, toLocal(context.pyramid.grid, place)).map((each) => each / RIDGE_TILE_SIDE);
    const centre = index.map(Math.floor) as [number, number, number];
    const pointer = centre.join(" ");
    if (pointer === this.#pointer) return;
    this.#pointer = pointer;
    const counts = tileCounts(context, level);
    const tiles: (Tile & { away: number })[] = [];
    for (let z = -1; z <= 1; z++)
      for (let y = -1; y <= 1; y++)
        for (let x = -1; x <= 1; x++) {
          const at = [centre[0] + x, centre[1] + y, centre[2] + z] as const;
          if (at.some((each, axis) => each < 0 || each >= counts[axis]!)) continue;
          tiles.push({ context, level, at, away: Math.hypot(...at.map((each, axis) => each + 0.5 - index[axis]!)) });
        }
    this.#around = tiles.sort((a, b) => b.away - a.away);
  }

  /** Makes the next tile; when called away meanwhile, it stays the next one. */
  makeNext(signal: StopSignal): void {
    const list = this.#around.length > 0 ? this.#around : this.#warm;
    const tile = list.pop();
    if (tile === undefined) return;
    const { context, level, at } = tile;
    try {
      stoppable(context.stop, signal, () => context.ridges.tile(level, ...at));
    } catch (error) {
      if (!isTautlineError(error, "cancelled")) throw error;
      list.push(tile);
    }
  }

  forget(): void {
    this.#around = [];
    this.#warm = [];
    this.#pointer = "";
  }
}

/** Tiles of a level per axis; none of a level that the pyramid does not have. */
function tileCounts({ pyramid }: TraceContext, level: number): [number, number, number] {
  const size = pyramid.levels[level]?.size ?? [0, 0, 0];
  return [0, 1, 2].map((axis) => Math.ceil(size[axis]! / RIDGE_TILE_SIDE)) as [number, number, number];
}
