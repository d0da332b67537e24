import { polylineLength } from "#shared/geometry/polyline.ts";
import type { PlainSet, PlainTree } from "#shared/trees/plain-trees.ts";
import { placeOf } from "#shared/trees/plain-trees.ts";
import { pathsToEnds, rootedStrands } from "#shared/trees/rooted-strands.ts";

/**
 * The candidate that knows nothing: one straight strand per reference tree, from its origin to its farthest end along the
 * strands. What it scores is what a gate lets pass for nothing.
 */
export function trivialCandidate(reference: PlainSet): PlainSet {
  return { trees: reference.trees.flatMap((tree) => straightTree(tree) ?? []) };
}

function straightTree(tree: PlainTree): PlainTree | undefined {
  const strands = rootedStrands(tree);
  const byId = new Map(tree.nodes.map((node) => [node.id, node]));
  const root = tree.root === null ? undefined : byId.get(tree.root);
  if (!root) return undefined;
  let farthest: string | undefined;
  let longest = -1;
  for (const path of pathsToEnds(strands)) {
    if (strands[path[0]!]!.from !== root.id) continue;
    const length = path.reduce((sum, k) => sum + polylineLength(strands[k]!.line), 0);
    if (length > longest) {
      longest = length;
      farthest = strands[path[path.length - 1]!]!.to;
    }
  }
  const end = farthest === undefined ? undefined : byId.get(farthest);
  if (!end) return undefined;
  const points = [placeOf(root), placeOf(end)];
  return {
    id: tree.id,
    name: tree.name,
    root: root.id,
    nodes: [root, end.kind === "fork" || end.kind === "waypoint" ? { ...end, kind: "lost-end" } : end],
    strands: [{ id: `${tree.id}-straight`, from: root.id, to: end.id, points }],
  };
}
