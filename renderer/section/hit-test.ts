import { depthOpacity } from "#renderer/section/clip-to-slab.ts";
import { FADE_MM, type ProjectedScene, type ProjectedStrand } from "#renderer/section/project-scene.ts";
import type { SectionHit } from "#renderer/section/section-content.ts";
import type { PanePoint } from "#renderer/section/view-plane.ts";
import { pointMm } from "#shared/geometry/types.ts";

/** How near the pointer must come, CSS pixels: half a target of 24 px for points, less for lines, which lie closer together. */
export const POINT_REACH_PX = 12;
export const LINE_REACH_PX = 7;

/** What else can be grabbed besides the trees. */
export interface LooseHandles {
  readonly ruler: { readonly from: PanePoint; readonly to: PanePoint } | null;
}

/**
 * What lies under a point of the pane, or null. Points come before lines, and what lies in the slab before what shows
 * through faintly; among equals the nearest one.
 */
export function hitTest(scene: ProjectedScene, loose: LooseHandles, x: number, y: number, halfSlabMm: number): SectionHit | null {
  const points: { hit: SectionHit; seen: PanePoint; rank: number }[] = [
    ...scene.underWay.map((seen, index) => ({ hit: { kind: "under-way-pin", index } as const, seen, rank: 0 })),
    ...(loose.ruler === null
      ? []
      : (["from", "to"] as const).map((end) => ({
          hit: { kind: "ruler-end", end } as const,
          seen: loose.ruler![end],
          rank: 0,
        }))),
    ...scene.nodes.map(({ node, seen, selected }) => ({
      hit: { kind: "node", id: node.id } as const,
      seen,
      rank: selected ? 0 : 1,
    })),
    ...scene.pins.map(({ strand, index, seen }) => ({ hit: { kind: "pin", strand, index } as const, seen, rank: 1 })),
  ];
  let best: { hit: SectionHit; score: number } | null = null;
  for (const { hit, seen, rank } of points) {
    const distance = Math.hypot(seen.x - x, seen.y - y);
    if (distance > POINT_REACH_PX) continue;
    const opacity =
      hit.kind === "under-way-pin" || hit.kind === "ruler-end" ? 1 : depthOpacity(seen.depthMm, halfSlabMm, FADE_MM);
    if (opacity <= 0) continue;
    const score = distance + rank * 2 + (opacity < 1 ? POINT_REACH_PX : 0);
    if (best === null || score < best.score) best = { hit, score };
  }
  return best?.hit ?? nearestStrand(scene.strands, x, y, halfSlabMm);
}

function nearestStrand(strands: readonly ProjectedStrand[], x: number, y: number, halfSlabMm: number): SectionHit | null {
  let best: { strand: ProjectedStrand; segment: number; t: number; score: number } | null = null;
  for (const strand of strands) {
    const { seen } = strand;
    for (let i = 0; i + 5 < seen.length; i += 3) {
      const x0 = seen[i]!;
      const y0 = seen[i + 1]!;
      const dx = seen[i + 3]! - x0;
      const dy = seen[i + 4]! - y0;
      const squared = dx * dx + dy * dy;
      const t = squared === 0 ? 0 : Math.min(1, Math.max(0, ((x - x0) * dx + (y - y0) * dy) / squared));
      const distance = Math.hypot(x0 + dx * t - x, y0 + dy * t - y);
      if (distance > LINE_REACH_PX) continue;
      const depth = seen[i + 2]! + (seen[i + 5]! - seen[i + 2]!) * t;
      const opacity = depthOpacity(depth, halfSlabMm, FADE_MM);
      if (opacity <= 0) continue;
      const score = distance + (opacity < 1 ? LINE_REACH_PX * (2 - opacity) : 0);
      if (best === null || score < best.score) best = { strand, segment: i / 3, t, score };
    }
  }
  if (best === null) return null;
  const { points, id } = best.strand.drawn;
  let atMm = 0;
  for (let s = 0; s < best.segment; s++) atMm += segmentLength(points, s);
  atMm += segmentLength(points, best.segment) * best.t;
  const p = best.segment * 3;
  const along = (axis: number) => points[p + axis]! + (points[p + 3 + axis]! - points[p + axis]!) * best.t;
  return { kind: "strand", id, atMm, point: pointMm(along(0), along(1), along(2)) };
}

function segmentLength(points: ArrayLike<number>, segment: number): number {
  const p = segment * 3;
  return Math.hypot(points[p + 3]! - points[p]!, points[p + 4]! - points[p + 1]!, points[p + 5]! - points[p + 2]!);
}
