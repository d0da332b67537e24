import type { PanePoint, PaneSize, ViewPlane } from "#renderer/section/view-plane.ts";
import type { SectionHeader, SnapCandidate } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";
import type { CrossLinkId, NodeId, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import type { FrameName } from "#shared/volume/grid.ts";

/** What is picked out in every view; each part may be missing. */
export interface Selection {
  readonly tree?: TreeId;
  readonly strand?: StrandId | CrossLinkId;
  readonly node?: NodeId;
}

/** The live guide from the last pin to the pointer. */
export interface ShownGuide {
  /** Flat xyz, millimetres. */
  readonly points: readonly number[];
  /** True while only a coarse path is known. */
  readonly coarse: boolean;
  readonly imageFit: number | null;
  /** First and last point of each stretch that leaves the string. */
  readonly doubtful: readonly (readonly [number, number])[];
}

/** A strand under way: its pins so far and the curves between them (flat xyz, millimetres). */
export interface StrandUnderWay {
  readonly tree: TreeId | null;
  readonly pins: readonly PointMm[];
  readonly curves: readonly (readonly number[])[];
}

export interface ShownRuler {
  readonly from: PointMm;
  readonly to: PointMm;
}

/** What the picture itself is doing. An error stays until another state is shown. */
export type PictureState =
  | { readonly kind: "ready" }
  | { readonly kind: "loading"; readonly what: string }
  | { readonly kind: "error"; readonly message: string };

/** All that a section pane shows. Values are immutable: show another one to change the picture. */
export interface SectionContent {
  readonly plane: ViewPlane | null;
  /** The engine's answer; drawn where its own plane lies, so an older one pans and zooms along until the next arrives. */
  readonly image: BinaryFrame<SectionHeader> | null;
  readonly document: TreeDocument | null;
  /** Strands shown instead of the document's, for example those of two passes; null = the document's. */
  readonly strands: readonly DrawnStrand[] | null;
  readonly places: readonly MarkedPlace[];
  readonly selection: Selection;
  /** Thickness of the slab, millimetres; what lies within is drawn in full. */
  readonly slabMm: number;
  readonly guide: ShownGuide | null;
  readonly underWay: StrandUnderWay | null;
  /** What is suggested and not taken yet. */
  readonly proposal: readonly ProposedLine[];
  /** The string the pointer snaps to. */
  readonly snap: SnapCandidate | null;
  readonly ruler: ShownRuler | null;
  /** Keyboard cursor; null = not in use. */
  readonly cursor: PointMm | null;
  readonly picture: PictureState;
  /** Letters for directions are drawn only in a known frame. */
  readonly frame: FrameName;
  /** Cross-sections of the strands as circles. */
  readonly outlines: boolean;
  /** What stands in the pane's lower right corner besides the scale, for example "slab 0.4 mm, maximum". */
  readonly caption: string;
}

/** What lies under the pointer, nearest and topmost first. */
export type SectionHit =
  | { readonly kind: "node"; readonly id: NodeId }
  | { readonly kind: "pin"; readonly strand: StrandId | CrossLinkId; readonly index: number }
  | { readonly kind: "under-way-pin"; readonly index: number }
  | { readonly kind: "ruler-end"; readonly end: "from" | "to" }
  | {
      readonly kind: "strand";
      readonly id: StrandId | CrossLinkId;
      /** Arc length from the strand's first point, millimetres. */
      readonly atMm: number;
      readonly point: PointMm;
    };

export interface PointerModifiers {
  readonly shift: boolean;
  readonly alt: boolean;
  /** Control, or Command on a Mac. */
  readonly control: boolean;
}

/** A place reported by pointer or keyboard cursor. */
export interface SectionPlace {
  /** On the plane, millimetres. */
  readonly at: PointMm;
  /** In the pane, CSS pixels. */
  readonly pane: PanePoint;
  readonly hit: SectionHit | null;
  readonly modifiers: PointerModifiers;
  readonly by: "pointer" | "keyboard";
}

/** What a person does on the pane. All are optional; the view changes nothing by itself but its own drawing. */
export interface SectionEvents {
  hover?(place: SectionPlace): void;
  leave?(): void;
  click?(place: SectionPlace): void;
  /** The picture is dragged; show the given plane. */
  pan?(plane: ViewPlane): void;
  /** Wheel: planes to step, positive = away from the viewer. Fractions of smooth wheels are gathered to whole steps. */
  step?(steps: number): void;
  /** Control and wheel, or pinch; show the given plane. */
  zoom?(plane: ViewPlane): void;
  /** The keyboard cursor wants to be here. */
  cursor?(place: SectionPlace): void;
  dragStart?(hit: SectionHit, place: SectionPlace): void;
  dragMove?(hit: SectionHit, place: SectionPlace): void;
  /** `cancelled`: by Escape or a lost pointer; put everything back. */
  dragEnd?(hit: SectionHit, place: SectionPlace, cancelled: boolean): void;
  /** The pane has another size now (also once at the start): ask for a new picture. */
  resized?(size: PaneSize): void;
}

/** Which hits may be dragged; anything else pans. */
export type Draggable = (hit: SectionHit) => boolean;
