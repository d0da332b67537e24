import "#renderer/section/section.css";
import { drawCursor, drawFrame, drawRuler, drawSnap } from "#renderer/section/draw-furniture.ts";
import { drawProposal, drawUnderWay } from "#renderer/section/draw-guide.ts";
import { GreyPicture } from "#renderer/section/draw-image.ts";
import { drawLabels } from "#renderer/section/draw-labels.ts";
import { drawPlaces } from "#renderer/section/draw-places.ts";
import { drawNodes, drawPins } from "#renderer/section/draw-points.ts";
import { drawOutlines, drawStrands } from "#renderer/section/draw-strands.ts";
import { hitTest } from "#renderer/section/hit-test.ts";
import { PaneCanvases } from "#renderer/section/pane-canvas.ts";
import { listenToPointer } from "#renderer/section/pointer-input.ts";
import { EMPTY_SCENE, type ProjectedScene, projectScene } from "#renderer/section/project-scene.ts";
import type {
  Draggable,
  PointerModifiers,
  SectionContent,
  SectionEvents,
  SectionHit,
  SectionPlace,
} from "#renderer/section/section-content.ts";
import { sectionInk } from "#renderer/section/section-ink.ts";
import { TextOnPicture } from "#renderer/section/text-on-picture.ts";
import { fromPane, type PaneSize, panned, requestPlane, toPane, zoomed } from "#renderer/section/view-plane.ts";
import type { PlaneMm } from "#shared/api/engine.ts";
import type { PointMm } from "#shared/geometry/types.ts";

export const EMPTY_SECTION: SectionContent = {
  plane: null,
  image: null,
  document: null,
  strands: null,
  places: [],
  selection: {},
  slabMm: 0.4,
  guide: null,
  underWay: null,
  proposal: [],
  snap: null,
  ruler: null,
  cursor: null,
  picture: { kind: "ready" },
  frame: "scan",
  outlines: true,
  caption: "",
};

const NO_MODIFIERS: PointerModifiers = { shift: false, alt: false, control: false };
/** Steps of the keyboard cursor, CSS pixels: fine with Alt, large with Shift. */
const CURSOR_STEP = { fine: 1, plain: 4, large: 32 } as const;
/** The cursor keeps this far from the pane's edge; beyond, the picture moves instead. */
const CURSOR_MARGIN_PX = 24;

/** A section pane inside a host element, which it fills. Draws on change only; changes nothing but its own drawing. */
export class SectionView {
  private content = EMPTY_SECTION;
  private scene: ProjectedScene = EMPTY_SCENE;
  private readonly canvases: PaneCanvases;
  private readonly grey = new GreyPicture();
  private readonly note = document.createElement("p");
  private readonly stopListening: () => void;
  private frame = 0;
  private imageDirty = true;
  private sceneDirty = true;

  /** @param draggable which hits are dragged rather than panned over; by default nodes, pins and the ruler's ends. */
  constructor(
    host: HTMLElement,
    private readonly events: SectionEvents = {},
    draggable: Draggable = (hit) => hit.kind !== "strand",
  ) {
    this.canvases = new PaneCanvases(host, "section-view on-picture", 2, () => {
      this.redraw(true);
      this.events.resized?.(this.size);
    });
    const { root } = this.canvases;
    root.tabIndex = 0;
    root.setAttribute("role", "application");
    root.setAttribute("aria-label", "Section. Arrow keys move the cursor, Enter clicks there.");
    this.note.className = "section-note";
    this.note.setAttribute("role", "status");
    this.note.hidden = true;
    root.append(this.note);
    root.addEventListener("keydown", (event) => this.key(event));
    this.stopListening = listenToPointer(root, {
      hitAt: (x, y) => this.hitAt(x, y),
      draggable,
      hover: (x, y, modifiers) => {
        const place = this.placeAt(x, y, modifiers, "pointer");
        if (place === null) return;
        root.dataset.grab = place.hit !== null && draggable(place.hit) ? "yes" : "no";
        this.events.hover?.(place);
      },
      leave: () => this.events.leave?.(),
      click: (x, y, modifiers) => {
        root.focus({ preventScroll: true });
        const place = this.placeAt(x, y, modifiers, "pointer");
        if (place !== null) this.events.click?.(place);
      },
      pan: (dx, dy) => {
        if (this.content.plane !== null) this.events.pan?.(panned(this.content.plane, dx, dy));
      },
      step: (steps) => this.events.step?.(steps),
      zoom: (factor, x, y) => {
        const { plane } = this.content;
        if (plane !== null) this.events.zoom?.(zoomed(plane, factor, fromPane(plane, this.size, x, y)));
      },
      drag: (what, hit, x, y, modifiers) => {
        const place = this.placeAt(x, y, modifiers, "pointer");
        if (place === null) return;
        if (what === "start") this.events.dragStart?.(hit, place);
        else if (what === "move") this.events.dragMove?.(hit, place);
        else this.events.dragEnd?.(hit, place, what === "cancel");
      },
    });
  }

