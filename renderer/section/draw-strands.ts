import { bandOpacity, clipToSlab } from "#renderer/section/clip-to-slab.ts";
import { planeCrossings } from "#renderer/section/plane-crossings.ts";
import { FADE_MM, type ProjectedScene, type ProjectedStrand } from "#renderer/section/project-scene.ts";
import type { SectionInk } from "#renderer/section/section-ink.ts";
import { strandInk } from "#renderer/section/strand-ink.ts";
import { TREE_DASHES } from "#shared/marks/tree-mark.ts";

const WIDTH_PX = 2;
const SELECTED_WIDTH_PX = 3;
const LOUD_WIDTH_PX = 3;
const QUIET_OPACITY = 0.6;

/** Strands: full inside the slab, fading with depth outside, the selected ones last and with a halo. */
export function drawStrands(to: CanvasRenderingContext2D, scene: ProjectedScene, halfSlabMm: number, ink: SectionInk): void {
  const ordered = [...scene.strands].sort((a, b) => Number(a.selected) - Number(b.selected));
  for (const strand of ordered) drawStrand(to, strand, halfSlabMm, ink);
}

function drawStrand(to: CanvasRenderingContext2D, strand: ProjectedStrand, halfSlabMm: number, ink: SectionInk): void {
  const { drawn, selected } = strand;
  const quiet = drawn.manner === "quiet";
  const usual = drawn.manner === "loud" ? LOUD_WIDTH_PX : drawn.traced ? WIDTH_PX : 1;
  const width = quiet ? 1 : selected ? SELECTED_WIDTH_PX : usual;
  const colour = strandInk(drawn, ink);
  const dash = TREE_DASHES[drawn.mark.dash]!.map((length) => length * width);
  to.lineJoin = "round";
  to.lineCap = dash.length > 0 ? "butt" : "round";
  for (const run of clipToSlab(strand.seen, halfSlabMm, FADE_MM)) {
    to.globalAlpha = bandOpacity(run.band) * (quiet && !selected ? QUIET_OPACITY : 1);
    const inside = run.band === 0;
    to.setLineDash([]);
    trace(to, run.points);
    if (selected) stroke(to, ink.accent, width + 6, inside ? 0.55 : 0.2);
    if (inside) stroke(to, ink.casing, width + 2.5, 1);
    to.setLineDash(dash);
    stroke(to, colour, inside ? width : Math.max(1, width - 0.5), 1);
    if (drawn.doubtful && inside) {
      // A doubtful strand is a double line.
      to.setLineDash([]);
      stroke(to, ink.casing, 1, 1);
    }
  }
  to.globalAlpha = 1;
  to.setLineDash([]);
}

/** Outlines of the tubes where they go through the plane. */
export function drawOutlines(to: CanvasRenderingContext2D, scene: ProjectedScene, mmPerPx: number, ink: SectionInk): void {
  for (const { drawn, seen, selected } of scene.strands) {
    for (const outline of planeCrossings(seen, drawn.radii, mmPerPx)) {
      to.beginPath();
      to.ellipse(outline.x, outline.y, outline.longPx, outline.shortPx, outline.angle, 0, 2 * Math.PI);
      to.setLineDash([]);
      const quiet = drawn.manner === "quiet" ? 0.5 : 1;
      stroke(to, ink.casing, selected ? 4 : 3, 0.8 * quiet);
      to.setLineDash(outline.measured ? [] : [2, 2]);
      stroke(to, strandInk(drawn, ink), selected ? 2 : 1.4, quiet);
    }
  }
  to.setLineDash([]);
}

function trace(to: CanvasRenderingContext2D, points: readonly number[]): void {
  to.beginPath();
  to.moveTo(points[0]!, points[1]!);
  for (let i = 2; i < points.length; i += 2) to.lineTo(points[i]!, points[i + 1]!);
}

function stroke(to: CanvasRenderingContext2D, colour: string, width: number, opacity: number): void {
  const before = to.globalAlpha;
  to.globalAlpha = before * opacity;
  to.strokeStyle = colour;
  to.lineWidth = width;
  to.stroke();
  to.globalAlpha = before;
}
