import type { ReadonlySignal } from "@preact/signals";
import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import type { CrossLinkId, NodeId, StrandId } from "#shared/trees/document.ts";

/** What lies under the pointer or the keyboard cursor. */
export type Under =
  | { readonly kind: "node"; readonly id: NodeId }
  | { readonly kind: "pin"; readonly strand: StrandId | CrossLinkId; readonly index: number }
  | { readonly kind: "strand"; readonly id: StrandId | CrossLinkId; readonly point: PointMm };

/** Where the pointer or the keyboard cursor is on the section, and what its view is like there. */
export interface Pointing {
  readonly at: PointMm;
  /** Unit normal of the section, away from the viewer. */
  readonly normal: Vec3;
  readonly mmPerPx: number;
  readonly slabMm: number;
  readonly under: Under | null;
  /** The modifier that releases the snap is held. */
  readonly released: boolean;
}

export type PlaneName = "flat" | "front" | "side" | "across" | "along";

/** What commands may do to the section view. */
export interface ViewControl {
  /** Null while neither pointer nor keyboard cursor is on the section. */
  readonly pointing: ReadonlySignal<Pointing | null>;
  readonly planeName: ReadonlySignal<PlaneName>;
  readonly slabMm: ReadonlySignal<number>;
  readonly slabMode: ReadonlySignal<"max" | "mean">;
  readonly rulerShown: ReadonlySignal<boolean>;
  readonly outlines: ReadonlySignal<boolean>;
  showPlane(name: PlaneName): void;
  step(planes: number): void;
  zoom(factor: number): void;
  /** Brings a place into the middle of the pane and onto the plane. */
  goTo(at: PointMm): void;
  showAll(): void;
  setSlab(mm: number): void;
  setSlabMode(mode: "max" | "mean"): void;
  autoContrast(): void;
  /** Widens (factor above 1) or narrows the grey window about its middle, and shifts it by a share of its width. */
  changeContrast(factor: number, shift: number): void;
  toggleRuler(): void;
  toggleOutlines(): void;
  /** Moves the keyboard cursor by CSS pixels. */
  moveCursor(dx: number, dy: number): void;
  /** A click where the keyboard cursor is. */
  clickAtCursor(): void;
  /** Goes to the next place along the selected strand or the guide where the image fit falls. */
  nextDoubtfulPlace(): void;
}
