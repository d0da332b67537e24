import type { SnapAnswer, SnapCandidate, SnapRequest } from "#shared/api/engine.ts";
import { type PointMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance, dot, normalise, subtract } from "#shared/geometry/vec3.ts";
import { CYLINDER_PEAK } from "#shared/tracing/cost.ts";
import { directionToLocal, fromLocal, indexToLocal, localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import { followableStrength, ridgeAtVoxel } from "#shared/tracing/pin-ridge.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";
import { type AbortSignalLike, stopIfAborted } from "#shared/volume/section/sample-lattice.ts";

const MOST_CANDIDATES = 16;
/** Most voxels that are looked at; a longer line of sight is cut at both ends. */
const MOST_VOXELS = 400_000;

/**
 * The strings near the line of sight through a place: places where the ridge answer, weighed down with the distance from the
 * line, is greatest among its neighbours, strongest first, one for each string (places closer than a local diameter count as
 * one). Looks up to `reachMm` beside the line and half a slab (at least a voxel) before and behind the plane.
 * @throws cancelled when the signal says so.
 * @source own derivation.
 */
export function snap(
  context: TraceContext,
  request: Omit<SnapRequest, "ticket" | "specimen" | "polarity">,
  signal?: AbortSignalLike,
): SnapAnswer {
  const { pyramid, workingLevel } = context;
  const grid = pyramid.levels[workingLevel]!;
  const at = toLocal(pyramid.grid, request.at);
  const normal = normalise(directionToLocal(pyramid.grid, request.normal));
  const voxel = Math.max(...grid.spacing);
  const reach = Math.max(request.reachMm, voxel);
  const area = (2 * reach) ** 2;
  const longest = (MOST_VOXELS * grid.spacing[0] * grid.spacing[1] * grid.spacing[2]) / area;
  const depth = Math.min(Math.max(request.slabMm / 2, voxel), longest / 2);
  const least = followableStrength(context);

  const scoreAt = (x: number, y: number, z: number): number => {
    const offset = subtract(indexToLocal(grid, [x, y, z]), at);
    const along = dot(offset, normal);
    const aside2 = Math.max(0, dot(offset, offset) - along * along);
    return ridgeAtVoxel(context, workingLevel, x, y, z).strength * Math.exp(-aside2 / (reach * reach));
  };

  const found: { score: number; strength: number; radiusMm: number; at: Vec3; along: number }[] = [];
  const [first, last] = boxOfSight(grid, at, normal, reach, depth);
  for (let z = first[2]; z <= last[2]; z++) {
    stopIfAborted(signal);
    for (let y = first[1]; y <= last[1]; y++)
      for (let x = first[0]; x <= last[0]; x++) {
        const place = indexToLocal(grid, [x, y, z]);
        const offset = subtract(place, at);
        const along = dot(offset, normal);
        if (Math.abs(along) > depth || dot(offset, offset) - along * along > reach * reach) continue;
        const { strength, radiusMm } = ridgeAtVoxel(context, workingLevel, x, y, z);
        if (strength < least) continue;
        const score = scoreAt(x, y, z);
        if (isPeak(score, x, y, z, grid.size, scoreAt)) found.push({ score, strength, radiusMm, at: place, along });
      }
  }
  found.sort((a, b) => b.score - a.score || a.along - b.along);
  const chosen: typeof found = [];
  for (const each of found) {
    if (chosen.length === MOST_CANDIDATES) break;
    if (chosen.every((other) => distance(other.at, each.at) > 2 * Math.max(other.radiusMm, voxel))) chosen.push(each);
  }
  const full = CYLINDER_PEAK * context.levels.contrast;
  return {
    candidates: chosen.map(({ at: place, strength }): SnapCandidate => {
      const point: PointMm = roundPoint(fromLocal(pyramid.grid, place));
      return { point, depthMm: dot(subtract(point, request.at), request.normal), strength: Math.min(1, strength / full) };
    }),
  };
}

/** Indices of a box around the piece of the line of sight, clipped to the level. */
function boxOfSight(
  grid: TraceContext["pyramid"]["levels"][number],
  at: Vec3,
  normal: Vec3,
  reach: number,
  depth: number,
): [[number, number, number], [number, number, number]] {
  const centre = localToIndex(grid, at);
  const first: [number, number, number] = [0, 0, 0];
  const last: [number, number, number] = [0, 0, 0];
  for (const k of [0, 1, 2] as const) {
    const half = (Math.abs(normal[k]) * depth + Math.sqrt(Math.max(0, 1 - normal[k] ** 2)) * reach) / grid.spacing[k];
    first[k] = Math.max(0, Math.ceil(centre[k] - half));
    last[k] = Math.min(grid.size[k] - 1, Math.floor(centre[k] + half));
  }
  return [first, last];
}

/** No neighbour scores higher; of equal ones the first in order x, y, z stands. */
function isPeak(
  score: number,
  x: number,
  y: number,
  z: number,
  size: readonly [number, number, number],
  scoreAt: (x: number, y: number, z: number) => number,
): boolean {
  for (let dz = -1; dz <= 1; dz++)
    for (let dy = -1; dy <= 1; dy++)
      for (let dx = -1; dx <= 1; dx++) {
        const outside = x + dx < 0 || y + dy < 0 || z + dz < 0 || x + dx >= size[0] || y + dy >= size[1] || z + dz >= size[2];
        if (outside || (dx === 0 && dy === 0 && dz === 0)) continue;
        const other = scoreAt(x + dx, y + dy, z + dz);
        if (other > score || (other === score && (dz || dy || dx) < 0)) return false;
      }
  return true;
}
