import type { NodeKind } from "#shared/trees/document.ts";

/** Outlines as SVG path data in a box from -10 to 10, y downwards, up = towards the leaflets. Either part may be empty. */
export interface NodeGlyph {
  readonly fill: string;
  /** Drawn with a line of 2.6 units (and round joins). */
  readonly stroke: string;
}

const ring = (r: number) => `M ${-r} 0 A ${r} ${r} 0 1 1 ${r} 0 A ${r} ${r} 0 1 1 ${-r} 0 Z`;

/**
 * One shape per kind of node, told apart without colour: what stands on tissue is full (a foot, a cap), what is unfinished or
 * unseen is hollow, what broke shows the break.
 */
export const NODE_GLYPHS: Readonly<Record<NodeKind, NodeGlyph>> = {
  // A foot standing on the muscle.
  origin: { fill: "M -4 -7 L 4 -7 L 4 0 L 8 7 L -8 7 L -4 0 Z", stroke: "" },
  // Three arms.
  fork: { fill: "M -7 -7 L 0 -2.2 L 7 -7 L 2.4 1.6 L 2.4 8 L -2.4 8 L -2.4 1.6 Z", stroke: "" },
  waypoint: { fill: "", stroke: ring(4) },
  // A cap against the leaflet.
  insertion: { fill: "M -8 -7 L 8 -7 L 8 -3 L 2.6 -3 L 2.6 7 L -2.6 7 L -2.6 -3 L -8 -3 Z", stroke: "" },
  "muscle-end": { fill: "M -7 -1 L 7 -1 L 7 7 L -7 7 Z", stroke: "M 0 -1 L 0 -8" },
  "wall-end": { fill: "", stroke: "M -7 7 L 7 7 M -7 1.5 L 7 1.5 M 0 1.5 L 0 -8" },
  ruptured: { fill: "", stroke: "M 1 8 L 1 2 L -5 0 L 5 -3 L -1 -8" },
  cut: { fill: "", stroke: "M 0 8 L 0 1 M -7 3 L 7 -3 M -7 -2 L 7 -8" },
  // A ring that does not close.
  "lost-end": { fill: "", stroke: "M -4.2 -4.2 A 6 6 0 1 0 4.2 -4.2" },
  "scan-edge": { fill: "", stroke: "M -8 -7 L 8 -7 M 0 8 L 0 -1 M -3.5 -1 L 0 -6 L 3.5 -1 Z" },
  open: { fill: "", stroke: "M 0 -8 L 8 0 L 0 8 L -8 0 Z" },
};
