import type { Command } from "#renderer/editor/commands/command.ts";
import type { ScreenControl } from "#renderer/editor/commands/desk-context.ts";
import type { PlaneName, ViewControl } from "#renderer/editor/view-control.ts";

/** What the commands of a section act on, whatever the screen around it. */
export interface ViewContext {
  readonly view: ViewControl;
  readonly screen: Pick<ScreenControl, "focusSection" | "toggleTheme">;
}

const always = () => true;
const CURSOR_PX = 4;
const CURSOR_FAR_PX = 32;

function plane(name: PlaneName, key: string, label: string): Command<ViewContext> {
  return {
    name: `plane-${name}`,
    group: "See",
    label,
    keys: [key],
    enabled: always,
    perform: ({ view }) => view.showPlane(name),
  };
}

function cursor(name: string, key: string, words: string, dx: number, dy: number): Command<ViewContext>[] {
  const move =
    (px: number) =>
    ({ view }: ViewContext) =>
      view.moveCursor(dx * px, dy * px);
  return [
    { name: `cursor-${name}`, group: "See", label: `Cursor ${words}`, keys: [key], enabled: always, perform: move(CURSOR_PX) },
    {
      name: `cursor-far-${name}`,
      group: "See",
      label: `Cursor far ${words}`,
      keys: [`Shift+${key}`],
      enabled: always,
      perform: move(CURSOR_FAR_PX),
    },
    {
      name: `cursor-fine-${name}`,
      group: "See",
      label: `Cursor one pixel ${words}`,
      keys: [`Alt+${key}`],
      enabled: always,
      perform: move(1),
    },
  ];
}

/** Thickness steps of the slab, millimetres. */
export const SLABS_MM: readonly number[] = [0, 0.1, 0.2, 0.4, 0.8, 1.5, 3];

/** The slab one step thicker (+1) or thinner (-1). */
export function nextSlab(mm: number, by: 1 | -1): number {
  if (by === 1) return SLABS_MM.find((step) => step > mm + 1e-9) ?? SLABS_MM.at(-1)!;
  return [...SLABS_MM].reverse().find((step) => step < mm - 1e-9) ?? 0;
}

/** What the section shows; nothing here changes a tree. */
export const VIEW_COMMANDS: readonly Command<ViewContext>[] = [
  plane("flat", "1", "Plane: flat"),
  plane("front", "2", "Plane: front"),
  plane("side", "3", "Plane: side"),
  plane("across", "4", "Plane: across the string"),
  plane("along", "5", "Plane: along the string"),
  {
    name: "step-away",
    group: "See",
    label: "Next plane, away from you",
    keys: ["PageDown"],
    enabled: always,
    perform: ({ view }) => view.step(1),
  },
  {
    name: "step-towards",
    group: "See",
    label: "Next plane, towards you",
    keys: ["PageUp"],
    enabled: always,
    perform: ({ view }) => view.step(-1),
  },
  {
    name: "step-far-away",
    group: "See",
    label: "Ten planes away",
    keys: ["Shift+PageDown"],
    enabled: always,
    perform: ({ view }) => view.step(10),
  },
  {
    name: "step-far-towards",
    group: "See",
    label: "Ten planes towards you",
    keys: ["Shift+PageUp"],
    enabled: always,
    perform: ({ view }) => view.step(-10),
  },
  { name: "closer", group: "See", label: "Closer", keys: ["+", "="], enabled: always, perform: ({ view }) => view.zoom(1.25) },
  { name: "farther", group: "See", label: "Farther", keys: ["-"], enabled: always, perform: ({ view }) => view.zoom(0.8) },
  {
    name: "show-all",
    group: "See",
    label: "Show the whole plane",
    keys: ["Home"],
    enabled: always,
    perform: ({ view }) => view.showAll(),
  },
  ...cursor("left", "ArrowLeft", "left", -1, 0),
  ...cursor("right", "ArrowRight", "right", 1, 0),
  ...cursor("up", "ArrowUp", "up", 0, -1),
  ...cursor("down", "ArrowDown", "down", 0, 1),
  {
    name: "slab-thicker",
    group: "See",
    label: "Thicker slab",
    keys: ["]"],
    enabled: always,
    perform: ({ view }) => view.setSlab(nextSlab(view.slabMm.value, 1)),
  },
  {
    name: "slab-thinner",
    group: "See",
    label: "Thinner slab",
    keys: ["["],
    enabled: always,
    perform: ({ view }) => view.setSlab(nextSlab(view.slabMm.value, -1)),
  },
  {
    name: "slab-way",
    group: "See",
    label: "Slab shows the maximum, or the mean",
    keys: ["\\"],
    enabled: always,
    perform: ({ view }) => view.setSlabMode(view.slabMode.value === "max" ? "mean" : "max"),
  },
  {
    name: "contrast-auto",
    group: "See",
    label: "Contrast: by the histogram",
    keys: ["A"],
    enabled: always,
    perform: ({ view }) => view.autoContrast(),
  },
  {
    name: "contrast-more",
    group: "See",
    label: "More contrast",
    keys: ["."],
    enabled: always,
    perform: ({ view }) => view.changeContrast(0.85, 0),
  },
  {
    name: "contrast-less",
    group: "See",
    label: "Less contrast",
    keys: [","],
    enabled: always,
    perform: ({ view }) => view.changeContrast(1 / 0.85, 0),
  },
  {
    name: "brighter",
    group: "See",
    label: "Brighter",
    keys: ["'"],
    enabled: always,
    perform: ({ view }) => view.changeContrast(1, -0.08),
  },
  {
    name: "darker",
    group: "See",
    label: "Darker",
    keys: [";"],
    enabled: always,
    perform: ({ view }) => view.changeContrast(1, 0.08),
  },
  { name: "ruler", group: "See", label: "Ruler", keys: ["Shift+R"], enabled: always, perform: ({ view }) => view.toggleRuler() },
  {
    name: "outlines",
    group: "See",
    label: "Outlines of the strings",
    keys: ["Shift+O"],
    enabled: always,
    perform: ({ view }) => view.toggleOutlines(),
  },
  {
    name: "focus-section",
    group: "See",
    label: "Keyboard to the section",
    keys: ["Shift+S"],
    enabled: always,
    perform: ({ screen }) => screen.focusSection(),
  },
  {
    name: "theme",
    group: "See",
    label: "Light or dark",
    keys: ["Shift+L"],
    enabled: always,
    perform: ({ screen }) => screen.toggleTheme(),
  },
];
