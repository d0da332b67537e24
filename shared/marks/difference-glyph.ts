import type { DifferenceKind } from "#shared/compare/differences.ts";
import type { NodeGlyph } from "#shared/marks/node-glyph.ts";

const dot = (x: number, y: number, r = 1.7) =>
  `M ${x - r} ${y} A ${r} ${r} 0 1 1 ${x + r} ${y} A ${r} ${r} 0 1 1 ${x - r} ${y} Z`;

/**
 * One shape per kind of difference, in the box and the manner of the nodes' glyphs: what only A has is dotted, what only B has
 * carries a plus, what lies elsewhere an arrow.
 */
export const DIFFERENCE_GLYPHS: Readonly<Record<DifferenceKind, NodeGlyph>> = {
  // A string whose side branch is only dots.
  "missed-branch": { fill: `${dot(0.5, 0.5)} ${dot(4, -3.5)} ${dot(7.5, -7.5)}`, stroke: "M -4 8 L -4 -8" },
  // A string with a side branch, and a plus.
  "extra-branch": { fill: "", stroke: "M -6 8 L -6 -8 M -6 4 L 2 -4 M 1 5 L 9 5 M 5 1 L 5 9" },
  // A fork, and an arrow away from it.
  "moved-fork": { fill: "", stroke: "M -5 8 L -5 2 L -9 -6 M -5 2 L -1 -6 M 1 2 L 9 2 M 6 -2 L 9 2 L 6 6" },
  // A capped end, and an arrow away from it.
  "moved-end": { fill: "", stroke: "M -6 8 L -6 -5 M -10 -5 L -2 -5 M 0 2 L 9 2 M 6 -2 L 9 2 L 6 6" },
  // A capped end with dots where the string goes on.
  "short-end": { fill: `${dot(0, -3)} ${dot(0, -8)}`, stroke: "M 0 8 L 0 2 M -5 2 L 5 2" },
  // A branch that leaves the string lower, and dots where the other set has it.
  "joined-differently": { fill: `${dot(-1, -5)} ${dot(3.5, -6.5)}`, stroke: "M -6 8 L -6 -8 M -6 6 L 8 -7" },
  // Two strings that cross over.
  "exchanged-tails": { fill: "", stroke: "M -6 9 L -6 5 L 6 -5 L 6 -9 M 6 9 L 6 5 L 1.8 1.5 M -1.8 -1.5 L -6 -5 L -6 -9" },
  // Two lines of writing, one struck through.
  renamed: { fill: "", stroke: "M -8 -4 L 8 -4 M -4 -8 L 4 0 M -8 5 L 8 5" },
  // A whole tree in dots.
  "tree-only-a": {
    fill: `${dot(0, 8)} ${dot(0, 3)} ${dot(-3.5, -2)} ${dot(3.5, -2)} ${dot(-7, -7)} ${dot(7, -7)}`,
    stroke: "",
  },
  // A whole tree with a plus.
  "tree-only-b": { fill: "", stroke: "M -4 9 L -4 2 L -9 -7 M -4 2 L 1 -7 M 2 5 L 10 5 M 6 1 L 6 9" },
  // A dotted bridge between two strings.
  "link-only-a": { fill: `${dot(-3.5, 0)} ${dot(0, 0)} ${dot(3.5, 0)}`, stroke: "M -7 8 L -7 -8 M 7 8 L 7 -8" },
  // A bridge between two strings.
  "link-only-b": { fill: "", stroke: "M -7 8 L -7 -8 M 7 8 L 7 -8 M -7 0 L 7 0" },
};
