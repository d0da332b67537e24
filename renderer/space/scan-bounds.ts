import type { SpaceContent } from "#renderer/space/space-content.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";

/** Middle and half diagonal of a scan: what the view in space shows as a whole. */
export function scanBounds(grid: Pick<VolumeGrid, "size" | "spacing" | "origin" | "direction">): SpaceContent["bounds"] {
  const near = indexToMm(grid, [0, 0, 0]);
  const far = indexToMm(grid, [grid.size[0] - 1, grid.size[1] - 1, grid.size[2] - 1]);
  const centre = pointMm((near[0] + far[0]) / 2, (near[1] + far[1]) / 2, (near[2] + far[2]) / 2);
  return { centre, radiusMm: distance(near, far) / 2 };
}

/** Points mirrored at the plane through `centre` at right angles to `normal` (a unit vector). @param points shape [n, 3], millimetres; untouched */
export function mirroredPoints(points: Float32Array, centre: Vec3, normal: Vec3): Float32Array {
  const out = new Float32Array(points.length);
  for (let i = 0; i + 2 < points.length; i += 3) {
    const [x, y, z] = [points[i]!, points[i + 1]!, points[i + 2]!];
    const off = 2 * ((x - centre[0]) * normal[0] + (y - centre[1]) * normal[1] + (z - centre[2]) * normal[2]);
    out[i] = x - off * normal[0];
    out[i + 1] = y - off * normal[1];
    out[i + 2] = z - off * normal[2];
  }
  return out;
}
