import type { FileLine, FileNode, FileStrand, FileTree, NodeLabels } from "#shared/formats/chordae/chordae-file.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** A node of a graph that another program may have written; what is not known is absent. */
export interface GraphNode extends Partial<NodeLabels> {
  readonly id: string;
  /** Millimetres. */
  readonly position: Vec3;
  readonly tree?: string;
  readonly treeName?: string;
  readonly root?: boolean;
}

export interface GraphEdge extends FileStrand {
  readonly tree?: string;
  readonly crossLink: boolean;
}

/**
 * The trees and cross-links that a graph stands for. Nodes that name a tree belong to it; others form one tree per connected
 * part. A node without a kind gets one from its degree: waypoint, fork, or `open` for an end, since nothing says what ends
 * there. A tree's root is the node marked so, else its only origin, else (`directed`) the only node that nothing leads to; that
 * one becomes the origin.
 */
export function treesOfGraph(
  nodes: readonly GraphNode[],
  edges: readonly GraphEdge[],
  directed: boolean,
): { trees: FileTree[]; crossLinks: FileLine[] } {
  const strands = edges.filter((edge) => !edge.crossLink);
  const treeOf = treeIds(nodes, strands);
  const groups = new Map<string, { nodes: GraphNode[]; strands: GraphEdge[] }>();
  for (const node of nodes) {
    const id = treeOf.get(node.id)!;
    const group = groups.get(id) ?? { nodes: [], strands: [] };
    group.nodes.push(node);
    groups.set(id, group);
  }
  // A strand between nodes of two trees joins trees: as a strand it would belong to neither.
  const joining = strands.filter((strand) => treeOf.get(strand.from) !== treeOf.get(strand.to));
  for (const strand of strands) if (!joining.includes(strand)) groups.get(treeOf.get(strand.from)!)!.strands.push(strand);
  const trees = [...groups].map(([id, group]) => treeOfGroup(id, group.nodes, group.strands, directed));
  const crossLinks = [...edges.filter((edge) => edge.crossLink), ...joining].map(
    ({ tree: _tree, crossLink: _crossLink, strut: _strut, legs: _legs, ...line }) => line as FileLine,
  );
  return { trees, crossLinks };
}

function treeOfGroup(id: string, nodes: readonly GraphNode[], strands: readonly GraphEdge[], directed: boolean): FileTree {
  const degree = new Map<string, number>();
  const led = new Set<string>();
  for (const { from, to } of strands) {
    for (const end of [from, to]) degree.set(end, (degree.get(end) ?? 0) + 1);
    led.add(to);
  }
  const marked = nodes.filter((node) => node.root);
  const origins = nodes.filter((node) => node.kind === "origin");
  const sources = directed ? nodes.filter((node) => !led.has(node.id)) : [];
  const root = [marked, origins, sources].find((list) => list.length > 0);
  const rootId = root?.length === 1 ? root[0]!.id : null;
  const name = nodes.find((node) => node.treeName !== undefined)?.treeName;
  return {
    id,
    ...(name !== undefined && { name }),
    root: rootId,
    nodes: nodes.map(({ tree: _tree, treeName: _name, root: _root, id: nodeId, kind, ...rest }): FileNode => {
      const known = kind ?? (nodeId === rootId ? "origin" : kindOfDegree(degree.get(nodeId) ?? 0));
      return { id: nodeId, kind: known, ...rest } as FileNode;
    }),
    strands: strands.map(({ tree: _tree, crossLink: _crossLink, ...strand }) => strand as FileStrand),
  };
}

function kindOfDegree(degree: number): FileNode["kind"] {
  return degree > 2 ? "fork" : degree === 2 ? "waypoint" : "open";
}

/** Tree id of every node: its own, else one per connected part (nodes with a tree take no part), numbered past ids in use. */
function treeIds(nodes: readonly GraphNode[], strands: readonly GraphEdge[]): Map<string, string> {
  const treeOf = new Map<string, string>();
  const used = new Set<string>([...nodes.map((node) => node.id), ...strands.map((strand) => strand.id)]);
  for (const node of nodes) {
    if (node.tree === undefined) continue;
    treeOf.set(node.id, node.tree);
    used.add(node.tree);
  }
  const neighbours = new Map<string, string[]>();
  for (const { from, to } of strands) {
    neighbours.set(from, [...(neighbours.get(from) ?? []), to]);
    neighbours.set(to, [...(neighbours.get(to) ?? []), from]);
  }
  let next = 1;
  for (const { id } of nodes) {
    if (treeOf.has(id)) continue;
    while (used.has(`t${next}`)) next += 1;
    const tree = `t${next}`;
    next += 1;
    const queue = [id];
    treeOf.set(id, tree);
    for (let at = queue.pop(); at !== undefined; at = queue.pop()) {
      for (const other of neighbours.get(at) ?? []) {
        if (treeOf.has(other)) continue;
        treeOf.set(other, tree);
        queue.push(other);
      }
    }
  }
  return treeOf;
}
