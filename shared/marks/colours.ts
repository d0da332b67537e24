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
 * Colours on pictures, which are dark in every theme. The eight tree colours were found by search, not by taste alone: in OKLab (Ottosson 2020) any two
 * of them, and each of them and the accent, stay at least 0.08 apart for full colour vision and for simulated red, green and
 * blue blindness (Machado et al. 2009, severity 1), and each has a contrast of 4.5:1 or more against the grounds they stand on.
 * Eight hues are more than dichromats can name, so a tree is told by its line pattern as well.
 * @source own search; the bounds are checked by a test
 */
export const PICTURE_COLOURS: ViewColours = {
  trees: ["#d1a818", "#6daada", "#e8728b", "#f0ef9f", "#6883dd", "#988813", "#b2cda2", "#aaf4fd"],
  accent: "#5ad1e6",
  ink: "#eceae6",
  paper: "#141517",
  pane: "#1c1e21",
  line: "#3b4046",
  warn: "#ff9175",
};

/** The colours as `read` gives them by custom property name; a missing or empty one falls back to {@link PICTURE_COLOURS}. */
export function coloursFrom(read: (property: string) => string): ViewColours {
  const or = (name: string, fallback: string) => read(name).trim() || fallback;
  const trees = Array.from({ length: TREE_COLOURS }, (_, i) => or(`--tree-${i + 1}`, PICTURE_COLOURS.trees[i]!));
  return {
    trees,
    accent: or("--accent", PICTURE_COLOURS.accent),
    ink: or("--ink", PICTURE_COLOURS.ink),
    paper: or("--paper", PICTURE_COLOURS.paper),
    pane: or("--pane", PICTURE_COLOURS.pane),
    line: or("--line", PICTURE_COLOURS.line),
    warn: or("--warn", PICTURE_COLOURS.warn),
  };
}