  /** Shows what is given and keeps the rest; drawn at the next frame. */
  show(change: Partial<SectionContent>): void {
    const before = this.content;
    this.content = { ...before, ...change };
    const { plane, image, document, strands, places, selection, slabMm, underWay } = this.content;
    const sameScene =
      document === before.document &&
      strands === before.strands &&
      places === before.places &&
      selection === before.selection &&
      slabMm === before.slabMm &&
      underWay === before.underWay &&
      plane === before.plane;
    if (!sameScene) this.sceneDirty = true;
    if (this.content.picture !== before.picture) this.tellState();
    this.redraw(plane !== before.plane || image !== before.image);
  }

  /** Size of the pane; zero until it was laid out. */
  get size(): PaneSize {
    return this.canvases.size;
  }

  /** The element that takes keys and focus. */
  get element(): HTMLElement {
    return this.canvases.root;
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
    return this.content.plane?.centre ?? null;
  }

  /**
   * Moves the keyboard cursor by CSS pixels and reports where it wants to be; it starts in the middle of the pane. At the
   * pane's edge the picture is panned so that the cursor stays in it.
   */
  moveCursor(dx: number, dy: number): void {
    const { plane, cursor } = this.content;
    if (plane === null) return;
    const { size } = this;
    const now = cursor === null ? { x: size.width / 2, y: size.height / 2 } : toPane(plane, size, cursor);
    const within = (value: number, side: number) => Math.min(Math.max(value, CURSOR_MARGIN_PX), side - CURSOR_MARGIN_PX);
    const wanted = cursor === null ? now : { x: now.x + dx, y: now.y + dy };
    const x = within(wanted.x, size.width);
    const y = within(wanted.y, size.height);
    const at = fromPane(plane, size, wanted.x, wanted.y);
    const beyond = { x: wanted.x - x, y: wanted.y - y };
    if (cursor !== null && (beyond.x !== 0 || beyond.y !== 0)) this.events.pan?.(panned(plane, -beyond.x, -beyond.y));
    const pane = { x, y, depthMm: 0 };
    this.events.cursor?.({ at, pane, hit: this.hitAt(x, y), modifiers: NO_MODIFIERS, by: "keyboard" });
  }

  /** A click at the keyboard cursor; without one, nothing. */
  clickAtCursor(modifiers: PointerModifiers = NO_MODIFIERS): void {
    const place = this.cursorPlace(modifiers);
    if (place !== null) this.events.click?.(place);
  }

  /** What lies under the keyboard cursor, or null while it is not in use. */
  cursorPlace(modifiers: PointerModifiers = NO_MODIFIERS): SectionPlace | null {
    const { plane, cursor } = this.content;
    if (plane === null || cursor === null) return null;
    const { x, y } = toPane(plane, this.size, cursor);
    return this.placeAt(x, y, modifiers, "keyboard");
  }

  /** Reads the theme's colours again (after a change of theme). */
  themeChanged(): void {
    this.redraw(true);
  }

