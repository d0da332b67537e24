import { clipToSlab } from "#renderer/section/clip-to-slab.ts";
import { plateOf } from "#renderer/section/draw-places.ts";
import { planeCrossings, type TubeOutline } from "#renderer/section/plane-crossings.ts";
import { FADE_MM, type ProjectedScene, type ProjectedStrand } from "#renderer/section/project-scene.ts";
import type { SectionInk } from "#renderer/section/section-ink.ts";
import { strandInk } from "#renderer/section/strand-ink.ts";
import type { TextOnPicture } from "#renderer/section/text-on-picture.ts";
import type { PaneSize } from "#renderer/section/view-plane.ts";

/** Each tree's name once, beside what of it lies in the slab; the selected ones first, then those nearest the pane's middle. */
export function drawLabels(
  text: TextOnPicture,
  scene: ProjectedScene,
  size: PaneSize,
  mmPerPx: number,
  halfSlabMm: number,
  ink: SectionInk,
): void {
  keepFree(text, scene, size, mmPerPx, halfSlabMm);
  const places = new Map<string, LabelPlace & { name: string; colour: string; rank: number }>();
  for (const strand of scene.strands) {
    if (strand.drawn.name === "") continue;
    const place = labelPlace(strand, mmPerPx, halfSlabMm, size);
    if (place === null) continue;
    const off = Math.hypot(place.x - size.width / 2, place.y - size.height / 2);
    const rank = off - (strand.selected ? 1e6 : 0);
    const before = places.get(strand.drawn.name);
    if (before !== undefined && before.rank <= rank) continue;
    places.set(strand.drawn.name, { name: strand.drawn.name, ...place, colour: strandInk(strand.drawn, ink), rank });
  }
  for (const { name, x, y, gap, colour } of [...places.values()].sort((a, b) => a.rank - b.rank)) {
    text.beside(name, x, y, gap, colour);
  }
}

/** Names do not cover the cross-sections of other strands, nor nodes that lie in the slab. */
function keepFree(text: TextOnPicture, scene: ProjectedScene, size: PaneSize, mmPerPx: number, halfSlabMm: number): void {
  const box = (x: number, y: number, half: number) => text.reserve(x - half, y - half, x + half, y + half);
  for (const { seen, drawn } of scene.strands) {
    // Three quarters: a name may touch the rim of a large cross-section.
    for (const crossing of planeCrossings(seen, drawn.radii, mmPerPx)) {
      if (shown(crossing, size)) box(crossing.x, crossing.y, crossing.shortPx * 0.75);
    }
  }
  for (const { seen } of scene.places) {
    const plate = plateOf(seen);
    box(plate.x, plate.y, plate.radius);
  }
  for (const { seen } of scene.nodes) if (Math.abs(seen.depthMm) <= halfSlabMm) box(seen.x, seen.y, 6);
}

interface LabelPlace {
  readonly x: number;
  readonly y: number;
  /** Room to keep between the place and the text, CSS pixels. */
  readonly gap: number;
}

function labelPlace(strand: ProjectedStrand, mmPerPx: number, halfSlabMm: number, size: PaneSize): LabelPlace | null {
  const crossing = planeCrossings(strand.seen, strand.drawn.radii, mmPerPx).find((place) => shown(place, size));
  if (crossing !== undefined) return { x: crossing.x, y: crossing.y, gap: Math.min(60, halfWidth(crossing) + 8) };
  let longest: readonly number[] = [];
  for (const run of clipToSlab(strand.seen, halfSlabMm, FADE_MM)) {
    if (run.band === 0 && run.points.length > longest.length) longest = run.points;
  }
  if (longest.length < 4) return null;
  const middle = 2 * Math.floor(longest.length / 4);
  const place = { x: longest[middle]!, y: longest[middle + 1]!, gap: 12 };
  return shown(place, size) ? place : null;
}

/** How far an outline reaches to either side. */
function halfWidth({ longPx, shortPx, angle }: TubeOutline): number {
  return Math.hypot(longPx * Math.cos(angle), shortPx * Math.sin(angle));
}

function shown(place: { x: number; y: number }, size: PaneSize): boolean {
  return place.x >= 0 && place.y >= 0 && place.x <= size.width && place.y <= size.height;
}
