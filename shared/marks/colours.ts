import { TREE_COLOURS } from "#shared/marks/tree-mark.ts";

/** Colours of the pictures, as CSS texts; the page's theme names them, these are their values when it does not. */
export interface ViewColours {
  /** `--tree-1` to `--tree-8`. */
  readonly trees: readonly string[];
  readonly accent: string;
  readonly ink: string;
  readonly paper: string;
  readonly pane: string;
  readonly line: string;
  readonly warn: string;
}

/**
 * Eight hues for lines on grey pictures. They are told apart by people with red, green and blue blindness (smallest CIEDE-like
 * distance in OKLab between any two under simulated dichromacy is checked by a test) and stand at 3:1 or more against the
 * pane; which tree is which never rests on the hue alone (see the line patterns).
 */
export const DARK_COLOURS: ViewColours = {
  trees: ["#f2b134", "#4fb3ff", "#ff7a59", "#7ee0b5", "#d9a0ff", "#fff08a", "#e05a8a", "#b7c4d6"],
  accent: "#5ad1e6",
  ink: "#e8ebee",
  paper: "#14171a",
  pane: "#0c0e10",
  line: "#3a4148",
  warn: "#ffb020",
};

/** The colours as `read` gives them by custom property name; a missing or empty one falls back to the dark set. */
export function coloursFrom(read: (property: string) => string): ViewColours {
  const or = (name: string, fallback: string) => read(name).trim() || fallback;
  const trees = Array.from({ length: TREE_COLOURS }, (_, i) => or(`--tree-${i + 1}`, DARK_COLOURS.trees[i]!));
  return {
    trees,
    accent: or("--accent", DARK_COLOURS.accent),
    ink: or("--ink", DARK_COLOURS.ink),
    paper: or("--paper", DARK_COLOURS.paper),
    pane: or("--pane", DARK_COLOURS.pane),
    line: or("--line", DARK_COLOURS.line),
    warn: or("--warn", DARK_COLOURS.warn),
  };
}
