import { depthOpacity } from "#renderer/section/clip-to-slab.ts";
import { FADE_MM, type ProjectedNode, type ProjectedScene } from "#renderer/section/project-scene.ts";
import type { SectionInk } from "#renderer/section/section-ink.ts";
import type { PanePoint } from "#renderer/section/view-plane.ts";
import { NODE_GLYPHS } from "#shared/marks/node-glyph.ts";
import { treeMark } from "#shared/marks/tree-mark.ts";
import type { NodeKind } from "#shared/trees/document.ts";

/** Half the side of a glyph on screen, CSS pixels. */
const GLYPH_PX = 7;

const paths = new Map<NodeKind, { fill: Path2D | null; stroke: Path2D | null }>();

function pathsOf(kind: NodeKind) {
  let known = paths.get(kind);
  if (known === undefined) {
    const { fill, stroke } = NODE_GLYPHS[kind];
    known = { fill: fill === "" ? null : new Path2D(fill), stroke: stroke === "" ? null : new Path2D(stroke) };
    paths.set(kind, known);
  }
  return known;
}

export function drawNodes(to: CanvasRenderingContext2D, scene: ProjectedScene, halfSlabMm: number, ink: SectionInk): void {
  const ordered = [...scene.nodes].sort((a, b) => Number(a.selected) - Number(b.selected));
  for (const node of ordered) drawNode(to, node, halfSlabMm, ink);
}

function drawNode(to: CanvasRenderingContext2D, { node, seen, selected }: ProjectedNode, halfSlabMm: number, ink: SectionInk) {
  const { fill, stroke } = pathsOf(node.kind);
  const open = node.kind === "open";
  const colour = open ? ink.warn : ink.trees[treeMark(node.tree).colour]!;
  to.save();
  to.globalAlpha = depthOpacity(seen.depthMm, halfSlabMm, FADE_MM);
  to.translate(seen.x, seen.y);
  if (selected) {
    to.beginPath();
    to.arc(0, 0, GLYPH_PX + 5, 0, 2 * Math.PI);
    to.strokeStyle = ink.casing;
    to.lineWidth = 4.5;
    to.stroke();
    to.strokeStyle = ink.accent;
    to.lineWidth = 2;
    to.stroke();
  }
  to.scale(GLYPH_PX / 10, GLYPH_PX / 10);
  to.lineJoin = "round";
  to.lineCap = "round";
  to.strokeStyle = ink.casing;
  to.lineWidth = 6.5;
  if (stroke !== null) to.stroke(stroke);
  to.lineWidth = 4.5;
  if (fill !== null) to.stroke(fill);
  to.fillStyle = colour;
  to.strokeStyle = colour;
  to.lineWidth = 2.6;
  if (fill !== null) to.fill(fill);
  if (stroke !== null) to.stroke(stroke);
  if (node.certainty === "doubtful") doubtMark(to, ink);
  to.restore();
}

/** Three dots below the glyph, in glyph units. */
function doubtMark(to: CanvasRenderingContext2D, ink: SectionInk): void {
  for (const x of [-5, 0, 5]) {
    to.beginPath();
    to.arc(x, 14, 1.8, 0, 2 * Math.PI);
    to.fillStyle = ink.casing;
    to.lineWidth = 2;
    to.strokeStyle = ink.casing;
    to.stroke();
    to.fillStyle = ink.ink;
    to.fill();
  }
}

/** Pins of the selected strand, and those of the strand under way with the last one ringed. */
export function drawPins(to: CanvasRenderingContext2D, scene: ProjectedScene, halfSlabMm: number, ink: SectionInk): void {
  for (const { seen } of scene.pins) {
    to.globalAlpha = depthOpacity(seen.depthMm, halfSlabMm, FADE_MM);
    disc(to, seen, 4, ink.casing, ink.ink, false);
  }
  scene.underWay.forEach((seen, index) => {
    to.globalAlpha = Math.max(0.35, depthOpacity(seen.depthMm, halfSlabMm, FADE_MM));
    disc(to, seen, 4, ink.casing, ink.accent, true);
    if (index === scene.underWay.length - 1) disc(to, seen, 8, ink.casing, ink.accent, false);
  });
  to.globalAlpha = 1;
}

function disc(to: CanvasRenderingContext2D, at: PanePoint, radius: number, casing: string, colour: string, full: boolean): void {
  to.beginPath();
  to.arc(at.x, at.y, radius, 0, 2 * Math.PI);
  to.strokeStyle = casing;
  to.lineWidth = 4;
  to.stroke();
  to.strokeStyle = colour;
  to.lineWidth = 1.8;
  to.stroke();
  if (!full) return;
  to.fillStyle = colour;
  to.fill();
}
