import { depthOpacity } from "#renderer/section/clip-to-slab.ts";
import { FADE_MM, type ProjectedScene } from "#renderer/section/project-scene.ts";
import type { SectionInk } from "#renderer/section/section-ink.ts";
import type { NodeGlyph } from "#shared/marks/node-glyph.ts";

/** Half the side of a glyph on screen, CSS pixels. */
const GLYPH_PX = 9;
const PLATE_PX = 13;
/** The plate stands this far to the right of the place and above it, CSS pixels: what is imaged there stays in sight. */
const ASIDE_PX = 22;

const paths = new WeakMap<NodeGlyph, { fill: Path2D; stroke: Path2D }>();

/** Where the plate of a place stands. */
export function plateOf(seen: { readonly x: number; readonly y: number }): { x: number; y: number; radius: number } {
  return { x: seen.x + ASIDE_PX, y: seen.y - ASIDE_PX, radius: PLATE_PX };
}

/** Marked places as glyphs on a dark plate with a short leader to the place, the one looked at with a ring. */
export function drawPlaces(to: CanvasRenderingContext2D, scene: ProjectedScene, halfSlabMm: number, ink: SectionInk): void {
  const ordered = [...scene.places].sort((a, b) => Number(a.place.picked) - Number(b.place.picked));
  for (const { place, seen } of ordered) {
    let path = paths.get(place.glyph);
    if (path === undefined) {
      path = { fill: new Path2D(place.glyph.fill), stroke: new Path2D(place.glyph.stroke) };
      paths.set(place.glyph, path);
    }
    const colour = place.colour === null ? ink.ink : ink.trees[place.colour]!;
    to.save();
    to.globalAlpha = place.picked ? 1 : depthOpacity(seen.depthMm, halfSlabMm, FADE_MM);
    const { x, y } = plateOf(seen);
    to.lineCap = "round";
    to.lineJoin = "round";
    to.beginPath();
    to.moveTo(seen.x + 4, seen.y - 4);
    to.lineTo(x - PLATE_PX * 0.7, y + PLATE_PX * 0.7);
    to.strokeStyle = ink.casing;
    to.lineWidth = 4;
    to.stroke();
    to.strokeStyle = place.picked ? ink.accent : colour;
    to.lineWidth = 1.6;
    to.stroke();
    to.translate(x, y);
    to.beginPath();
    to.arc(0, 0, PLATE_PX, 0, 2 * Math.PI);
    to.fillStyle = ink.pane;
    to.fill();
    to.strokeStyle = place.picked ? ink.accent : colour;
    to.lineWidth = place.picked ? 3 : 1.2;
    to.stroke();
    to.scale(GLYPH_PX / 10, GLYPH_PX / 10);
    to.fillStyle = colour;
    to.strokeStyle = colour;
    to.lineWidth = 2.2;
    to.fill(path.fill);
    to.stroke(path.stroke);
    to.restore();
  }
}
