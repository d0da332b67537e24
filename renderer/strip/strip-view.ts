import "#renderer/strip/strip.css";
import { drawStrip, type StripInk, StripPictures } from "#renderer/strip/draw-strip.ts";
import type { StripContent, StripEvents, StripSizes } from "#renderer/strip/strip-content.ts";
import { arcAtPlace, type StripLayout, stripLayout } from "#renderer/strip/strip-layout.ts";
import { coloursFrom } from "#shared/marks/colours.ts";

export const EMPTY_STRIP: StripContent = {
  title: null,
  hint: "Select a strand to see it laid straight, leaflet at the top.",
  image: null,
  film: null,
  lengthMm: 0,
  halfWidthMm: 1.5,
  filmHalfWidthMm: 1,
  at: new Float64Array(0),
  radii: new Float64Array(0),
  doubtful: [],
  imageFit: null,
  pins: [],
  position: null,
  turn: 0,
  colour: 0,
  state: { kind: "ready" },
  topWord: "",
  bottomWord: "",
};

/** Steps along the strand by keys, millimetres. */
const KEY_STEP_MM = { plain: 0.1, large: 1 } as const;
const TURN_STEP_DEG = 5;

/** The selected strand laid straight, inside a host element, which it fills. Draws on change only. */
export class StripView {
  readonly element = document.createElement("div");
  private content = EMPTY_STRIP;
  private readonly title = document.createElement("p");
  private readonly facts = document.createElement("p");
  private readonly stage = document.createElement("div");
  private readonly canvas = document.createElement("canvas");
  private readonly turnRow = document.createElement("label");
  private readonly turnInput = document.createElement("input");
  private readonly turnOutput = document.createElement("output");
  private readonly note = document.createElement("p");
  private readonly pictures = new StripPictures();
  private readonly watcher: ResizeObserver;
  private layout: StripLayout = stripLayout(0, 0);
  private ratio = 1;
  private hover: number | null = null;
  private frame = 0;

  constructor(
    host: HTMLElement,
    private readonly events: StripEvents = {},
  ) {
    this.element.className = "strip-view";
    this.title.className = "strip-title";
    this.facts.className = "strip-facts";
    this.note.className = "strip-note";
    this.note.setAttribute("role", "status");
    this.stage.className = "strip-stage on-picture";
    this.stage.tabIndex = 0;
    this.stage.setAttribute("role", "slider");
    this.stage.setAttribute("aria-orientation", "vertical");
    this.stage.setAttribute("aria-label", "Place along the strand");
    this.stage.append(this.canvas);
    this.turnRow.className = "strip-turn";
    this.turnInput.type = "range";
    this.turnInput.min = "0";
    this.turnInput.max = String(180 - TURN_STEP_DEG);
    this.turnInput.step = String(TURN_STEP_DEG);
    this.turnRow.append("Turn", this.turnInput, this.turnOutput);
    this.element.append(this.title, this.facts, this.note, this.stage, this.turnRow);
    host.append(this.element);
    this.listen();
    this.watcher = new ResizeObserver(() => this.resize());
    this.watcher.observe(this.stage);
    this.tell();
  }

  /** Shows what is given and keeps the rest; drawn at the next frame. */
  show(change: Partial<StripContent>): void {
    this.content = { ...this.content, ...change };
    this.tell();
    this.redraw();
  }

  /** Sizes to ask the engine for, device pixels. */
  get sizes(): StripSizes {
    const { strip, film, filmCount } = this.layout;
    const pixels = (css: number) => Math.max(1, Math.round(css * this.ratio));
    return {
      strip: { width: pixels(strip.width), height: pixels(strip.height) },
      film: { count: Math.max(1, filmCount), side: pixels(film.width) },
    };
  }

  /** Reads the theme's colours again (after a change of theme). */
  themeChanged(): void {
    this.redraw();
  }

  dispose(): void {
    cancelAnimationFrame(this.frame);
    this.watcher.disconnect();
    this.element.remove();
  }

