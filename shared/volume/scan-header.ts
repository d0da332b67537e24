import {
  IDENTITY3,
  type Matrix3,
  type PointMm,
  pointMm,
  type SizeXyz,
  type SpacingMm,
  spacingMm,
  type Vec3,
} from "#shared/geometry/types.ts";
import type { SourceDtype } from "#shared/volume/dtype.ts";
import type { FrameName, VolumeGrid } from "#shared/volume/grid.ts";
import { toMm } from "#shared/volume/length-unit.ts";
import type { Derivation } from "#shared/volume/region/region.ts";

export type ScanFamily =
  | "NRRD"
  | "MetaImage"
  | "NIfTI-1"
  | "DICOM"
  | "TIFF"
  | "TIFF slices"
  | "PNG slices"
  | "BMP slices"
  | "OME-Zarr"
  | "raw"
  | "generated";

/** How many volumes of one size a file holds; the person picks one of each. */
export interface ScanReadings {
  readonly channels: number;
  readonly times: number;
}

/** What a scan file says about its voxels, every family alike; nothing here is guessed. */
export interface ScanHeader {
  readonly family: ScanFamily;
  readonly dtype: SourceDtype;
  readonly size: SizeXyz;
  /** Numbers as written, per index axis x, y, z; null when one is missing. They may be zero, negative or not finite. */
  readonly headerSpacing: Vec3 | null;
  /** The header's word for the unit; null when it has none. */
  readonly unit: string | null;
  /** Millimetres per unit, per index axis; null when the unit is missing or no length. */
  readonly mmPerUnit: Vec3 | null;
  /** Centre of voxel 0, 0, 0 in the header's unit, already in the frame below. */
  readonly origin: Vec3;
  /** Millimetres per unit of the origin's components (the frame's axes); null as `mmPerUnit`. */
  readonly originMmPerUnit: Vec3 | null;
  /** Unit columns, already in the frame below. */
  readonly direction: Matrix3;
  readonly frame: FrameName;
  /** What a header without a whole voxel size does say about it, one sentence. */
  readonly spacingRemark?: string;
  /** Of a store that this program wrote: the whole scan that it is a part of. */
  readonly derivedFrom?: Derivation;
  /** Where there is more than one channel or time point. */
  readonly readings?: ScanReadings;
  /** Other things a person should know, one sentence each. */
  readonly notes: readonly string[];
}

/** Defaults of a header that says nothing about place. */
export const PLACELESS = {
  headerSpacing: null,
  unit: null,
  mmPerUnit: null,
  origin: [0, 0, 0],
  originMmPerUnit: null,
  direction: IDENTITY3,
  frame: "scan",
  notes: [],
} as const satisfies Partial<ScanHeader>;

/** Spacing in millimetres by the header alone; null when a number or the unit is missing. Not judged: may be zero or negative. */
export function headerSpacingMm(header: ScanHeader): Vec3 | null {
  const { headerSpacing: s, mmPerUnit: f } = header;
  if (!s || !f) return null;
  return [toMm(s[0], f[0]), toMm(s[1], f[1]), toMm(s[2], f[2])];
}

/**
 * The grid of a scan once its spacing is settled. The origin is the header's; where the given spacing is the header's times one
 * factor (a wrong or missing unit), the origin is turned by the same factor; where the header has no unit and no such factor, it is 0.
 * @param spacing millimetres, settled by the header or by a person.
 */
export function gridOf(header: ScanHeader, spacing: Vec3): VolumeGrid {
  return {
    size: header.size,
    spacing: spacingMm(...spacing) as SpacingMm,
    origin: originMm(header, spacing),
    direction: header.direction,
    frame: header.frame,
  };
}

function originMm(header: ScanHeader, spacing: Vec3): PointMm {
  const { origin: o, originMmPerUnit: f } = header;
  const own = headerSpacingMm(header);
  if (f && own) {
    const factor = commonFactor(own, spacing) ?? 1;
    const k = Math.abs(factor - 1) < 1e-9 ? 1 : factor;
    return pointMm(toMm(o[0], f[0]) * k + 0, toMm(o[1], f[1]) * k + 0, toMm(o[2], f[2]) * k + 0);
  }
  const factor = header.headerSpacing && commonFactor(header.headerSpacing, spacing);
  if (!factor) return pointMm(0, 0, 0);
  return pointMm(o[0] * factor + 0, o[1] * factor + 0, o[2] * factor + 0);
}

/** k with to = k * from on every axis (to 1e-6), or null. */
function commonFactor(from: Vec3, to: Vec3): number | null {
  const k = to[0] / from[0];
  if (!Number.isFinite(k) || k <= 0) return null;
  const same = [1, 2].every((axis) => Math.abs(to[axis]! - k * from[axis]!) <= 1e-6 * Math.abs(to[axis]!));
  return same ? k : null;
}
