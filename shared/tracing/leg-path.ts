import type { Vec3 } from "#shared/geometry/types.ts";
import { type CostTiles, costScale, createCostTiles } from "#shared/tracing/cost.ts";
import { indexToLocal, localToIndex } from "#shared/tracing/local-frame.ts";
import { createTileDomain, indexOfVoxel, tileBox, voxelOfIndex } from "#shared/tracing/minimal-path/domain.ts";
import { meetFronts } from "#shared/tracing/minimal-path/meet.ts";
import { ridgeNearPin } from "#shared/tracing/pin-ridge.ts";
import { arcLengths } from "#shared/tracing/polyline.ts";
import type { StopSignal, TraceContext } from "#shared/tracing/trace-context.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Most voxels of a box; its arrays are touched only where the fronts go. */
const MOST_BOX_VOXELS = 24 * 2 ** 20;
/**
 * Most voxels that the two fronts of one leg settle: a string takes well below a million, the rest is a flood where there is
 * none. It bounds a solve's memory as well: some 70 bytes a voxel become resident, with the pages that are touched in part.
 */
const MOST_SETTLED = 1_500_000;
/** Distance of the waypoints through which a path found on a coarser level is followed on the finer one. */
const WINDOW_MM = 2.5;

/** What the pins say about the string between them. */
export interface ExpectedString {
  /** How strongly the string answers, grey values. */
  readonly ridge: number;
  /** The largest radius it may have, millimetres. */
  readonly widestRadiusMm: number;
}

/** Places along a path, shape [n, 3], millimetres along the voxel axes, voxel centres; null when no path was found. */
export type LegPath = Float64Array | null;

/**
 * The cheapest path between two places on a level. The box comes from the two places alone and grows while the path leans on
 * a side of it; what is too large for one box is first followed on the next coarser level and then in windows.
 */
export function legPath(
  context: TraceContext,
  level: number,
  from: Vec3,
  to: Vec3,
  expected: ExpectedString,
  signal: StopSignal,
): LegPath {
  const { pyramid } = context;
  const grid = pyramid.levels[level]!;
  const a = localToIndex(grid, from);
  const b = localToIndex(grid, to);
  const apart = Math.hypot(to[0] - from[0], to[1] - from[1], to[2] - from[2]);
  const costs = createCostTiles(
    pyramid,
    context.ridges,
    level,
    costScale(context.levels, context.sign, expected.ridge, expected.widestRadiusMm),
  );
  for (let marginMm = Math.max(1, 0.3 * apart); ; marginMm *= 2) {
    const low = ([0, 1, 2] as const).map((k) => Math.min(a[k], b[k]) - marginMm / grid.spacing[k]) as [number, number, number];
    const high = ([0, 1, 2] as const).map((k) => Math.max(a[k], b[k]) + marginMm / grid.spacing[k]) as [number, number, number];
    const found = pathInBox(pyramid, costs, tileBox(grid, low, high), a, b, signal);
    if (found === "too-large") break;
    if (found === null) return null;
    if (!found.leans) return found.points;
  }
  if (level + 1 >= pyramid.levels.length) return null;
  const coarse = legPath(context, level + 1, from, to, expected, signal);
  return coarse && inWindows(context, level, from, to, coarse, expected, signal);
}

/**
 * The cheapest path in a box of a level; null when there is none. In a function of its own, so that the box's memory is let go of
 * before anything else is searched.
 */
function pathInBox(
  pyramid: VoxelPyramid,
  costs: CostTiles,
  box: ReturnType<typeof tileBox>,
  a: Vec3,
  b: Vec3,
  signal: StopSignal,
): { readonly points: Float64Array; readonly leans: boolean } | "too-large" | null {
  const { start, size } = box;
  if (size[0] * size[1] * size[2] > MOST_BOX_VOXELS) return "too-large";
  const grid = pyramid.levels[costs.level]!;
  const domain = createTileDomain(pyramid, costs, box, [], signal);
  const met = meetFronts(domain, voxelOfIndex(domain, a), voxelOfIndex(domain, b), MOST_SETTLED, () => signal.aborted);
  if (met.kind === "over-budget") return "too-large";
  if (met.kind !== "met") return null;
  const points = new Float64Array(met.path.length * 3);
  let leans = false;
  met.path.forEach((voxel, i) => {
    const index = indexOfVoxel(domain, voxel);
    points.set(indexToLocal(grid, index), 3 * i);
    leans ||= ([0, 1, 2] as const).some(
      (k) =>
        (index[k] === start[k] && start[k] > 0) || (index[k] === start[k] + size[k] - 1 && start[k] + size[k] < grid.size[k]),
    );
  });
  return { points, leans };
}

/** Follows a path of the coarser level on `level`, from one waypoint on it to the next. */
function inWindows(
  context: TraceContext,
  level: number,
  from: Vec3,
  to: Vec3,
  coarse: Float64Array,
  expected: ExpectedString,
  signal: StopSignal,
): LegPath {
  const arc = arcLengths(coarse);
  const length = arc[arc.length - 1]!;
  const windows = Math.max(1, Math.round(length / WINDOW_MM));
  if (windows === 1) return coarse;
  const parts: Float64Array[] = [];
  let at = 0;
  let start = from;
  for (let w = 1; w <= windows; w++) {
    while (at < arc.length - 1 && arc[at]! < (length * w) / windows) at++;
    const waypoint: Vec3 = [coarse[3 * at]!, coarse[3 * at + 1]!, coarse[3 * at + 2]!];
    const end = w === windows ? to : ridgeNearPin(context, level, waypoint).at;
    const part = legPath(context, level, start, end, expected, signal);
    if (!part) return signal.aborted ? null : coarse;
    parts.push(w === 1 ? part : part.subarray(3));
    start = end;
  }
  const out = new Float64Array(parts.reduce((sum, part) => sum + part.length, 0));
  let offset = 0;
  for (const part of parts) {
    out.set(part, offset);
    offset += part.length;
  }
  return out;
}
