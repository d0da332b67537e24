import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import { costScale, createCostTiles } from "#shared/tracing/cost.ts";
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
const SHARES = [0.6, 0.25, 0.15];
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
 * farther and fill sooner. They are kept while the pointer moves, so that a preview is a walk back.
 */
export interface GuideFronts {
  readonly context: TraceContext;
  readonly from: PointMm;
  /** Finest first. */
  readonly fronts: readonly GuideFront[];
}

/**
 * Fronts at their pin, not grown yet. Computes the ridge around the pin alone.
 * @param bytes most memory of all fronts together; it becomes resident as they grow.
 */
export function openGuideFronts(context: TraceContext, from: PointMm, bytes: number): GuideFronts {
  const { pyramid, workingLevel } = context;
  const pin = toLocal(pyramid.grid, from);
  const expected = ridgeNearPin(context, workingLevel, pin).strength;
  const scale = costScale(context.levels, context.sign, expected);
  const fronts: GuideFront[] = [];
  for (const [n, share] of SHARES.entries()) {
    const level = workingLevel + n;
    const grid = pyramid.levels[level];
    if (!grid) break;
    const costs = createCostTiles(pyramid, context.ridges, level, scale);
    const index = localToIndex(grid, pin);
    const domain = createTileDomain(pyramid, costs, boxAround(grid, index, (share * bytes) / BYTES_PER_VOXEL));
    fronts.push({ level, grid, domain, front: createFront(domain, voxelOfIndex(domain, index)) });
  }
  return { context, from, fronts };
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

/**
 * Lets the fronts grow until `shouldStop`, in turns: a coarser one is let come twice as far as the next finer one.
 * @returns false when none can grow any more.
 */
export function growGuideFronts(guide: GuideFronts, shouldStop: () => boolean): boolean {
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
}

/**
 * The cheapest path from the pin to a place, from the finest front that has arrived there; fronts whose box holds the place
 * are let grow first, each until `shouldStop(n)` (n = 0 for the finest). Null when none arrives in time, and outside the scan.
 */
export function pathToPlace(guide: GuideFronts, to: PointMm, shouldStop: (front: number) => boolean): GuidePath | null {
  const scan = guide.context.pyramid.grid;
  if (!isInside(scan, to)) return null;
  const place = toLocal(scan, to);
  for (const [n, { level, grid, domain, front }] of guide.fronts.entries()) {
    const index = localToIndex(grid, place);
    if (!([0, 1, 2] as const).every((k) => isWithin(index[k], domain.start[k], domain.size[k]))) continue;
    const target = voxelOfIndex(domain, index);
    while (!hasReached(front, target) && !front.exhausted && !shouldStop(n)) expandFront(front, BITE, target);
    if (!hasReached(front, target)) continue;
    const voxels = walkBack(front, target)!;
    const points = new Float64Array(3 * voxels.length);
    voxels.forEach((voxel, i) => {
      points.set(indexToLocal(grid, indexOfVoxel(domain, voxel)), 3 * (voxels.length - 1 - i));
    });
    return { points, level };
  }
  return null;
}

function isWithin(index: number, start: number, size: number): boolean {
  return index >= start - 0.5 && index <= start + size - 0.5;
}
