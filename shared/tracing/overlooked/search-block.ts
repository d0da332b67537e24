import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { indexToLocal } from "#shared/tracing/local-frame.ts";
import { RIDGE_TILE_SIDE } from "#shared/tracing/ridge/ridge-tiles.ts";
import { finestSpacing } from "#shared/tracing/ridge/scales.ts";
import { brightShare, isRimOrMuscle, STRING_SHARE } from "#shared/tracing/strings/bright-share.ts";
import { leastStrength } from "#shared/tracing/strings/least-strength.ts";
import { type RidgePoints, ridgePointsOfTile } from "#shared/tracing/strings/ridge-points.ts";
import type { StopSignal, TraceContext } from "#shared/tracing/trace-context.ts";
import { mmToIndex } from "#shared/volume/grid.ts";
import type { PyramidLevel, VoxelPyramid } from "#shared/volume/pyramid.ts";
import { stopIfAborted } from "#shared/volume/section/sample-lattice.ts";

/** Raised when a search finds other points than before, so that what an older version found is searched anew. */
export const SEARCH_VERSION = 1;

/** Side of a block, ridge tiles: a fraction of a second of work. */
const BLOCK_TILES = 2;
/** Strings of 0.15 mm are two voxels of this size across: they are seen, at an eighth of the work of the next finer level. */
const SEARCH_SPACING_MM = 0.08;
/** The middle of a string stands out at least this many times its ridge answer (a solid cylinder 2.7 times). */
const EXCESS_PER_STRENGTH = 1.5;
/** The thinnest string that is looked for, as a share of a voxel's radius. */
const THINNEST_VOXELS = 0.75;
/** Voxels around a block that its answers depend on. */
const HALO = 6;

/** Points on strings that a search found. */
export interface FoundPoints extends RidgePoints {
  /** shape [n]: see `brightShare`. */
  readonly shares: Float32Array;
}

/** The level that a scan is searched on: the coarsest with voxels of at most 0.08 mm, or the scan itself. */
export function searchLevel(pyramid: Pick<VoxelPyramid, "levels">): number {
  let level = 0;
  while (level + 1 < pyramid.levels.length && finestSpacing(pyramid, level + 1) <= SEARCH_SPACING_MM * (1 + 1e-9)) level++;
  return level;
}

/** Blocks of a level along x, y and z; they are numbered x fastest. */
export function blockCounts({ size }: Pick<PyramidLevel, "size">): [number, number, number] {
  const side = BLOCK_TILES * RIDGE_TILE_SIDE;
  return [0, 1, 2].map((axis) => Math.ceil(size[axis]! / side)) as [number, number, number];
}

/** First voxel and voxels of a block, clipped to the level. */
export function blockBox(
  level: Pick<PyramidLevel, "size">,
  block: number,
): { start: [number, number, number]; size: [number, number, number] } {
  const [nx, ny] = blockCounts(level);
  const side = BLOCK_TILES * RIDGE_TILE_SIDE;
  const start: [number, number, number] = [
    (block % nx) * side,
    (Math.floor(block / nx) % ny) * side,
    Math.floor(block / (nx * ny)) * side,
  ];
  const size = start.map((from, axis) => Math.min(side, level.size[axis]! - from)) as [number, number, number];
  return { start, size };
}

/** Numbers of the blocks that a box touches, ascending. @param from, to opposite corners, millimetres in the specimen's frame. */
export function blocksInRegion(level: PyramidLevel, from: Vec3, to: Vec3): number[] {
  const counts = blockCounts(level);
  const side = BLOCK_TILES * RIDGE_TILE_SIDE;
  const corners = Array.from(
    { length: 8 },
    (_, n): Vec3 => [n & 1 ? to[0] : from[0], n & 2 ? to[1] : from[1], n & 4 ? to[2] : from[2]],
  );
  const places = corners.map((corner) => mmToIndex(level, pointMm(...corner)));
  const range = counts.map((count, axis) => {
    const along = places.map((place) => Math.min(Math.max(Math.floor((place[axis]! + 0.5) / side), 0), count - 1));
    return [Math.min(...along), Math.max(...along)] as const;
  });
  const out: number[] = [];
  for (let k = range[2]![0]; k <= range[2]![1]; k++)
    for (let j = range[1]![0]; j <= range[1]![1]; j++)
      for (let i = range[0]![0]; i <= range[0]![1]; i++) out.push((k * counts[1] + j) * counts[0] + i);
  return out;
}

/**
 * The string points of one block of the search level, in the order of its tiles: crest points of the ridge measure that are not in
 * sheets or muscle. Blocks where nothing is as bright as a string are skipped. A function of scan and polarity alone;
 * blocks have no seams.
 * @throws TautlineError `cancelled` when the signal is aborted; looked at between tiles.
 */
export function searchBlock(context: TraceContext, block: number, signal: StopSignal = { aborted: false }): FoundPoints {
  const level = searchLevel(context.pyramid);
  const grid = context.pyramid.levels[level]!;
  const least = leastStrength(context, level);
  const box = blockBox(grid, block);
  const voxels: number[] = [];
  const strengths: number[] = [];
  const radii: number[] = [];
  const shares: number[] = [];
  const faintest = EXCESS_PER_STRENGTH * least(THINNEST_VOXELS * finestSpacing(context.pyramid, level));
  if (brightest(context, level, box) >= faintest) {
    const [i0, j0, k0] = box.start.map((from) => from / RIDGE_TILE_SIDE) as [number, number, number];
    const tiles = box.size.map((side) => Math.ceil(side / RIDGE_TILE_SIDE));
    for (let k = 0; k < tiles[2]!; k++)
      for (let j = 0; j < tiles[1]!; j++)
        for (let i = 0; i < tiles[0]!; i++) {
          stopIfAborted(signal);
          const found = ridgePointsOfTile(context, level, i0 + i, j0 + j, k0 + k, least);
          for (let n = 0; n < found.strengths.length; n++) {
            const voxel = [found.voxels[3 * n]!, found.voxels[3 * n + 1]!, found.voxels[3 * n + 2]!] as const;
            const radius = found.radii[n]!;
            const at = indexToLocal(grid, voxel);
            const share = brightShare(context, at, radius);
            if (share > STRING_SHARE || isRimOrMuscle(context, at, radius, share)) continue;
            voxels.push(...voxel);
            strengths.push(found.strengths[n]!);
            radii.push(found.radii[n]!);
            shares.push(share);
          }
        }
  }
  return {
    voxels: Int32Array.from(voxels),
    strengths: Float32Array.from(strengths),
    radii: Float32Array.from(radii),
    shares: Float32Array.from(shares),
  };
}

/** Greatest excess over the background in a block and its surroundings. */
function brightest(
  { pyramid, sign, levels }: TraceContext,
  level: number,
  { start, size }: { readonly start: readonly number[]; readonly size: readonly number[] },
): number {
  const wide = size.map((side) => side + 2 * HALO) as [number, number, number];
  const values = new Float32Array(wide[0] * wide[1] * wide[2]);
  pyramid.readBoxInto(level, [start[0]! - HALO, start[1]! - HALO, start[2]! - HALO], wide, values);
  let most = Number.NEGATIVE_INFINITY;
  for (let v = 0; v < values.length; v++) {
    const excess = sign * (values[v]! - levels.background);
    if (excess > most) most = excess;
  }
  return most;
}
