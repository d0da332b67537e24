const CLICK_SLACK_PX = 4;
const DEG_PER_PX = 0.4;
const TURN_STEP = { plain: 5, large: 30 } as const;
const SHIFT_STEP_PX = 24;
const ZOOM_STEP = 1.2;

export interface SpaceActions {
  turn(turnDeg: number, tiltDeg: number): void;
  /** The picture moves by so many CSS pixels. */
  shift(dx: number, dy: number): void;
  zoom(factor: number): void;
  all(): void;
  click(x: number, y: number, modifiers: { shift: boolean; alt: boolean; control: boolean }): void;
  hover(x: number, y: number): void;
  leave(): void;
}

/** Turns pointer, wheel and keys into actions: drag turns, shift-drag or the middle button moves; all of it by keys too. */
export function listenToSpace(root: HTMLElement, actions: SpaceActions): () => void {
  const off = new AbortController();
  const options = { signal: off.signal };
  let press: { x: number; y: number; moved: boolean; shifts: boolean; button: number } | null = null;

  const place = (event: MouseEvent) => {
    const box = root.getBoundingClientRect();
    return { x: event.clientX - box.left, y: event.clientY - box.top };
  };
  root.addEventListener(
    "pointerdown",
    (event) => {
      if (press !== null || (event.button !== 0 && event.button !== 1)) return;
      if (event.button === 1) event.preventDefault();
      root.setPointerCapture(event.pointerId);
      press = { ...place(event), moved: false, shifts: event.shiftKey || event.button === 1, button: event.button };
    },
    options,
  );
  root.addEventListener(
    "pointermove",
    (event) => {
      const at = place(event);
      if (press === null) return actions.hover(at.x, at.y);
      const dx = at.x - press.x;
      const dy = at.y - press.y;
      if (!press.moved && Math.hypot(dx, dy) <= CLICK_SLACK_PX) return;
      if (press.shifts) actions.shift(dx, dy);
      else actions.turn(-dx * DEG_PER_PX, dy * DEG_PER_PX);
      press = { ...press, ...at, moved: true };
    },
    options,
  );
  const finish = (event: PointerEvent, cancelled: boolean) => {
    const done = press;
    press = null;
    if (done === null || done.moved || done.button !== 0 || cancelled) return;
    root.focus({ preventScroll: true });
    actions.click(done.x, done.y, { shift: event.shiftKey, alt: event.altKey, control: event.ctrlKey || event.metaKey });
  };
  root.addEventListener("pointerup", (event) => finish(event, false), options);
  root.addEventListener("pointercancel", (event) => finish(event, true), options);
  root.addEventListener("pointerleave", () => press === null && actions.leave(), options);
  root.addEventListener(
    "wheel",
    (event) => {
      event.preventDefault();
      const travel = event.deltaY * (event.deltaMode === 1 ? 100 / 3 : event.deltaMode === 2 ? 400 : 1);
      actions.zoom(2 ** (-Math.max(-300, Math.min(300, travel)) / 400));
    },
    { ...options, passive: false },
  );
  root.addEventListener(
    "keydown",
    (event) => {
      if (event.defaultPrevented || event.ctrlKey || event.metaKey || !keyAction(event, actions)) return;
      event.preventDefault();
      event.stopPropagation();
    },
    options,
  );
  return () => off.abort();
}

function keyAction(event: KeyboardEvent, actions: SpaceActions): boolean {
  const way = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[event.key];
  if (way !== undefined) {
    const step = event.shiftKey ? TURN_STEP.large : TURN_STEP.plain;
    if (event.altKey) actions.shift(way[0]! * SHIFT_STEP_PX, way[1]! * SHIFT_STEP_PX);
    else actions.turn(way[0]! * step, -way[1]! * step);
    return true;
  }
  if (event.key === "+" || event.key === "=") actions.zoom(ZOOM_STEP);
  else if (event.key === "-") actions.zoom(1 / ZOOM_STEP);
  else if (event.key === "Home") actions.all();
  else return false;
  return true;
}
