import type { Draggable, PointerModifiers, SectionHit } from "#renderer/section/section-content.ts";
import { WheelSteps, wheelTravelPx } from "#renderer/section/wheel-steps.ts";

/** Movement up to which press and release count as a click, CSS pixels. */
const CLICK_SLACK_PX = 4;

/** What pointers do on the pane, in its CSS pixels. */
export interface PointerActions {
  hitAt(x: number, y: number): SectionHit | null;
  readonly draggable: Draggable;
  hover(x: number, y: number, modifiers: PointerModifiers): void;
  leave(): void;
  click(x: number, y: number, modifiers: PointerModifiers): void;
  pan(dx: number, dy: number): void;
  step(steps: number): void;
  zoom(factor: number, x: number, y: number): void;
  drag(what: "start" | "move" | "end" | "cancel", hit: SectionHit, x: number, y: number, modifiers: PointerModifiers): void;
}

type Press =
  | { readonly kind: "undecided"; readonly hit: SectionHit | null; readonly button: number }
  | { readonly kind: "pan"; readonly button: number }
  | { readonly kind: "drag"; readonly hit: SectionHit; readonly button: number };

/** Turns pointer and wheel events into actions; the returned function takes the listeners off. */
export function listenToPointer(root: HTMLElement, actions: PointerActions): () => void {
  const wheel = new WheelSteps();
  const off = new AbortController();
  const options = { signal: off.signal };
  let press: Press | null = null;
  let start = { x: 0, y: 0 };
  let last = { x: 0, y: 0 };

  const place = (event: MouseEvent) => {
    const box = root.getBoundingClientRect();
    return { x: event.clientX - box.left, y: event.clientY - box.top };
  };

  root.addEventListener(
    "pointerdown",
    (event) => {
      if (press !== null || (event.button !== 0 && event.button !== 1)) return;
      // The middle button would start the browser's own scrolling.
      if (event.button === 1) event.preventDefault();
      root.setPointerCapture(event.pointerId);
      start = last = place(event);
      const hit = event.button === 0 ? actions.hitAt(start.x, start.y) : null;
      press = { kind: "undecided", hit, button: event.button };
    },
    options,
  );

  root.addEventListener(
    "pointermove",
    (event) => {
      const at = place(event);
      if (press === null) {
        actions.hover(at.x, at.y, modifiersOf(event));
        return;
      }
      if (press.kind === "undecided") {
        if (Math.hypot(at.x - start.x, at.y - start.y) <= CLICK_SLACK_PX) return;
        const { hit, button } = press;
        if (hit !== null && actions.draggable(hit)) {
          press = { kind: "drag", hit, button };
          actions.drag("start", hit, start.x, start.y, modifiersOf(event));
        } else press = { kind: "pan", button };
      }
      if (press.kind === "drag") actions.drag("move", press.hit, at.x, at.y, modifiersOf(event));
      else actions.pan(at.x - last.x, at.y - last.y);
      last = at;
    },
    options,
  );

  const finish = (event: PointerEvent, cancelled: boolean) => {
    if (press === null) return;
    const at = place(event);
    const done = press;
    press = null;
    if (done.kind === "drag") actions.drag(cancelled ? "cancel" : "end", done.hit, at.x, at.y, modifiersOf(event));
    else if (done.kind === "undecided" && done.button === 0 && !cancelled) actions.click(start.x, start.y, modifiersOf(event));
  };
  root.addEventListener("pointerup", (event) => press?.button === event.button && finish(event, false), options);
  root.addEventListener("pointercancel", (event) => finish(event, true), options);
  root.addEventListener("lostpointercapture", (event) => finish(event, true), options);
  root.addEventListener("pointerleave", () => press === null && actions.leave(), options);
  root.addEventListener(
    "keydown",
    (event) => {
      if (event.key !== "Escape" || press?.kind !== "drag") return;
      event.stopPropagation();
      const { hit } = press;
      press = null;
      actions.drag("cancel", hit, last.x, last.y, { shift: event.shiftKey, alt: event.altKey, control: event.ctrlKey });
    },
    options,
  );
  root.addEventListener(
    "wheel",
    (event) => {
      event.preventDefault();
      const at = place(event);
      const travel = wheelTravelPx(event);
      if (event.ctrlKey || event.metaKey) {
        // A pinch comes as a control-wheel of small travels; 2 ** (1/4) for each notch.
        actions.zoom(2 ** (-Math.max(-240, Math.min(240, travel)) / 400), at.x, at.y);
        return;
      }
      const steps = wheel.take(travel);
      if (steps !== 0) actions.step(event.shiftKey ? steps * 5 : steps);
    },
    { ...options, passive: false },
  );
  return () => off.abort();
}

function modifiersOf(event: PointerEvent): PointerModifiers {
  return { shift: event.shiftKey, alt: event.altKey, control: event.ctrlKey || event.metaKey };
}
