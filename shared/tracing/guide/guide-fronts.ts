import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { type CostTiles, costScale, createCostTiles } from "#shared/tracing/cost.ts";
import { type ImpassableString, impassableVoxels } from "#shared/tracing/guide/impassable.ts";
import { indexToLocal, localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import { createTileDomain, indexOfVoxel, type TileDomain, tileBox, voxelOfIndex } from "#shared/tracing/minimal-path/domain.ts";
import { createFront, expandFront, type Front, hasReached, walkBack } from "#shared/tracing/minimal-path/front.ts";
import { ridgeNearPin } from "#shared/tracing/pin-ridge.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";
import { isInside } from "#shared/volume/grid.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/** Bytes a voxel of a front's box takes once it is visited: distance, mark and cost. */
const BYTES_PER_VOXEL = 13;
/** Shares of a session's bytes for the working level, the next coarser one and the one after that. */
const SHARES = [0.3, 0.2, 0.15];
/** Share of the front between pin and pointer. */
const NEAR_SHARE = 0.35;
/** Room around pin and pointer, as for a committed stretch: millimetres, or a share of their distance. */
const NEAR_MARGIN_MM = 1;
const NEAR_MARGIN_SHARE = 0.3;
/** How far each front may fall behind: coarser ones run ahead, so that something can be shown soon and far away. */
const HASTE = [1, 0.5, 0.25];
/** Voxels settled between two looks at whether to stop. */
const BITE = 64;

/** A front of a session on one level. */
export interface GuideFront {
  readonly level: number;
  readonly grid: PyramidLevel;
  readonly domain: TileDomain;
  readonly front: Front;
}

/**
 * The fronts that one pin sends out: on the working level in a box around it, and on coarser levels in boxes that reach
 * farther and fill sooner. They are kept while the pointer moves, so that a preview is a walk back. One more front stays in
 * the box between pin and pointer, so that it arrives long before the one that goes everywhere.
 */
export interface GuideFronts {
  readonly context: TraceContext;
  readonly from: PointMm;
  /** Finest first. */
  readonly fronts: readonly GuideFront[];
  /** The front between pin and pointer; made anew when the pointer leaves its box. */
  near: GuideFront | null;
  /** Where the pointer was last, millimetres along the voxel axes. */
  to: Vec3 | null;
  /** Costs on the working level. */
  readonly costs: CostTiles;
  /** Strings that no front enters. */
  readonly impassable: readonly ImpassableString[];
  /** Most voxels of the near front's box. */
  readonly nearVoxels: number;
}

/**
 * Fronts at their pin, not grown yet. Computes the ridge around the pin alone.
 * @param bytes most memory of all fronts together; it becomes resident as they grow.
 * @param impassable strings that the guide may not enter, but for leaving the one that its pin is on.
 */
export function openGuideFronts(
  context: TraceContext,
  from: PointMm,
  bytes: number,
  impassable: readonly ImpassableString[] = [],
): GuideFronts {
  const { pyramid, workingLevel } = context;
  const pin = toLocal(pyramid.grid, from);
  const expected = ridgeNearPin(context, workingLevel, pin).strength;
  const scale = costScale(context.levels, context.sign, expected);
  const fronts: GuideFront[] = [];
  const costs = createCostTiles(pyramid, context.ridges, workingLevel, scale);
  for (const [n, share] of SHARES.entries()) {
    const level = workingLevel + n;
    const grid = pyramid.levels[level];
    if (!grid) break;
    const ofLevel = n === 0 ? costs : createCostTiles(pyramid, context.ridges, level, scale);
    const index = localToIndex(grid, pin);
    const box = boxAround(grid, index, (share * bytes) / BYTES_PER_VOXEL);
    const domain = createTileDomain(pyramid, ofLevel, box, impassableVoxels(pyramid.grid, grid, box, impassable, from));
    fronts.push({ level, grid, domain, front: createFront(domain, voxelOfIndex(domain, index)) });
  }
  return { context, from, fronts, near: null, to: null, costs, impassable, nearVoxels: (NEAR_SHARE * bytes) / BYTES_PER_VOXEL };
}

/** The largest box of whole tiles around a place, a cube in millimetres, of at most about `voxels` voxels. */
function boxAround(grid: PyramidLevel, index: Vec3, voxels: number): ReturnType<typeof tileBox> {
  const [sx, sy, sz] = grid.spacing;
  for (let half = Math.cbrt(voxels * sx * sy * sz) / 2; ; half *= 0.9) {
    const low = ([0, 1, 2] as const).map((k) => index[k] - half / grid.spacing[k]) as [number, number, number];
    const high = ([0, 1, 2] as const).map((k) => index[k] + half / grid.spacing[k]) as [number, number, number];
    const box = tileBox(grid, low, high);
    // Eight tiles always surround a pin, however small the share is.
    if (box.size[0] * box.size[1] * box.size[2] <= voxels || half < 16 * Math.max(sx, sy, sz)) return box;
  }
}

/** The near front when it can hold pin and place with room around them; made when the one there is too small. */
function nearFront(guide: GuideFronts, place: Vec3): GuideFront | null {
  const { pyramid, workingLevel: level } = guide.context;
  const grid = pyramid.levels[level]!;
  const pin = toLocal(pyramid.grid, guide.from);
  const marginMm = Math.max(NEAR_MARGIN_MM, NEAR_MARGIN_SHARE * distance(pin, place));
  const [a, b] = [localToIndex(grid, pin), localToIndex(grid, place)];
  const low = ([0, 1, 2] as const).map((k) => Math.min(a[k], b[k]) - marginMm / grid.spacing[k]) as [number, number, number];
  const high = ([0, 1, 2] as const).map((k) => Math.max(a[k], b[k]) + marginMm / grid.spacing[k]) as [number, number, number];
  const box = tileBox(grid, low, high);
  const known = guide.near?.domain;
  const holds = (k: 0 | 1 | 2) =>
    known !== undefined && known.start[k] <= box.start[k] && known.start[k] + known.size[k] >= box.start[k] + box.size[k];
  if (holds(0) && holds(1) && holds(2)) return guide.near;
  if (box.size[0] * box.size[1] * box.size[2] > guide.nearVoxels) return null;
  const closed = impassableVoxels(pyramid.grid, grid, box, guide.impassable, guide.from);
  const domain = createTileDomain(pyramid, guide.costs, box, closed);
  guide.near = { level, grid, domain, front: createFront(domain, voxelOfIndex(domain, a)) };
  return guide.near;
}

/** The next front that the place of the pointer waits for: a coarse path first, then the fine one. */
function awaited(guide: GuideFronts): Front | null {
  const { to, fronts, near } = guide;
  if (to === null || hasArrived(fronts[0]!, to)) return null;
  const coarsest = fronts[fronts.length - 1]!;
  for (const each of [coarsest, near])
    if (each && holdsPlace(each, to) && !hasArrived(each, to) && !each.front.exhausted) return each.front;
  return null;
}

/** True while growing brings the guide to where the pointer was last; what grows after that is for places it may go to. */
export function isAwaited(guide: GuideFronts): boolean {
  return awaited(guide) !== null;
}

function holdsPlace({ grid, domain }: GuideFront, place: Vec3): boolean {
  const index = localToIndex(grid, place);
  return ([0, 1, 2] as const).every((k) => isWithin(index[k], domain.start[k], domain.size[k]));
}

function hasArrived(each: GuideFront, place: Vec3): boolean {
  return holdsPlace(each, place) && hasReached(each.front, voxelOfIndex(each.domain, localToIndex(each.grid, place)));
}

/**
 * Lets the fronts grow until `shouldStop`: first those that the pointer waits for, then all in turns, where a coarser one is let
 * come twice as far as the next finer one.
 * @returns false when none can grow any more.
 */
export function growGuideFronts(guide: GuideFronts, shouldStop: () => boolean): boolean {
  for (let front = awaited(guide); front !== null; front = awaited(guide)) {
    if (shouldStop()) return true;
    expandFront(front, BITE);
  }
  for (;;) {
    let next: Front | null = null;
    let least = Number.POSITIVE_INFINITY;
    for (const [n, { front }] of guide.fronts.entries()) {
      const come = front.reach * HASTE[n]!;
      if (front.exhausted || come >= least) continue;
      next = front;
      least = come;
    }
    if (next === null) return false;
    if (shouldStop()) return true;
    expandFront(next, BITE);
  }
}

/** A path of a session's fronts: voxel centres from the pin to the place, millimetres along the voxel axes, and its level. */
export interface GuidePath {
  readonly points: Float64Array;
  readonly level: number;
  /** It leans on a side of the box between pin and pointer: a wider search may find another way. */
  readonly leans: boolean;
}

/**
 * The cheapest path from the pin to a place, from the finest front that has arrived there; fronts whose box holds the place
 * are let grow first, each until `shouldStop(n)` (n = 0 for the finest). Null when none arrives in time, and outside the scan.
 */
export function pathToPlace(guide: GuideFronts, to: PointMm, shouldStop: (front: number) => boolean): GuidePath | null {
  const scan = guide.context.pyramid.grid;
  if (!isInside(scan, to)) return null;
  const place = toLocal(scan, to);
  guide.to = place;
  const [wide, ...coarser] = guide.fronts as [GuideFront, ...GuideFront[]];
  if (hasArrived(wide, place)) return pathIn(wide, place);
  const near = nearFront(guide, place);
  for (const [n, each] of [near ?? wide, ...coarser].entries()) {
    const { domain, front } = each;
    if (!holdsPlace(each, place)) continue;
    const target = voxelOfIndex(domain, localToIndex(each.grid, place));
    while (!hasReached(front, target) && !front.exhausted && !shouldStop(n)) expandFront(front, BITE, target);
    if (hasReached(front, target)) return pathIn(each, place);
  }
  return null;
}

/** The way back from a place that the front has reached. */
function pathIn({ level, grid, domain, front }: GuideFront, place: Vec3): GuidePath {
  const voxels = walkBack(front, voxelOfIndex(domain, localToIndex(grid, place)))!;
  const points = new Float64Array(3 * voxels.length);
  const { start, size } = domain;
  let leans = false;
  voxels.forEach((voxel, i) => {
    const index = indexOfVoxel(domain, voxel);
    points.set(indexToLocal(grid, index), 3 * (voxels.length - 1 - i));
    leans ||= ([0, 1, 2] as const).some(
      (k) =>
        (index[k] === start[k] && start[k] > 0) || (index[k] === start[k] + size[k] - 1 && start[k] + size[k] < grid.size[k]),
    );
  });
  return { points, level, leans };
}

function isWithin(index: number, start: number, size: number): boolean {
  return index >= start - 0.5 && index <= start + size - 0.5;
}
