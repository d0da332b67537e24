import type { SectionContent, SectionEvents } from "#renderer/section/section-content.ts";
import { fromPane, type PaneSize, requestPlane } from "#renderer/section/view-plane.ts";
import type { PlaneMm } from "#shared/api/engine.ts";
import type { PointMm } from "#shared/geometry/types.ts";

export const EMPTY_SECTION: SectionContent = {
  plane: null,
  image: null,
  document: null,
  selection: {},
  slabMm: 0.4,
  guide: null,
  underWay: null,
  snap: null,
  ruler: null,
  cursor: null,
  picture: { kind: "ready" },
  frame: "scan",
  outlines: true,
  caption: "",
};

/** A section pane inside a host element, which it fills. Draws on change only. */
export class SectionView {
  private content = EMPTY_SECTION;

  constructor(
    private readonly host: HTMLElement,
    readonly events: SectionEvents = {},
  ) {}

  /** Shows what is given and keeps the rest; drawn at the next frame. */
  show(change: Partial<SectionContent>): void {
    this.content = { ...this.content, ...change };
  }

  get size(): PaneSize {
    return { width: this.host.clientWidth, height: this.host.clientHeight, ratio: globalThis.devicePixelRatio || 1 };
  }

  /** The plane to ask the engine for, or null while no plane is shown or the pane has no size. */
  wantedPlane(quality: "moving" | "still"): PlaneMm | null {
    const { plane } = this.content;
    const { size } = this;
    if (plane === null || size.width < 1 || size.height < 1) return null;
    return requestPlane(plane, size, quality === "moving" ? 0.5 : 1);
  }

  /** Place in the middle of the pane, or null while no plane is shown. */
  middle(): PointMm | null {
    const { plane } = this.content;
    return plane === null ? null : fromPane(plane, this.size, this.size.width / 2, this.size.height / 2);
  }

  /** Moves the keyboard cursor by CSS pixels and reports where it wants to be; starts in the middle of the pane. */
  moveCursor(_dx: number, _dy: number): void {}

  /** A click at the keyboard cursor. */
  clickAtCursor(): void {}

  /** Reads the theme's colours again (after a change of theme). */
  themeChanged(): void {}

  dispose(): void {}
}
