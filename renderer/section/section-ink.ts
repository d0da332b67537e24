import { coloursFrom, type ViewColours } from "#shared/marks/colours.ts";

/** Colours of the pane, and the casing that keeps lines readable on any grey. */
export interface SectionInk extends ViewColours {
  readonly casing: string;
  /** Texts on the picture, and their casing: pictures are dark in every theme. */
  readonly text: string;
  readonly textCasing: string;
  readonly font: string;
}

/** The theme's colours at `element`. */
export function sectionInk(element: Element): SectionInk {
  const style = getComputedStyle(element);
  const colours = coloursFrom((name) => style.getPropertyValue(name));
  const family = style.fontFamily || "sans-serif";
  return {
    ...colours,
    casing: casingFor(colours.ink),
    text: "#f4f2ee",
    textCasing: "rgb(0 0 0 / 75%)",
    font: `500 12px ${family}`,
  };
}

/** A tree's colour for its name on the picture: itself where it is light enough to read there. */
export function nameColour(ink: SectionInk, colour: string): string {
  return relativeLightness(colour) > 0.49 ? colour : ink.text;
}

/** Dark casing under light lines, light casing under dark ones: lines and texts are on the ink's side of grey. */
export function casingFor(ink: string): string {
  return relativeLightness(ink) > 0.5 ? "rgb(0 0 0 / 72%)" : "rgb(255 255 255 / 78%)";
}

function relativeLightness(colour: string): number {
  const hex = /^#([0-9a-f]{6})$/i.exec(colour.trim());
  if (hex === null) return 1;
  const value = Number.parseInt(hex[1]!, 16);
  return (0.299 * (value >> 16) + 0.587 * ((value >> 8) & 255) + 0.114 * (value & 255)) / 255;
}
