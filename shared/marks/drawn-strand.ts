import type { PointMm } from "#shared/geometry/types.ts";
import { type TreeMark, treeMark } from "#shared/marks/tree-mark.ts";
import type { CrossLinkId, CurveId, NodeId, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";

/** A strand or cross-link as a picture needs it. Arrays are borrowed from the document's curves: never write to them. */
export interface DrawnStrand {
  readonly id: StrandId | CrossLinkId;
  /** Null for a cross-link. */
  readonly tree: TreeId | null;
  readonly name: string;
  /** shape [n, 3], order xyz, millimetres. */
  readonly points: Float64Array;
  /** shape [n], millimetres; NaN = below resolution or not measured. */
  readonly radii: Float64Array;
  readonly pins: readonly PointMm[];
  readonly mark: TreeMark;
  readonly doubtful: boolean;
  /** Absent = as usual; quiet = thin and grey, what needs no attention; loud = broad, what does. */
  readonly manner?: "quiet" | "loud";
  /** Absent = as the selection says. */
  readonly picked?: boolean;
  /** False while the image has not been followed: straight lines between nodes and pins stand in. */
  readonly traced: boolean;
}

/** Every strand and cross-link of a document, in the order of its maps; strands whose nodes are missing are left out. */
export function drawnStrands(document: TreeDocument): DrawnStrand[] {
  const drawn: DrawnStrand[] = [];
  for (const strand of document.strands.values()) {
    const line = lineOf(document, strand);
    if (line === null) continue;
    const name = document.trees.get(strand.tree)?.name ?? strand.tree;
    const doubtful = strand.certainty === "doubtful";
    drawn.push({ id: strand.id, tree: strand.tree, name, pins: strand.via, mark: treeMark(strand.tree), doubtful, ...line });
  }
  for (const link of document.crossLinks.values()) {
    const line = lineOf(document, link);
    if (line === null) continue;
    const tree = document.nodes.get(link.from)?.tree;
    const mark: TreeMark = { colour: tree === undefined ? 0 : treeMark(tree).colour, dash: 2 };
    drawn.push({
      id: link.id,
      tree: null,
      name: link.id,
      pins: link.via,
      mark,
      doubtful: link.certainty === "doubtful",
      ...line,
    });
  }
  return drawn;
}

interface Line {
  readonly points: Float64Array;
  readonly radii: Float64Array;
  readonly traced: boolean;
}

function lineOf(
  document: TreeDocument,
  edge: { from: NodeId; to: NodeId; curve: CurveId | null; via: readonly PointMm[] },
): Line | null {
  const curve = edge.curve === null ? undefined : document.curves.get(edge.curve);
  if (curve !== undefined) return { points: curve.points, radii: curve.radii, traced: true };
  const from = document.nodes.get(edge.from);
  const to = document.nodes.get(edge.to);
  if (from === undefined || to === undefined) return null;
  const places = [from.position, ...edge.via, to.position];
  return { points: Float64Array.from(places.flat()), radii: new Float64Array(places.length).fill(Number.NaN), traced: false };
}
