import { roundPoint } from "#shared/geometry/types.ts";
import type { FollowProposal, ProposedNode, ProposedStrand } from "#shared/tracing/follow/proposal.ts";
import { withCurves } from "#shared/trees/apply.ts";
import {
  type Curve,
  type CurveId,
  emptyDocument,
  type NodeId,
  type Strand,
  type StrandId,
  type TreeDocument,
  type TreeNode,
} from "#shared/trees/document.ts";

const TREE = "t1";

/**
 * A proposal as trees that can be taken in. Strands with points keep their curves, made by follow; those without are solved from
 * their pins. What is doubtful stays marked so.
 * @param joined id of a proposed node that will be joined to a string: it becomes an open end, and an origin there is given up.
 */
export function proposalDocument(proposal: FollowProposal, joined: string | null = null): TreeDocument {
  const ids = new Map(proposal.nodes.map(({ id }, i): [string, NodeId] => [id, `n${i + 1}`]));
  const root = proposal.root === joined ? null : (ids.get(proposal.root) ?? null);
  const curves: Curve[] = [];
  const strands = proposal.strands.map((strand, i) => {
    const curve = strand.points.length < 6 ? null : curveOf(strand, `c${i + 1}`);
    if (curve !== null) curves.push(curve);
    return strandOf(strand, `s${i + 1}`, ids, curve?.id ?? null);
  });
  const document: TreeDocument = {
    ...emptyDocument(),
    trees: new Map([[TREE, { id: TREE, name: "", root }]]),
    nodes: new Map(proposal.nodes.map((node) => [ids.get(node.id)!, nodeOf(node, ids.get(node.id)!, node.id === joined)])),
    strands: new Map(strands.map((strand) => [strand.id, strand])),
  };
  return withCurves(document, curves);
}

function nodeOf(node: ProposedNode, id: NodeId, isJoined: boolean): TreeNode {
  return {
    id,
    tree: TREE,
    kind: isJoined ? "open" : node.kind,
    position: node.position,
    ...(node.certainty === "doubtful" && !isJoined && { certainty: node.certainty }),
    ...(node.kind === "origin" && !isJoined && { site: node.site ?? "unseen" }),
  };
}

function strandOf(strand: ProposedStrand, id: StrandId, ids: ReadonlyMap<string, NodeId>, curve: CurveId | null): Strand {
  return {
    id,
    tree: TREE,
    from: ids.get(strand.from)!,
    to: ids.get(strand.to)!,
    curve,
    via: strand.via.map(roundPoint),
    ...(strand.doubtful.length > 0 && { certainty: "doubtful" as const }),
  };
}

function curveOf({ points, radii, imageFit }: ProposedStrand, id: CurveId): Curve {
  return {
    id,
    points: Float64Array.from(points),
    radii: Float64Array.from(radii, (radius) => radius ?? Number.NaN),
    madeBy: [[0, radii.length - 1, "follow"]],
    imageFit,
  };
}
