import { refine } from "#shared/geometry/polyline.ts";
import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/** A string that a guide may not enter. */
export interface ImpassableString {
  /** Flat xyz, millimetres in the specimen's frame; at least one point. */
  readonly points: readonly number[];
  readonly radiusMm: number;
}

/** A string is closed at least so wide, in voxels of the level: a diagonal step would else slip through. */
const LEAST_RADIUS_VOXELS = 0.9;
/** A guide that starts in a string may leave it within so many of its radii. */
const DOOR_RADII = 2.5;

/**
 * Numbers of the voxels of a box (x fastest) that lie inside impassable strings. Around the pin a string that holds it stays
 * open, so that a branch can leave it.
 * @param box first voxel and size on the level's grid.
 */
export function impassableVoxels(
  scan: VolumeGrid,
  level: PyramidLevel,
  box: { readonly start: readonly [number, number, number]; readonly size: readonly [number, number, number] },
  strings: readonly ImpassableString[],
  from: PointMm,
): number[] {
  const pin = toLocal(scan, from);
  const found = new Set<number>();
  const widest = Math.max(...level.spacing);
  for (const { points, radiusMm } of strings) {
    const radius = Math.max(radiusMm, LEAST_RADIUS_VOXELS * widest);
    const line = refine(localLine(scan, points), radius / 2);
    const holdsPin = line.some((point) => distance(point, pin) <= 2 * radius);
    const door = holdsPin ? DOOR_RADII * radius : 0;
    for (const point of line) addBall(found, level, box, point, radius, pin, door);
  }
  return [...found];
}

function localLine(scan: VolumeGrid, points: readonly number[]): Vec3[] {
  const line: Vec3[] = [];
  for (let i = 0; i + 2 < points.length; i += 3) line.push(toLocal(scan, [points[i]!, points[i + 1]!, points[i + 2]!]));
  return line;
}

/** Adds the voxels whose centres lie in a ball and in the box, but not within `door` of the pin. */
function addBall(
  found: Set<number>,
  level: PyramidLevel,
  { start, size }: { readonly start: readonly [number, number, number]; readonly size: readonly [number, number, number] },
  centre: Vec3,
  radius: number,
  pin: Vec3,
  door: number,
): void {
  const middle = localToIndex(level, centre);
  const pinIndex = localToIndex(level, pin);
  const [sx, sy, sz] = level.spacing;
  const low = (axis: 0 | 1 | 2) => Math.max(start[axis], Math.ceil(middle[axis] - radius / level.spacing[axis]));
  const high = (axis: 0 | 1 | 2) =>
    Math.min(start[axis] + size[axis] - 1, Math.floor(middle[axis] + radius / level.spacing[axis]));
  for (let z = low(2); z <= high(2); z++)
    for (let y = low(1); y <= high(1); y++)
      for (let x = low(0); x <= high(0); x++) {
        if (Math.hypot((x - middle[0]) * sx, (y - middle[1]) * sy, (z - middle[2]) * sz) > radius) continue;
        if (Math.hypot((x - pinIndex[0]) * sx, (y - pinIndex[1]) * sy, (z - pinIndex[2]) * sz) <= door) continue;
        found.add(((z - start[2]) * size[1] + (y - start[1])) * size[0] + (x - start[0]));
      }
}
