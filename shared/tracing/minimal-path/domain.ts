import { type CostTiles, LEAST_COST, MOST_COST } from "#shared/tracing/cost.ts";
import type { FrontDomain } from "#shared/tracing/minimal-path/front.ts";
import { createFrontMemory } from "#shared/tracing/minimal-path/front-memory.ts";
import { RIDGE_TILE_SIDE } from "#shared/tracing/ridge/ridge-tiles.ts";
import type { PyramidLevel, VoxelPyramid } from "#shared/volume/pyramid.ts";
import { type AbortSignalLike, stopIfAborted } from "#shared/volume/section/sample-lattice.ts";

/** A box of whole tiles of one level, as a domain for fronts. */
export interface TileDomain extends FrontDomain {
  readonly level: PyramidLevel;
  /** First voxel of the box on the level's grid, a multiple of 32 on each axis. */
  readonly start: readonly [number, number, number];
}

/** Voxels of the box of whole tiles that holds the voxels from `low` to `high`, both included, clipped to the level. */
export function tileBox(
  level: PyramidLevel,
  low: readonly [number, number, number],
  high: readonly [number, number, number],
): { start: [number, number, number]; size: [number, number, number] } {
  const n = RIDGE_TILE_SIDE;
  const start: [number, number, number] = [0, 0, 0];
  const size: [number, number, number] = [0, 0, 0];
  for (const axis of [0, 1, 2] as const) {
    const top = level.size[axis] - 1;
    const first = Math.floor(Math.min(Math.max(low[axis], 0), top) / n);
    const last = Math.floor(Math.min(Math.max(high[axis], 0), top) / n);
    start[axis] = first * n;
    size[axis] = (last - first + 1) * n;
  }
  return { start, size };
}

/**
 * A domain over a box of whole tiles whose costs are computed tile by tile when a front arrives.
 * Memory: 4 bytes a voxel, of which only the visited tiles are ever touched.
 * @param blocked voxel numbers of the box that no front may enter (strings already traced).
 * @param signal looked at before each tile, which can take many milliseconds.
 * Fronts that grow in it throw cancelled when the signal says so.
 */
export function createTileDomain(
  pyramid: VoxelPyramid,
  costs: CostTiles,
  box: { readonly start: readonly [number, number, number]; readonly size: readonly [number, number, number] },
  blocked: Iterable<number> = [],
  signal?: AbortSignalLike,
): TileDomain {
  const n = RIDGE_TILE_SIDE;
  const level = pyramid.levels[costs.level]!;
  const { start, size } = box;
  const [nx, ny] = size;
  const tile = new Float32Array(n * n * n);
  const fill = (voxel: number) => {
    stopIfAborted(signal);
    const x = voxel % nx;
    const y = Math.floor(voxel / nx) % ny;
    const z = Math.floor(voxel / (nx * ny));
    const i = Math.floor(x / n);
    const j = Math.floor(y / n);
    const k = Math.floor(z / n);
    costs.tileInto(start[0] / n + i, start[1] / n + j, start[2] / n + k, tile);
    const { cost } = memory;
    let from = 0;
    for (let dz = 0; dz < n; dz++)
      for (let dy = 0; dy < n; dy++) {
        const to = ((k * n + dz) * ny + j * n + dy) * nx + i * n;
        for (let dx = 0; dx < n; dx++, from++) if (cost[to + dx] === 0) cost[to + dx] = tile[from]!;
      }
  };
  const memory = createFrontMemory({ size, spacing: level.spacing, fill });
  const { cost } = memory;
  for (const voxel of blocked) cost[voxel] = Number.POSITIVE_INFINITY;
  return {
    level,
    start,
    size,
    spacing: level.spacing,
    leastCost: LEAST_COST,
    mostCost: MOST_COST,
    memory,
    get cost() {
      return memory.cost;
    },
  };
}

/** Number in the box of the voxel nearest to a continuous index of the level; places outside the box go to its nearest voxel. */
export function voxelOfIndex(domain: TileDomain, index: readonly [number, number, number]): number {
  const at = (axis: 0 | 1 | 2) => {
    const inLevel = Math.min(Math.max(Math.round(index[axis]), 0), domain.level.size[axis] - 1);
    return Math.min(Math.max(inLevel - domain.start[axis], 0), domain.size[axis] - 1);
  };
  return (at(2) * domain.size[1] + at(1)) * domain.size[0] + at(0);
}

/** Index on the level's grid of a voxel of the box. */
export function indexOfVoxel(domain: TileDomain, voxel: number): [number, number, number] {
  const [nx, ny] = domain.size;
  const x = voxel % nx;
  const y = Math.floor(voxel / nx) % ny;
  const z = Math.floor(voxel / (nx * ny));
  return [x + domain.start[0], y + domain.start[1], z + domain.start[2]];
}
