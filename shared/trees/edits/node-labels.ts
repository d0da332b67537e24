import { otherEnd } from "#shared/trees/adjacency.ts";
import type {
  Certainty,
  Leaflet,
  Muscle,
  NodeId,
  OriginSite,
  Segment,
  TreeDocument,
  TreeNode,
  Zone,
} from "#shared/trees/document.ts";
import { nodeOf, refusal, treeOf } from "#shared/trees/edits/refusal.ts";
import { carriesPlace } from "#shared/trees/edits/rewiring.ts";
import { orientTree } from "#shared/trees/orientation.ts";

/** Labels to set on a node; null takes a label away. */
export interface NodeLabels {
  readonly leaflet?: Leaflet | null;
  readonly segment?: Segment | null;
  readonly zone?: Zone | null;
  readonly cleft?: boolean | null;
  readonly site?: OriginSite | null;
  readonly muscle?: Muscle | null;
  readonly head?: number | null;
  readonly certainty?: Certainty | null;
}

const PLACE_KEYS = ["leaflet", "segment", "zone", "cleft"] as const;
const ORIGIN_KEYS = ["site", "muscle", "head"] as const;

/** The node with labels set or taken away. @throws misuse for a label that the node's kind does not carry */
export function withNodeLabels(node: TreeNode, labels: NodeLabels): TreeNode {
  const next: Record<string, unknown> = { ...node };
  for (const [key, value] of Object.entries(labels)) {
    if (value === undefined) continue;
    if (value === null) delete next[key];
    else if (carries(node, key)) next[key] = value;
    else throw refusal(`A node of kind ${node.kind} carries no ${key}.`, `${key} on ${node.id}`);
  }
  return next as unknown as TreeNode;
}

/** The labels of `labels` that a node of this kind carries. */
export function applicable(node: TreeNode, labels: NodeLabels): NodeLabels {
  return Object.fromEntries(Object.entries(labels).filter(([key]) => carries(node, key)));
}

/**
 * Leaflet, segment, zone and cleft that an end takes from the nodes between it and the root, the nearest one that says
 * something first; each label on its own.
 */
export function inheritedLabels(document: TreeDocument, id: NodeId): NodeLabels {
  const { towardsRoot } = orientTree(document, treeOf(document, nodeOf(document, id).tree));
  const labels: Record<string, unknown> = {};
  let at = id;
  for (;;) {
    const above = towardsRoot.get(at);
    if (!above) return labels;
    at = otherEnd(above, at);
    const node = nodeOf(document, at);
    for (const key of PLACE_KEYS) if (node[key] !== undefined && labels[key] === undefined) labels[key] = node[key];
  }
}

function carries(node: TreeNode, key: string): boolean {
  if ((PLACE_KEYS as readonly string[]).includes(key)) return carriesPlace(node.kind);
  if ((ORIGIN_KEYS as readonly string[]).includes(key)) return node.kind === "origin";
  return key === "certainty";
}
