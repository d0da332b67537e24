import type { FilmHeader, StripHeader } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";

/** The strand laid straight. All arc lengths are millimetres from the strand's first point (at the bottom). */
export interface StripContent {
  /** Name over the strip, for example "ALPM-03 s12"; null = no strand is selected. */
  readonly title: string | null;
  /** What stands there while no strand is shown. */
  readonly hint: string;
  readonly image: BinaryFrame<StripHeader> | null;
  readonly film: BinaryFrame<FilmHeader> | null;
  /** Length of the strand, millimetres. */
  readonly lengthMm: number;
  /** Half the width that the strip's picture shows, millimetres. */
  readonly halfWidthMm: number;
  /** Half the side of a film picture, millimetres. */
  readonly filmHalfWidthMm: number;
  /** shape [n]: arc length of each radius, ascending. */
  readonly at: Float64Array;
  /** shape [n], millimetres; NaN = below resolution. */
  readonly radii: Float64Array;
  /** Stretches where the image is not followed well, arc lengths. */
  readonly doubtful: readonly (readonly [number, number])[];
  /** 0-1; null = not followed in the image. */
  readonly imageFit: number | null;
  /** Pins between the ends, arc lengths. */
  readonly pins: readonly number[];
  /** Where the across plane stands; null = nowhere on this strand. */
  readonly position: number | null;
  /** Degrees the cutting direction is turned. */
  readonly turn: number;
  readonly colour: number;
  readonly state:
    | { readonly kind: "ready" }
    | { readonly kind: "loading" }
    | { readonly kind: "error"; readonly message: string };
  /** Words at the two ends, for example "insertion" above and "fork" below. */
  readonly topWord: string;
  readonly bottomWord: string;
}

export interface StripEvents {
  /** A click or key on the strip or the film. */
  place?(atMm: number): void;
  hover?(atMm: number | null): void;
  /** New turn of the cutting direction, degrees in [0, 180). */
  turn?(deg: number): void;
  /** Ask for pictures of these sizes (device pixels). */
  resized?(wanted: StripSizes): void;
}

export interface StripSizes {
  readonly strip: { readonly width: number; readonly height: number };
  readonly film: { readonly count: number; readonly side: number };
}
