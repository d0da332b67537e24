import type { PointMm } from "#shared/geometry/types.ts";
import type { LegKind, MadeBy } from "#shared/trees/document.ts";

export type Polarity = "bright" | "dark";

/** What a traced curve depends on besides its pins and the scan. */
export interface TraceParameters {
  readonly polarity: Polarity;
  /** Estimated blur of the scan, full width at half maximum, millimetres; null = unknown (radii stay uncorrected). */
  readonly blurFwhmMm: number | null;
}

/** The pins of one strand, in order; places rounded to 1e-6 mm. `legs` has via.length + 1 entries; absent = all guided. */
export interface StrandRequest {
  readonly from: PointMm;
  readonly via: readonly PointMm[];
  readonly to: PointMm;
  readonly legs?: readonly LegKind[];
}

/** The committed centreline of one strand: depends on pins, scan and parameters alone. */
export interface TracedCurve {
  /** shape [n, 3], order xyz, millimetres rounded to 1e-6; first and last point exactly the two nodes. */
  readonly points: Float64Array;
  /** shape [n], millimetres rounded to 1e-6; NaN = below resolution. */
  readonly radii: Float64Array;
  readonly madeBy: readonly (readonly [number, number, MadeBy])[];
  /** 0-1; null when the image could not be followed and the strand was drawn straight. */
  readonly imageFit: number | null;
  /** False when a guided stretch could not be followed and is written straight. */
  readonly followed: boolean;
}
