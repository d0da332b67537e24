import { crossLinksAt, nodesOf, otherEnd, strandsAt } from "#shared/trees/adjacency.ts";
import type { NodeId, NodeKind, Strand, StrandId, TreeDocument, TreeId, TreeNode } from "#shared/trees/document.ts";
import type { EditDraft } from "#shared/trees/edits/edit-draft.ts";
import { joinedRun, reversedRun, runOf, splitRun, strandWithRun } from "#shared/trees/edits/pin-run.ts";
import type { PlaceOnLine } from "#shared/trees/edits/place-on-line.ts";
import { nodeOf, strandOf, treeOf } from "#shared/trees/edits/refusal.ts";
import { orientTree } from "#shared/trees/orientation.ts";

/** Part of a tree: what is reached without passing one strand. */
export interface TreePart {
  readonly nodes: readonly NodeId[];
  readonly strands: readonly StrandId[];
}

/** Nodes and strands reached from `node` without passing `without`. Complexity: size of the part. */
export function partFrom(document: TreeDocument, node: NodeId, without?: StrandId): TreePart {
  const nodes: NodeId[] = [node];
  const seen = new Set<NodeId>(nodes);
  const strands = new Set<StrandId>();
  for (let i = 0; i < nodes.length; i++) {
    for (const strand of strandsAt(document, nodes[i]!)) {
      if (strand.id === without) continue;
      strands.add(strand.id);
      const far = otherEnd(strand, nodes[i]!);
      if (!seen.has(far)) {
        seen.add(far);
        nodes.push(far);
      }
    }
  }
  return { nodes, strands: [...strands] };
}

/** The strand's node nearer to the root (in a tree without root: to its lowest node). */
export function rootSideOf(document: TreeDocument, strand: Strand): NodeId {
  return orientTree(document, treeOf(document, strand.tree)).rootSide.get(strand.id) ?? strand.from;
}

/** True for a node that ends one strand and is not the root. */
export function isLooseEnd(document: TreeDocument, node: TreeNode): boolean {
  return strandsAt(document, node.id).length === 1 && treeOf(document, node.tree).root !== node.id;
}

/** The node as another kind, without the labels that the kind cannot carry. */
export function asKind(node: TreeNode, kind: NodeKind): TreeNode {
  const { site, muscle, head, leaflet, segment, zone, cleft, ...rest } = node;
  const origin = { ...(site && { site }), ...(muscle && { muscle }), ...(head !== undefined && { head }) };
  const place = {
    ...(leaflet && { leaflet }),
    ...(segment && { segment }),
    ...(zone && { zone }),
    ...(cleft !== undefined && { cleft }),
  };
  return { ...rest, kind, ...(kind === "origin" ? origin : {}), ...(carriesPlace(kind) ? place : {}) };
}

/** True for kinds that carry leaflet, segment, zone and cleft: insertions, and nodes whose ends inherit them. */
export function carriesPlace(kind: NodeKind): boolean {
  return kind === "insertion" || kind === "fork" || kind === "waypoint" || kind === "open";
}

/** Divides a strand at a place within it; the half at `from` keeps the id. Labels go to both halves; both are to be solved. */
export function splitStrand(draft: EditDraft, id: StrandId, place: PlaceOnLine, kind: NodeKind): { node: NodeId; far: StrandId } {
  const strand = strandOf(draft.document, id);
  const [first, second] = splitRun(runOf(strand), place.leg, place.point);
  const node = draft.ids.next("node");
  const far = draft.ids.next("strand");
  draft.putNode({ id: node, tree: strand.tree, kind, position: place.point });
  draft.putStrand({ ...strandWithRun(strand, second), id: far, from: node });
  draft.putStrand({ ...strandWithRun(strand, first), to: node });
  return { node, far };
}

/**
 * Takes a node out from between its two strands: they become one that passes its place as a pin. The strand nearer to the root
 * keeps its id, direction and labels; doubt on either stays. Does nothing (false) unless the node has exactly two strands to two
 * other nodes, is no root and carries no cross-link.
 */
export function dissolveNode(draft: EditDraft, id: NodeId): boolean {
  const { document } = draft;
  const node = nodeOf(document, id);
  const tree = treeOf(document, node.tree);
  const [a, b, third] = strandsAt(document, id);
  if (!a || !b || third || tree.root === id || crossLinksAt(document, id).length > 0) return false;
  if (a.id === b.id || otherEnd(a, id) === otherEnd(b, id)) return false;
  const near = orientTree(document, tree).towardsRoot.get(id)?.id === b.id ? b : a;
  const far = near === a ? b : a;
  const outwards = far.from === id ? runOf(far) : reversedRun(runOf(far));
  const farNode = otherEnd(far, id);
  const merged =
    near.to === id
      ? { ...strandWithRun(near, joinedRun(runOf(near), [node.position], outwards)), to: farNode }
      : { ...strandWithRun(near, joinedRun(reversedRun(outwards), [node.position], runOf(near))), from: farNode };
  draft.removeStrand(far.id);
  const more = { ...far.more, ...near.more };
  draft.putStrand({
    ...merged,
    ...(far.certainty === "doubtful" ? { certainty: "doubtful" } : {}),
    ...(Object.keys(more).length > 0 ? { more } : {}),
  });
  draft.removeNode(id);
  return true;
}

/**
 * Sets right a node that lost a strand: an idle fork dissolves (a waypoint when a cross-link holds it), a fork with one strand
 * is open, and a node without strands that is no root goes, with its tree when it was the last.
 */
export function tidyNode(draft: EditDraft, id: NodeId): void {
  const { document } = draft;
  const node = nodeOf(document, id);
  const degree = strandsAt(document, id).length;
  if (treeOf(document, node.tree).root === id) return;
  if (degree === 0) {
    removePart(draft, { nodes: [id], strands: [] });
    removeIfEmpty(draft, node.tree);
  }
  if (node.kind !== "fork" && node.kind !== "waypoint") return;
  if (degree === 1) draft.putNode(asKind(node, "open"));
  if (degree === 2 && !dissolveNode(draft, id) && crossLinksAt(document, id).length > 0) draft.putNode(asKind(node, "waypoint"));
}

/** Removes a tree that has no node left. */
export function removeIfEmpty(draft: EditDraft, tree: TreeId): void {
  if (nodesOf(draft.document, tree).length === 0) draft.removeTree(tree);
}

/** Gives a part of a tree to another tree. */
export function retag(draft: EditDraft, part: TreePart, tree: TreeId): void {
  for (const id of part.nodes) draft.putNode({ ...nodeOf(draft.document, id), tree });
  for (const id of part.strands) draft.putStrand({ ...strandOf(draft.document, id), tree });
}

/** Removes a part of a tree with the cross-links that end in it. */
export function removePart(draft: EditDraft, part: TreePart): void {
  for (const id of part.nodes) for (const link of crossLinksAt(draft.document, id)) draft.removeCrossLink(link.id);
  for (const id of part.strands) draft.removeStrand(id);
  for (const id of part.nodes) draft.removeNode(id);
}

/** The strand with the end at `node` moved to `to`, the other end as it was; untraced. */
export function withEndMoved(strand: Strand, node: NodeId, to: NodeId): Strand {
  return strand.from === node ? { ...strand, from: to, curve: null } : { ...strand, to, curve: null };
}
