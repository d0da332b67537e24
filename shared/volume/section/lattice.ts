import type { Vec3 } from "#shared/geometry/types.ts";
import { invert3, type VolumeGrid } from "#shared/volume/grid.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/**
 * Sample places on a regular lattice: place (i, j, k) = at + i u + j v + k w, in continuous voxel indices of one level.
 * i < width (a row), j < height, k < depth (through a slab).
 */
export interface Lattice {
  readonly at: Vec3;
  readonly u: Vec3;
  readonly v: Vec3;
  readonly w: Vec3;
  readonly width: number;
  readonly height: number;
  readonly depth: number;
}

/** A lattice given in millimetres, as one in voxel indices of a level. */
export function latticeOnLevel(level: PyramidLevel, mm: Lattice): Lattice {
  const m = invert3(level.direction);
  const { spacing: s, origin: o } = level;
  const turn = (p: Vec3): Vec3 => [
    (m[0] * p[0] + m[1] * p[1] + m[2] * p[2]) / s[0],
    (m[3] * p[0] + m[4] * p[1] + m[5] * p[2]) / s[1],
    (m[6] * p[0] + m[7] * p[1] + m[8] * p[2]) / s[2],
  ];
  return {
    ...mm,
    at: turn([mm.at[0] - o[0], mm.at[1] - o[1], mm.at[2] - o[2]]),
    u: turn(mm.u),
    v: turn(mm.v),
    w: turn(mm.w),
  };
}

/** First and last continuous index of a level that still lie in the scan (within half a voxel of the scan's voxel centres), per axis. */
export function indexBounds(grid: VolumeGrid, level: PyramidLevel): { low: Vec3; high: Vec3 } {
  const low = -0.5 - 1e-9;
  const high = (axis: 0 | 1 | 2) => grid.size[axis] / level.factor[axis] - 0.5 + 1e-9;
  return { low: [low, low, low], high: [high(0), high(1), high(2)] };
}

/** Smallest spacing of a level, millimetres. */
export function finestSpacing(level: PyramidLevel): number {
  return Math.min(...level.spacing);
}

/**
 * The coarsest level that is still at least as fine as the pixels along every axis it halves (an axis with the scan's own
 * spacing has nothing finer to show); level 0 when there is none. `generous` takes the nearest level on a logarithmic scale
 * instead, which is up to a factor of root 2 coarser.
 */
export function levelForPixel(levels: readonly PyramidLevel[], mmPerPixel: number, generous = false): number {
  const limit = mmPerPixel * (generous ? Math.SQRT2 : 1 + 1e-6);
  let best = 0;
  levels.forEach((level, index) => {
    if (level.factor.every((factor, axis) => factor === 1 || level.spacing[axis]! <= limit)) best = index;
  });
  return best;
}
