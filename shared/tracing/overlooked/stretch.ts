import type { PointMm } from "#shared/geometry/types.ts";

/** A stretch of string in the scan that no strand explains. */
export interface OverlookedStretch {
  /** Millimetres along its points. */
  readonly lengthMm: number;
  readonly from: PointMm;
  readonly to: PointMm;
  /** Flat xyz, millimetres, from `from` to `to`, about a voxel of the searched level apart: a rough centreline. */
  readonly points: readonly number[];
  /** Typical radius, millimetres. */
  readonly radiusMm: number;
}