  private listen(): void {
    const { stage } = this;
    const arc = (event: PointerEvent) => {
      const box = stage.getBoundingClientRect();
      const sections = this.content.film?.header.at ?? [];
      return arcAtPlace(this.layout, sections, event.clientX - box.left, event.clientY - box.top, this.content.lengthMm);
    };
    stage.addEventListener("pointerdown", (event) => {
      if (event.button !== 0 || !this.usable) return;
      stage.setPointerCapture(event.pointerId);
      this.events.place?.(arc(event));
    });
    stage.addEventListener("pointermove", (event) => {
      if (!this.usable) return;
      this.hover = arc(event);
      if (stage.hasPointerCapture(event.pointerId)) this.events.place?.(this.hover);
      this.events.hover?.(this.hover);
      this.redraw();
    });
    stage.addEventListener("pointerleave", () => {
      this.hover = null;
      this.events.hover?.(null);
      this.redraw();
    });
    stage.addEventListener("keydown", (event) => {
      const to = this.usable && !event.ctrlKey && !event.metaKey ? this.keyPlace(event) : null;
      if (to === null) return;
      event.preventDefault();
      event.stopPropagation();
      this.events.place?.(Math.min(this.content.lengthMm, Math.max(0, to)));
    });
    this.turnInput.addEventListener("input", () => this.events.turn?.(this.turnInput.valueAsNumber));
    // The desk's single-key commands must not run while the handle has the keys.
    this.turnInput.addEventListener("keydown", (event) => {
      if (/^(Arrow|Page|Home|End)/.test(event.key)) event.stopPropagation();
    });
  }

  private keyPlace(event: KeyboardEvent): number | null {
    const now = this.content.position ?? 0;
    const step = event.shiftKey ? KEY_STEP_MM.large : KEY_STEP_MM.plain;
    switch (event.key) {
      case "ArrowUp":
        return now + step;
      case "ArrowDown":
        return now - step;
      case "PageUp":
        return now + KEY_STEP_MM.large;
      case "PageDown":
        return now - KEY_STEP_MM.large;
      case "Home":
        return 0;
      case "End":
        return this.content.lengthMm;
      default:
        return null;
    }
  }

  private get usable(): boolean {
    return this.content.title !== null && this.content.lengthMm > 0;
  }

  private tell(): void {
    const { content, stage } = this;
    const empty = content.title === null;
    this.title.hidden = this.facts.hidden = this.turnRow.hidden = empty;
    // Kept in the layout while empty, so that its size is known when the first strand is chosen.
    stage.style.visibility = empty ? "hidden" : "visible";
    this.title.textContent = content.title ?? "";
    this.facts.textContent = factsOf(content);
    this.note.hidden = !empty && content.state.kind !== "error" && content.state.kind !== "loading";
    this.note.className = content.state.kind === "error" ? "strip-note failed" : "strip-note";
    this.note.textContent =
      content.state.kind === "error"
        ? content.state.message
        : empty
          ? content.hint
          : content.state.kind === "loading"
            ? "Laying the strand straight …"
            : "";
    this.turnInput.value = String(content.turn);
    this.turnOutput.textContent = `${content.turn}°`;
    stage.setAttribute("aria-valuemin", "0");
    stage.setAttribute("aria-valuemax", content.lengthMm.toFixed(2));
    stage.setAttribute("aria-valuenow", (content.position ?? 0).toFixed(2));
    stage.setAttribute(
      "aria-valuetext",
      content.position === null ? "not on this strand" : `${content.position.toFixed(2)} mm from the lower end`,
    );
  }

  private resize(): void {
    const { clientWidth, clientHeight } = this.stage;
    this.ratio = globalThis.devicePixelRatio || 1;
    this.canvas.width = Math.round(clientWidth * this.ratio);
    this.canvas.height = Math.round(clientHeight * this.ratio);
    this.layout = stripLayout(clientWidth, clientHeight);
    this.redraw();
    this.events.resized?.(this.sizes);
  }

  private redraw(): void {
    if (this.frame !== 0) return;
    this.frame = requestAnimationFrame(() => {
      this.frame = 0;
      const to = this.canvas.getContext("2d")!;
      to.setTransform(1, 0, 0, 1, 0, 0);
      to.clearRect(0, 0, this.canvas.width, this.canvas.height);
      if (!this.usable) return;
      to.setTransform(this.ratio, 0, 0, this.ratio, 0, 0);
      drawStrip(to, this.content, this.layout, this.pictures, this.hover, this.ink());
    });
  }

  private ink(): StripInk {
    const style = getComputedStyle(this.stage);
    const colours = coloursFrom((name) => style.getPropertyValue(name));
    return { ...colours, soft: style.getPropertyValue("--soft").trim() || colours.ink, family: style.fontFamily };
  }
}

/** Length, width of the picture, image fit, and what the gaps of the profile mean. */
function factsOf(content: StripContent): string {
  if (content.title === null) return "";
  const fit = content.imageFit === null ? "not followed in the image" : `image fit ${content.imageFit.toFixed(2)}`;
  const facts = [`${content.lengthMm.toFixed(1)} mm long`, `${(2 * content.halfWidthMm).toFixed(1)} mm wide`, fit];
  const measured = content.radii.some((radius) => !Number.isNaN(radius));
  if (content.radii.some((radius) => Number.isNaN(radius))) {
    facts.push(measured ? "hatched: radius below resolution" : "radius below resolution");
  }
  return facts.join(" · ");
}
