import type { Vec3 } from "#shared/geometry/types.ts";

/** A string of a trial volume. Lengths in millimetres; places in the frame of the volume, from the first voxel's centre. */
export interface TrialString {
  /** Names of its two nodes; strings that share a name meet there. The first string of a tree begins at the tree's origin. */
  readonly from: string;
  readonly to: string;
  /** Its centreline, densely sampled, both nodes included. */
  readonly line: readonly Vec3[];
  /** Diameters at `from` and `to`; even taper between. Of a flattened string: of the circle of the same area. */
  readonly diametersMm: readonly [number, number];
  /** Width over thickness of an elliptic section, and the direction it is flattened along. */
  readonly flat?: { readonly ratio: number; readonly along: Vec3 };
  /** Uneven stain: the core, this share of the radius wide, has this share of the rim's contrast. */
  readonly core?: { readonly share: number; readonly level: number };
}

/** What surrounds the strings. `level` is its contrast as a share of a string's. */
export type TrialBody =
  | { readonly kind: "ball"; readonly centre: Vec3; readonly radiusMm: number; readonly level: number }
  /** A gently waved sheet through a place; the wave runs along one direction in the sheet. */
  | {
      readonly kind: "sheet";
      readonly at: Vec3;
      readonly normal: Vec3;
      readonly thicknessMm: number;
      readonly waveMm: number;
      readonly waveLengthMm: number;
      readonly level: number;
    }
  /** Liquid held between two strings: all that lies between their axes along a stretch, `widthMm` thick. */
  | {
      readonly kind: "bridge";
      readonly one: readonly Vec3[];
      readonly other: readonly Vec3[];
      readonly widthMm: number;
      readonly level: number;
    };

/** How the volume looks, and what spoils it. */
export interface TrialLook {
  readonly polarity: "bright" | "dark";
  /** Blur of the whole imaging chain, full width at half maximum, millimetres; a voxel's own size is part of it. */
  readonly blurFwhmMm: number;
  /** (Level of a string - level of the background) / standard deviation of the noise. */
  readonly contrastToNoise: number;
  /** Height of rings about an axis along z, as a share of a string's contrast. */
  readonly ring?: number;
  /** Height of streaks that leave the bright spots, as a share of a string's contrast. */
  readonly streak?: number;
  /** Bright spots: calcium or clips, 2.5 times a string's contrast. */
  readonly spots?: readonly { readonly at: Vec3; readonly radiusMm: number }[];
}

/** Everything a trial volume is made from. */
export interface TrialSpec {
  readonly sizeVoxels: readonly [number, number, number];
  readonly spacingMm: readonly [number, number, number];
  readonly strings: readonly TrialString[];
  readonly bodies: readonly TrialBody[];
  readonly look: TrialLook;
}
