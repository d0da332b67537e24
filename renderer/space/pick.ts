import type { SpaceHit } from "#renderer/space/space-content.ts";
import { pointMm } from "#shared/geometry/types.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import type { TreeNode } from "#shared/trees/document.ts";

/** How near the pointer must come, CSS pixels. */
const NODE_REACH_PX = 12;
const LINE_REACH_PX = 8;
const SURFACE_REACH_PX = 6;

/** From space to the pane: column-major 4 x 4 of projection times view, and the pane's size in CSS pixels. */
export interface Projection {
  readonly matrix: ArrayLike<number>;
  readonly width: number;
  readonly height: number;
}

export interface Pickable {
  readonly strands: readonly DrawnStrand[];
  readonly nodes: Iterable<TreeNode>;
  /** shape [n, 3], millimetres, or null. */
  readonly surface: Float32Array | null;
}

interface Seen {
  readonly x: number;
  readonly y: number;
  /** Distance in front of the viewer; negative = behind. */
  readonly ahead: number;
}

/** What the pointer points at: a node before a strand, a strand before the surface; among equals what is nearest to the viewer. */
export function pickInSpace(what: Pickable, projection: Projection, x: number, y: number): SpaceHit | null {
  return (
    pickNode(what.nodes, projection, x, y) ??
    pickStrand(what.strands, projection, x, y) ??
    pickSurface(what.surface, projection, x, y)
  );
}

function pickNode(nodes: Iterable<TreeNode>, projection: Projection, x: number, y: number): SpaceHit | null {
  let best: { node: TreeNode; score: number } | null = null;
  for (const node of nodes) {
    const seen = project(projection, node.position[0], node.position[1], node.position[2]);
    const distance = Math.hypot(seen.x - x, seen.y - y);
    if (seen.ahead <= 0 || distance > NODE_REACH_PX) continue;
    if (best === null || distance < best.score) best = { node, score: distance };
  }
  return best === null ? null : { kind: "node", id: best.node.id, point: best.node.position };
}

function pickStrand(strands: readonly DrawnStrand[], projection: Projection, x: number, y: number): SpaceHit | null {
  let best: { strand: DrawnStrand; segment: number; t: number; score: number; ahead: number } | null = null;
  for (const strand of strands) {
    const { points } = strand;
    if (points.length < 6) continue;
    let a = project(projection, points[0]!, points[1]!, points[2]!);
    for (let i = 3; i + 2 < points.length; i += 3) {
      const b = project(projection, points[i]!, points[i + 1]!, points[i + 2]!);
      if (a.ahead > 0 && b.ahead > 0) {
        const dx = b.x - a.x;
        const dy = b.y - a.y;
        const squared = dx * dx + dy * dy;
        const t = squared === 0 ? 0 : Math.min(1, Math.max(0, ((x - a.x) * dx + (y - a.y) * dy) / squared));
        const score = Math.hypot(a.x + dx * t - x, a.y + dy * t - y);
        const ahead = a.ahead + (b.ahead - a.ahead) * t;
        // Within two pixels of each other the one in front wins: that is the one seen.
        if (
          score <= LINE_REACH_PX &&
          (best === null || score < best.score - 2 || (score < best.score + 2 && ahead < best.ahead))
        ) {
          best = { strand, segment: i / 3 - 1, t, score, ahead };
        }
      }
      a = b;
    }
  }
  if (best === null) return null;
  const { points, id } = best.strand;
  let atMm = 0;
  for (let s = 0; s < best.segment; s++) atMm += segmentMm(points, s);
  atMm += segmentMm(points, best.segment) * best.t;
  const p = best.segment * 3;
  const along = (axis: number) => points[p + axis]! + (points[p + 3 + axis]! - points[p + axis]!) * best.t;
  return { kind: "strand", id, atMm, point: pointMm(along(0), along(1), along(2)) };
}

function pickSurface(surface: Float32Array | null, projection: Projection, x: number, y: number): SpaceHit | null {
  if (surface === null) return null;
  let best = -1;
  let nearest = Number.POSITIVE_INFINITY;
  for (let i = 0; i + 2 < surface.length; i += 3) {
    const seen = project(projection, surface[i]!, surface[i + 1]!, surface[i + 2]!);
    if (seen.ahead <= 0 || seen.ahead >= nearest) continue;
    if (Math.abs(seen.x - x) > SURFACE_REACH_PX || Math.hypot(seen.x - x, seen.y - y) > SURFACE_REACH_PX) continue;
    nearest = seen.ahead;
    best = i;
  }
  return best === -1 ? null : { kind: "surface", point: pointMm(surface[best]!, surface[best + 1]!, surface[best + 2]!) };
}

function project({ matrix: m, width, height }: Projection, x: number, y: number, z: number): Seen {
  const w = m[3]! * x + m[7]! * y + m[11]! * z + m[15]!;
  const px = (m[0]! * x + m[4]! * y + m[8]! * z + m[12]!) / w;
  const py = (m[1]! * x + m[5]! * y + m[9]! * z + m[13]!) / w;
  return { x: ((px + 1) / 2) * width, y: ((1 - py) / 2) * height, ahead: w };
}

function segmentMm(points: ArrayLike<number>, segment: number): number {
  const p = segment * 3;
  return Math.hypot(points[p + 3]! - points[p]!, points[p + 4]! - points[p + 1]!, points[p + 5]! - points[p + 2]!);
}
