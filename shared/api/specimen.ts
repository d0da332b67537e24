import type { Matrix3, PointMm, SizeXyz, SpacingMm } from "#shared/geometry/types.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { Landmarks } from "#shared/trees/document.ts";
import type { SourceDtype, StoredDtype } from "#shared/volume/dtype.ts";
import type { FrameName } from "#shared/volume/grid.ts";
import type { Derivation } from "#shared/volume/region/region.ts";

export type Handedness = "confirmed" | "unknown";

/** The scan as the library keeps it; the grid is level 0. */
export interface SpecimenVolume {
  /** SHA-256 (hex) of the stored array: C order z, y, x, little-endian. */
  readonly sha256: string;
  readonly dtype: StoredDtype;
  readonly size: SizeXyz;
  readonly spacing: SpacingMm;
  readonly origin: PointMm;
  readonly direction: Matrix3;
  readonly frame: FrameName;
  readonly handedness: Handedness;
  readonly blurFwhmMm: number | null;
  readonly range: { readonly min: number; readonly max: number };
  readonly derivedFrom?: Derivation;
  /** How the bricks of the store are packed; absent: not at all. */
  readonly packing?: "gzip";
  /** Set when the finest level is read where the scan lies; the store holds the coarser ones. */
  readonly inPlace?: InPlaceScan;
}

/** A Zarr array that a specimen uses where it lies, and what it was like when its hash was taken. */
export interface InPlaceScan {
  /** Folder of the OME-Zarr group on this computer. */
  readonly path: string;
  /** Path of the finest level's array under it, and of its metadata under that. */
  readonly array: string;
  readonly metadata: "zarr.json" | ".zarray";
  /** Per array axis: null for the three of space (z, y, x), else the one index that is read. */
  readonly selection: readonly (number | null)[];
  /** The channel and time point that were chosen where there are several. */
  readonly reading?: { readonly channel: number; readonly time: number };
  /** Files under the array's folder, their bytes, and their latest change in UTC milliseconds. */
  readonly files: number;
  readonly bytes: number;
  readonly changed: number;
}

export interface SpecimenFacts {
  readonly species?: string;
  readonly fixation?: string;
  readonly medium?: string;
  /** mmHg */
  readonly pressure?: number;
  readonly state?: string;
}

/** `specimens/<id>/specimen.json`. */
export interface SpecimenRecord {
  readonly format: "tautline-specimen";
  readonly version: 1;
  readonly id: string;
  readonly name: string;
  /** UTC milliseconds. */
  readonly created: number;
  /** True for generated data; every screen that shows it says so. */
  readonly synthetic: boolean;
  readonly source: { readonly name: string; readonly family: string; readonly bytes: number; readonly dtype: SourceDtype };
  readonly volume: SpecimenVolume;
  /** Sentences on conversions made at intake (type, rounding, rescale left unapplied). */
  readonly conversions: readonly string[];
  readonly polarity: Polarity;
  /** Grey values shown as black and white. */
  readonly display: { readonly low: number; readonly high: number };
  readonly facts: SpecimenFacts;
  readonly landmarks: Landmarks;
}

export type PassState = "under-way" | "finished";

/** A pass as the shelf lists it. */
export interface PassSummary {
  readonly id: string;
  readonly specimen: string;
  readonly annotator: string;
  readonly number: number;
  readonly state: PassState;
  readonly trees: number;
  readonly openEnds: number;
  readonly doubts: number;
  readonly edits: number;
  /** Time at work, milliseconds, from the log. */
  readonly workMs: number;
  /** UTC milliseconds of the last record. */
  readonly changed: number;
  /** True when the generator made it. */
  readonly synthetic: boolean;
  /** Set on a branch that was kept when two logs of a pass went different ways. */
  readonly name?: string;
}

export interface ShelfSpecimen {
  readonly specimen: SpecimenRecord;
  readonly passes: readonly PassSummary[];
  /** True while the intake is still running (coarse levels may already serve). */
  readonly incomplete: boolean;
}
