import type { StripContent, StripEvents, StripSizes } from "#renderer/strip/strip-content.ts";

export const EMPTY_STRIP: StripContent = {
  title: null,
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

/** The selected strand laid straight, inside a host element, which it fills. Draws on change only. */
export class StripView {
  private content = EMPTY_STRIP;

  constructor(
    readonly host: HTMLElement,
    readonly events: StripEvents = {},
  ) {}

  show(change: Partial<StripContent>): void {
    this.content = { ...this.content, ...change };
  }

  /** Sizes to ask the engine for. */
  get sizes(): StripSizes {
    return { strip: { width: 1, height: 1 }, film: { count: 1, side: 1 } };
  }

  themeChanged(): void {}

  dispose(): void {}
}
