import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import type { ValveAxes } from "#shared/geometry/valve-axes.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";
import type { CrossLinkId, NodeId, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";

export interface SpaceSelection {
  readonly tree?: TreeId;
  readonly strand?: StrandId | CrossLinkId;
  readonly node?: NodeId;
}

/** The section's plane as it lies in space. */
export interface PlaneInSpace {
  readonly centre: PointMm;
  readonly right: Vec3;
  readonly down: Vec3;
  readonly widthMm: number;
  readonly heightMm: number;
}

/** Grey picture on a plane of its own: uint8 rows from the top; `right` and `down` are unit vectors. */
export interface PictureInSpace extends PlaneInSpace {
  readonly width: number;
  readonly height: number;
  readonly grey: Uint8Array;
}

export interface SpaceContent {
  readonly document: TreeDocument | null;
  /** Strands shown instead of the document's, for example those of two passes; null = the document's. */
  readonly strands: readonly DrawnStrand[] | null;
  readonly places: readonly MarkedPlace[];
  readonly selection: SpaceSelection;
  /** Flat xyz, millimetres: the live guide. */
  readonly guide: readonly number[] | null;
  /** What is suggested and not taken yet. */
  readonly proposal: readonly ProposedLine[];
  readonly pins: readonly PointMm[];
  readonly plane: PlaneInSpace | null;
  readonly picture: PictureInSpace | null;
  /** shape [n, 3], order xyz, millimetres: bright surface points of a coarse level. */
  readonly surface: Float32Array | null;
  /** The axes on which the valve stands; null = the scan's z is up. */
  readonly valve: ValveAxes | null;
  /** Middle and half diagonal of the scan, millimetres: what "all" means. */
  readonly bounds: { readonly centre: PointMm; readonly radiusMm: number };
  /** What the pane says while it is empty. */
  readonly caption: string;
}

export type SpaceHit =
  | { readonly kind: "node"; readonly id: NodeId; readonly point: PointMm }
  | { readonly kind: "strand"; readonly id: StrandId | CrossLinkId; readonly atMm: number; readonly point: PointMm }
  | { readonly kind: "surface"; readonly point: PointMm };

export interface SpaceEvents {
  /** Null = nothing under the pointer. */
  click?(hit: SpaceHit | null, modifiers: { readonly shift: boolean; readonly alt: boolean; readonly control: boolean }): void;
  hover?(hit: SpaceHit | null): void;
  /** The view was turned or zoomed by hand or key. */
  turned?(): void;
}
