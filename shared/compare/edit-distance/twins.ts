import type { EditProblem } from "#shared/compare/edit-distance/problem.ts";

/**
 * Nodes of B that a symmetry of B makes interchangeable. `parent` and `twinGroup` describe B as a rooted forest: siblings of
 * the same group carry subtrees of the same shape, so that only the first untouched one of a group need be tried.
 */
export interface TwinTable {
  /** shape [b.size]; -1 at a root. */
  readonly parent: Int32Array;
  /** For each node its earlier siblings with the same subtree. */
  readonly earlierTwins: readonly (readonly number[])[];
  /** Nodes of each node's subtree. */
  readonly subtree: readonly Int32Array[];
}

/** Twins of B when costs depend on structure alone (`step` > 0) and B has no loop; null otherwise. Shapes by canonical strings (Aho, Hopcroft & Ullman 1974). */
export function twinTable(problem: EditProblem, typeCode: (j: number) => string): TwinTable | null {
  const { b } = problem;
  if (problem.step === 0 || b.links !== b.linkCost.reduce((sum, cost) => sum + cost, 0)) return null;
  const parent = new Int32Array(b.size).fill(-2);
  const order: number[] = [];
  let roots = 0;
  for (let root = 0; root < b.size; root++) {
    if (parent[root] !== -2) continue;
    roots += 1;
    parent[root] = -1;
    order.push(root);
    for (let head = order.length - 1; head < order.length; head++) {
      const node = order[head]!;
      for (let at = b.offset[node]!; at < b.offset[node + 1]!; at++) {
        const other = b.neighbour[at]!;
        if (parent[other] !== -2) continue;
        parent[other] = node;
        order.push(other);
      }
    }
  }
  if (b.links !== b.size - roots) return null;
  const children: number[][] = Array.from({ length: b.size }, () => []);
  for (const node of order) if (parent[node]! >= 0) children[parent[node]!]!.push(node);
  const shape: string[] = new Array(b.size).fill("");
  const subtree: Int32Array[] = new Array(b.size);
  for (const node of [...order].reverse()) {
    const below = children[node]!;
    shape[node] = `(${typeCode(node)}${below
      .map((child) => shape[child])
      .sort()
      .join("")})`;
    subtree[node] = Int32Array.from([node, ...below.flatMap((child) => [...subtree[child]!])]);
  }
  const earlierTwins = Array.from({ length: b.size }, (_, node): number[] => {
    const siblings = parent[node]! >= 0 ? children[parent[node]!]! : [];
    return siblings.filter((other) => other < node && shape[other] === shape[node]);
  });
  return { parent, earlierTwins, subtree };
}

/** True when trying `candidate` would only repeat, mirrored, what an earlier node of B already offers. */
export function isRepeat(twins: TwinTable, sourceOf: Int32Array, candidate: number): boolean {
  const untouched = (node: number) => twins.subtree[node]!.every((member) => sourceOf[member]! < 0);
  for (let node = candidate; node >= 0; node = twins.parent[node]!) {
    if (!untouched(node)) return false;
    if (twins.earlierTwins[node]!.some(untouched)) return true;
  }
  return false;
}
