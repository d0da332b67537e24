import type { SideName } from "#renderer/study/side-by-side/sides.ts";
import type { Difference } from "#shared/compare/differences.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { CrossLink, CrossLinkId, NodeId, Strand, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** The line of one side that a difference is about. */
export interface ConcernedLine {
  readonly line: Strand | CrossLink;
  /** True when this side has no such line, and the one nearest to the place stands in. */
  readonly nearest: boolean;
}

/** The strand or cross-link concerned; null where the side has no tree to look at. */
export function concernedLine(document: TreeDocument, difference: Difference, side: SideName): ConcernedLine | null {
  const id = side === "a" ? difference.a : difference.b;
  const own = id === null ? null : lineNamed(document, id);
  if (own !== null) return { line: own, nearest: false };
  const tree = side === "a" ? difference.treeA : difference.treeB;
  let best: { line: Strand; distance: number } | null = null;
  for (const line of document.strands.values()) {
    if (tree !== null && line.tree !== tree) continue;
    const points = polylineOf(document, line);
    if (points.length < 2) continue;
    const { distance } = nearestOnPolyline(points, difference.at);
    if (best === null || distance < best.distance) best = { line, distance };
  }
  return best === null ? null : { line: best.line, nearest: true };
}

/** A line by its own id, by the node it leads to, or by the tree whose first it is. */
function lineNamed(document: TreeDocument, id: string): Strand | CrossLink | null {
  const line = document.strands.get(id as StrandId) ?? document.crossLinks.get(id as CrossLinkId);
  if (line !== undefined) return line;
  const node = document.nodes.has(id as NodeId) ? id : document.trees.get(id as TreeId)?.root;
  if (node == null) return null;
  const strands = [...document.strands.values()];
  return strands.find((strand) => strand.to === node) ?? strands.find((strand) => strand.from === node) ?? null;
}
