import type { SpaceContent, SpaceEvents } from "#renderer/space/space-content.ts";
import { pointMm } from "#shared/geometry/types.ts";

export const EMPTY_SPACE: SpaceContent = {
  document: null,
  selection: {},
  guide: null,
  pins: [],
  plane: null,
  picture: null,
  surface: null,
  valve: null,
  bounds: { centre: pointMm(0, 0, 0), radiusMm: 30 },
  caption: "",
};

/** The trees in space inside a host element, which it fills. Draws on change only; without WebGL it says so and stays still. */
export class SpaceView {
  private content = EMPTY_SPACE;
  /** False when this computer offers no WebGL; every method is then without effect. */
  readonly available: boolean = false;

  constructor(
    readonly host: HTMLElement,
    readonly events: SpaceEvents = {},
  ) {}

  show(change: Partial<SpaceContent>): void {
    this.content = { ...this.content, ...change };
  }

  /** Turns about the valve's axis (`aboutUpDeg`) and tilts. */
  turn(_aboutUpDeg: number, _tiltDeg: number): void {}

  /** Above 1 = closer. */
  zoom(_factor: number): void {}

  /** Shows everything upright from the front. */
  showAll(): void {}

  /** Looks from where the section looks: along its line of sight. */
  lookAlongSection(): void {}

  themeChanged(): void {}

  dispose(): void {}
}
