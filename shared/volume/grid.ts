import {
  IDENTITY3,
  type IndexVoxel,
  indexVoxel,
  type Matrix3,
  type PointMm,
  pointMm,
  type SizeXyz,
  type SpacingMm,
  sizeXyz,
  spacingMm,
} from "#shared/geometry/types.ts";

/** `LPS`, or `scan` when the source names no patient or lab frame. */
export type FrameName = "LPS" | "scan";

/** Where a volume's voxels lie: position = origin + direction * (index * spacing); an integer index is a voxel's centre. */
export interface VolumeGrid {
  readonly size: SizeXyz;
  readonly spacing: SpacingMm;
  /** Centre of voxel 0, 0, 0. */
  readonly origin: PointMm;
  /** Row-major; column k is the direction of index axis k. */
  readonly direction: Matrix3;
  readonly frame: FrameName;
}

/** Place of a continuous index, millimetres. */
export function indexToMm(
  grid: Pick<VolumeGrid, "spacing" | "origin" | "direction">,
  index: readonly [number, number, number],
): PointMm {
  const { spacing: s, origin: o, direction: d } = grid;
  const x = index[0] * s[0];
  const y = index[1] * s[1];
  const z = index[2] * s[2];
  return pointMm(
    o[0] + d[0] * x + d[1] * y + d[2] * z,
    o[1] + d[3] * x + d[4] * y + d[5] * z,
    o[2] + d[6] * x + d[7] * y + d[8] * z,
  );
}

/** Continuous index of a place in millimetres. The direction must be invertible; it need not be orthogonal. */
export function mmToIndex(
  grid: Pick<VolumeGrid, "spacing" | "origin" | "direction">,
  p: readonly [number, number, number],
): IndexVoxel {
  const { spacing: s, origin: o } = grid;
  const m = invert3(grid.direction);
  const x = p[0] - o[0];
  const y = p[1] - o[1];
  const z = p[2] - o[2];
  return indexVoxel(
    (m[0] * x + m[1] * y + m[2] * z) / s[0],
    (m[3] * x + m[4] * y + m[5] * z) / s[1],
    (m[6] * x + m[7] * y + m[8] * z) / s[2],
  );
}

/** Inverse of a 3 x 3 matrix; a singular one gives non-finite entries. The identity comes back exactly. */
export function invert3(m: Matrix3): Matrix3 {
  const c0 = m[4] * m[8] - m[5] * m[7];
  const c1 = m[5] * m[6] - m[3] * m[8];
  const c2 = m[3] * m[7] - m[4] * m[6];
  const k = 1 / (m[0] * c0 + m[1] * c1 + m[2] * c2);
  return [
    c0 * k,
    (m[2] * m[7] - m[1] * m[8]) * k,
    (m[1] * m[5] - m[2] * m[4]) * k,
    c1 * k,
    (m[0] * m[8] - m[2] * m[6]) * k,
    (m[2] * m[3] - m[0] * m[5]) * k,
    c2 * k,
    (m[1] * m[6] - m[0] * m[7]) * k,
    (m[0] * m[4] - m[1] * m[3]) * k,
  ];
}

/** True when a place lies within half a voxel of the volume's voxel centres. */
export function isInside(grid: VolumeGrid, p: readonly [number, number, number]): boolean {
  const i = mmToIndex(grid, p);
  return i.every((value, axis) => value >= -0.5 - 1e-9 && value <= grid.size[axis]! - 0.5 + 1e-9);
}

/** A grid on the scan's own axes with its first voxel at the origin. */
export function plainGrid(
  size: readonly [number, number, number],
  spacing: readonly [number, number, number],
  frame: FrameName = "LPS",
): VolumeGrid {
  return { size: sizeXyz(...size), spacing: spacingMm(...spacing), origin: pointMm(0, 0, 0), direction: IDENTITY3, frame };
}
