import type { Vec3 } from "#shared/geometry/types.ts";
import { invert3, type VolumeGrid } from "#shared/volume/grid.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/**
 * The frame that tracing computes in: millimetres along the voxel axes, from the centre of the scan's first voxel. Distances
 * and angles are those of the specimen when the scan's axes are perpendicular, and kernels need no direction matrix.
 */
export function toLocal(grid: VolumeGrid, p: readonly [number, number, number]): Vec3 {
  const m = invert3(grid.direction);
  const x = p[0] - grid.origin[0];
  const y = p[1] - grid.origin[1];
  const z = p[2] - grid.origin[2];
  return [m[0] * x + m[1] * y + m[2] * z, m[3] * x + m[4] * y + m[5] * z, m[6] * x + m[7] * y + m[8] * z];
}

/** The place in the specimen's frame of a place in the frame of {@link toLocal}. */
export function fromLocal(grid: VolumeGrid, p: readonly [number, number, number]): Vec3 {
  const d = grid.direction;
  return [
    grid.origin[0] + d[0] * p[0] + d[1] * p[1] + d[2] * p[2],
    grid.origin[1] + d[3] * p[0] + d[4] * p[1] + d[5] * p[2],
    grid.origin[2] + d[6] * p[0] + d[7] * p[1] + d[8] * p[2],
  ];
}

/** A free vector (a direction) turned into the frame of {@link toLocal}. */
export function directionToLocal(grid: VolumeGrid, v: readonly [number, number, number]): Vec3 {
  const m = invert3(grid.direction);
  return [
    m[0] * v[0] + m[1] * v[1] + m[2] * v[2],
    m[3] * v[0] + m[4] * v[1] + m[5] * v[2],
    m[6] * v[0] + m[7] * v[1] + m[8] * v[2],
  ];
}

/** Continuous index on a level of a place in the frame of {@link toLocal}. */
export function localToIndex(level: PyramidLevel, p: readonly [number, number, number]): Vec3 {
  const along = (axis: 0 | 1 | 2) => p[axis] / level.spacing[axis] + 0.5 / level.factor[axis] - 0.5;
  return [along(0), along(1), along(2)];
}

/** The place, in the frame of {@link toLocal}, of a continuous index on a level. */
export function indexToLocal(level: PyramidLevel, index: readonly [number, number, number]): Vec3 {
  const along = (axis: 0 | 1 | 2) => (index[axis] + 0.5 - 0.5 / level.factor[axis]) * level.spacing[axis];
  return [along(0), along(1), along(2)];
}
