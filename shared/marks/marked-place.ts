import type { PointMm } from "#shared/geometry/types.ts";
import type { NodeGlyph } from "#shared/marks/node-glyph.ts";

/** A place that a picture marks with a glyph. */
export interface MarkedPlace {
  readonly at: PointMm;
  readonly glyph: NodeGlyph;
  /** Index of a tree colour; null = the plain ink. */
  readonly colour: number | null;
  /** The one that is looked at. */
  readonly picked: boolean;
}