  dispose(): void {
    cancelAnimationFrame(this.frame);
    this.stopListening();
    this.canvases.dispose();
  }

  private key(event: KeyboardEvent): void {
    if (event.defaultPrevented || event.ctrlKey || event.metaKey) return;
    const step = event.shiftKey ? CURSOR_STEP.large : event.altKey ? CURSOR_STEP.fine : CURSOR_STEP.plain;
    const way = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[event.key];
    if (way !== undefined) this.moveCursor(way[0]! * step, way[1]! * step);
    else if (event.key === "Enter" && this.content.cursor !== null) {
      this.clickAtCursor({ shift: event.shiftKey, alt: event.altKey, control: false });
    } else return;
    event.preventDefault();
    event.stopPropagation();
  }

  private placeAt(x: number, y: number, modifiers: PointerModifiers, by: "pointer" | "keyboard"): SectionPlace | null {
    const { plane } = this.content;
    if (plane === null) return null;
    return { at: fromPane(plane, this.size, x, y), pane: { x, y, depthMm: 0 }, hit: this.hitAt(x, y), modifiers, by };
  }

  private hitAt(x: number, y: number): SectionHit | null {
    const { plane, ruler, slabMm } = this.content;
    if (plane === null) return null;
    this.project();
    const { size } = this;
    const ends = ruler === null ? null : { from: toPane(plane, size, ruler.from), to: toPane(plane, size, ruler.to) };
    return hitTest(this.scene, { ruler: ends }, x, y, slabMm / 2);
  }

  private project(): void {
    const { plane } = this.content;
    if (!this.sceneDirty || plane === null) return;
    this.scene = projectScene(this.content, plane, this.size);
    this.sceneDirty = false;
  }

  private tellState(): void {
    const { picture } = this.content;
    this.note.hidden = picture.kind === "ready";
    this.note.className = picture.kind === "error" ? "section-note failed" : "section-note";
    this.note.textContent = picture.kind === "loading" ? picture.what : picture.kind === "error" ? picture.message : "";
  }

  private redraw(image: boolean): void {
    if (image) {
      this.imageDirty = true;
      this.sceneDirty = true;
    }
    if (this.frame !== 0) return;
    this.frame = requestAnimationFrame(() => {
      this.frame = 0;
      this.draw();
    });
  }

  private draw(): void {
    const { size, content } = this;
    const [picture, overlay] = this.canvases.layers.map((layer) => layer.getContext("2d")!);
    if (this.imageDirty) {
      picture!.clearRect(0, 0, size.width * size.ratio + 1, size.height * size.ratio + 1);
      if (content.image !== null && content.plane !== null) this.grey.draw(picture!, content.image, content.plane, size);
      this.imageDirty = false;
    }
    const to = overlay!;
    to.setTransform(1, 0, 0, 1, 0, 0);
    to.clearRect(0, 0, size.width * size.ratio + 1, size.height * size.ratio + 1);
    if (content.plane === null) return;
    to.setTransform(size.ratio, 0, 0, size.ratio, 0, 0);
    this.project();
    const { plane } = content;
    const half = content.slabMm / 2;
    const ink = sectionInk(this.canvases.root);
    const text = new TextOnPicture(to, size.width, size.height, ink);
    drawStrands(to, this.scene, half, ink);
    if (content.outlines) drawOutlines(to, this.scene, plane.mmPerPx, ink);
    drawNodes(to, this.scene, half, ink);
    drawProposal(to, content.proposal, plane, size, ink);
    drawUnderWay(to, content.underWay, content.guide, plane, size, ink);
    drawPins(to, this.scene, half, ink);
    drawPlaces(to, this.scene, half, ink);
    drawFrame(to, text, content, plane, size, ink);
    drawRuler(to, text, content, plane, size, ink);
    drawSnap(to, text, content, plane, size, ink);
    drawLabels(text, this.scene, size, plane.mmPerPx, half, ink);
    drawCursor(to, content, plane, size, ink);
  }
}
