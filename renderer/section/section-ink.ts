import { coloursFrom, type ViewColours } from "#shared/marks/colours.ts";

/** Colours of the pane, and the dark casing that keeps light lines and texts readable on any grey. */
export interface SectionInk extends ViewColours {
  readonly casing: string;
  readonly font: string;
}

/** The theme's colours at `element`. */
export function sectionInk(element: Element): SectionInk {
  const style = getComputedStyle(element);
  const colours = coloursFrom((name) => style.getPropertyValue(name));
  return { ...colours, casing: "rgb(0 0 0 / 72%)", font: `500 12px ${style.fontFamily || "sans-serif"}` };
}
