import type { CanonicalStrand, CanonicalTree } from "#shared/compare/canonical.ts";
import type { CostModel } from "#shared/compare/costs.ts";

export type EditOp = "insert-node" | "delete-node" | "change-node" | "insert-strand" | "delete-strand" | "change-strand";

/** One step of the script that turns A into B; ids of the trees' own nodes and strands. */
export interface EditStep {
  readonly op: EditOp;
  readonly a: string | null;
  readonly b: string | null;
  readonly cost: number;
}

/** Which strand of A became which of B: indices, -1 = deleted. */
export interface StrandMap {
  readonly imageOf: Int32Array;
  readonly sourceOf: Int32Array;
}

/** The strand map that a node map implies: strands between mapped nodes are exchanged at least cost, the others deleted or inserted. */
export function strandMap(a: CanonicalTree, b: CanonicalTree, nodeMap: Int32Array, costs: CostModel): StrandMap {
  const imageOf = new Int32Array(a.strands.length).fill(-1);
  const sourceOf = new Int32Array(b.strands.length).fill(-1);
  const between = new Map<string, number[]>();
  const key = (i: number, j: number) => `${Math.min(i, j)} ${Math.max(i, j)}`;
  b.strands.forEach((strand, l) => {
    between.set(key(strand.from, strand.to), [...(between.get(key(strand.from, strand.to)) ?? []), l]);
  });
  const parallel = new Map<string, number[]>();
  a.strands.forEach((strand, k) => {
    const [i, j] = [nodeMap[strand.from]!, nodeMap[strand.to]!];
    if (i >= 0 && j >= 0) parallel.set(key(i, j), [...(parallel.get(key(i, j)) ?? []), k]);
  });
  for (const [ends, sources] of parallel) {
    const images = between.get(ends) ?? [];
    for (const [k, l] of leastPairs(sources, images, (k, l) => costs.strand(a.strands[k]!.length, b.strands[l]!.length))) {
      imageOf[k] = l;
      sourceOf[l] = k;
    }
  }
  return { imageOf, sourceOf };
}

function leastPairs(a: readonly number[], b: readonly number[], cost: (k: number, l: number) => number): [number, number][] {
  if (a.length === 0 || b.length === 0) return [];
  const solve = (
    rows: readonly number[],
    columns: readonly number[],
    costOf: (r: number, c: number) => number,
  ): { pairs: [number, number][]; cost: number } => {
    if (rows.length === 0) return { pairs: [], cost: 0 };
    const [first, ...rest] = rows as [number, ...number[]];
    let best: { pairs: [number, number][]; cost: number } | null = null;
    for (const column of columns) {
      const below = solve(
        rest,
        columns.filter((other) => other !== column),
        costOf,
      );
      const total = below.cost + costOf(first, column);
      if (!best || total < best.cost - 1e-12) best = { pairs: [[first, column], ...below.pairs], cost: total };
    }
    return best!;
  };
  if (a.length <= b.length) return solve(a, b, cost).pairs;
  return solve(b, a, (l, k) => cost(k, l)).pairs.map(([l, k]) => [k, l]);
}

/** The steps of an edit map that cost anything, nodes before strands, A's before B's; their costs add up to the map's cost. */
export function editScript(a: CanonicalTree, b: CanonicalTree, nodeMap: Int32Array, costs: CostModel): EditStep[] {
  const steps: EditStep[] = [];
  const used = new Set<number>();
  a.nodes.forEach((node, i) => {
    const j = nodeMap[i]!;
    if (j < 0) steps.push({ op: "delete-node", a: node.id, b: null, cost: 1 });
    else {
      used.add(j);
      const cost = costs.node(a, i, b, j);
      if (cost > 0) steps.push({ op: "change-node", a: node.id, b: b.nodes[j]!.id, cost });
    }
  });
  b.nodes.forEach((node, j) => {
    if (!used.has(j)) steps.push({ op: "insert-node", a: null, b: node.id, cost: 1 });
  });
  const { imageOf, sourceOf } = strandMap(a, b, nodeMap, costs);
  a.strands.forEach((strand, k) => {
    const l = imageOf[k]!;
    if (l < 0) steps.push({ op: "delete-strand", a: strand.id, b: null, cost: 1 });
    else {
      const cost = costs.strand(strand.length, b.strands[l]!.length);
      if (cost > 0) steps.push({ op: "change-strand", a: strand.id, b: b.strands[l]!.id, cost });
    }
  });
  b.strands.forEach((strand: CanonicalStrand, l) => {
    if (sourceOf[l]! < 0) steps.push({ op: "insert-strand", a: null, b: strand.id, cost: 1 });
  });
  return steps;
}
