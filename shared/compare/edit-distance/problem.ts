import type { CanonicalTree } from "#shared/compare/canonical.ts";
import type { CostModel } from "#shared/compare/costs.ts";
import { distance } from "#shared/geometry/vec3.ts";

/** One side as flat arrays. A link joins two different nodes and stands for all strands between them. */
export interface FlatGraph {
  readonly size: number;
  /** Cost of deleting (inserting) the node itself with its own loops; shape [size]. */
  readonly nodeCost: Float64Array;
  readonly links: number;
  /** shape [links, 2]: node indices, the smaller first. */
  readonly linkEnds: Int32Array;
  /** Number of strands of each link = cost of deleting (inserting) it; shape [links]. */
  readonly linkCost: Float64Array;
  /** Neighbours of node i stand at offset[i] .. offset[i + 1] - 1 of `neighbour` and `viaLink`. */
  readonly offset: Int32Array;
  readonly neighbour: Int32Array;
  readonly viaLink: Int32Array;
}

/**
 * The edit-distance problem of two canonical trees (any attributed graphs: parallel strands and loops are allowed), with
 * every single cost computed once. Rows are A's nodes, columns B's.
 */
export interface EditProblem {
  readonly a: FlatGraph;
  readonly b: FlatGraph;
  /** Cost of mapping node i to node j, loops included; shape [a.size, b.size]. */
  readonly nodeSubstitution: Float64Array;
  /** Cost of mapping link k to link l; shape [a.links, b.links]. */
  readonly linkSubstitution: Float64Array;
  /** Displacement of mapping node i to node j, millimetres; shape [a.size, b.size]. Breaks ties among equal distances. */
  readonly displacement: Float64Array;
  /** Every total is a multiple of this; 0 = no such step. */
  readonly step: number;
}

/** Flattens two canonical trees under a cost model. Complexity O(nodes^2 + links^2). */
export function editProblem(a: CanonicalTree, b: CanonicalTree, costs: CostModel): EditProblem {
  const [left, right] = [flatten(a), flatten(b)];
  const nodeSubstitution = new Float64Array(left.graph.size * right.graph.size);
  const displacement = new Float64Array(nodeSubstitution.length);
  for (let i = 0; i < left.graph.size; i++) {
    for (let j = 0; j < right.graph.size; j++) {
      const at = i * right.graph.size + j;
      nodeSubstitution[at] = costs.node(a, i, b, j) + matchLengths(left.loops[i]!, right.loops[j]!, costs);
      displacement[at] = distance(a.nodes[i]!.place, b.nodes[j]!.place);
    }
  }
  const linkSubstitution = new Float64Array(left.graph.links * right.graph.links);
  for (let k = 0; k < left.graph.links; k++) {
    for (let l = 0; l < right.graph.links; l++) {
      linkSubstitution[k * right.graph.links + l] = matchLengths(left.lengths[k]!, right.lengths[l]!, costs);
    }
  }
  return { a: left.graph, b: right.graph, nodeSubstitution, linkSubstitution, displacement, step: costs.step };
}

function flatten(tree: CanonicalTree): { graph: FlatGraph; lengths: number[][]; loops: number[][] } {
  const size = tree.nodes.length;
  const loops: number[][] = tree.nodes.map(() => []);
  const lengths: number[][] = [];
  const ends: number[] = [];
  const indexOf = new Map<number, number>();
  for (const strand of tree.strands) {
    if (strand.from === strand.to) {
      loops[strand.from]!.push(strand.length);
      continue;
    }
    const low = Math.min(strand.from, strand.to);
    const high = Math.max(strand.from, strand.to);
    const known = indexOf.get(low * size + high);
    if (known === undefined) {
      indexOf.set(low * size + high, lengths.length);
      lengths.push([strand.length]);
      ends.push(low, high);
    } else {
      lengths[known]!.push(strand.length);
    }
  }
  const links = lengths.length;
  const offset = new Int32Array(size + 1);
  for (const end of ends) offset[end + 1]! += 1;
  for (let i = 0; i < size; i++) offset[i + 1]! += offset[i]!;
  const neighbour = new Int32Array(2 * links);
  const viaLink = new Int32Array(2 * links);
  const fill = offset.slice(0, size);
  for (let k = 0; k < links; k++) {
    for (const side of [0, 1] as const) {
      const from = ends[2 * k + side]!;
      neighbour[fill[from]!] = ends[2 * k + 1 - side]!;
      viaLink[fill[from]!++] = k;
    }
  }
  const nodeCost = Float64Array.from(loops, (own) => 1 + own.length);
  const linkCost = Float64Array.from(lengths, (parallel) => parallel.length);
  return {
    graph: { size, nodeCost, links, linkEnds: Int32Array.from(ends), linkCost, offset, neighbour, viaLink },
    lengths,
    loops,
  };
}

/** Least cost of turning one list of parallel strands into another: one may be left out on the longer side only (exchanging costs at most 1). */
function matchLengths(a: readonly number[], b: readonly number[], costs: CostModel): number {
  const [few, many] = a.length <= b.length ? [a, b] : [b, a];
  const pairCost = (x: number, y: number) => (few === a ? costs.strand(x, y) : costs.strand(y, x));
  const left = many.length - few.length;
  if (few.length === 0) return left;
  if (few.length === 1) return left + Math.min(...many.map((length) => pairCost(few[0]!, length)));
  let best = Number.POSITIVE_INFINITY;
  many.forEach((length, taken) => {
    const rest = many.filter((_, k) => k !== taken);
    const cost =
      pairCost(few[0]!, length) + (few === a ? matchLengths(few.slice(1), rest, costs) : matchLengths(rest, few.slice(1), costs));
    best = Math.min(best, cost);
  });
  return best;
}

/** Index of the link between two nodes of one side, -1 when there is none. */
export function linkBetween(graph: FlatGraph, i: number, j: number): number {
  for (let at = graph.offset[i]!; at < graph.offset[i + 1]!; at++) if (graph.neighbour[at] === j) return graph.viaLink[at]!;
  return -1;
}

/**
 * Cost of a whole map. @param map shape [a.size]: the image of each node of A, -1 = deleted; nodes of B that are no image
 * are inserted.
 */
export function mapCost(problem: EditProblem, map: Int32Array): number {
  const { a, b } = problem;
  let cost = 0;
  const used = new Uint8Array(b.size);
  for (let i = 0; i < a.size; i++) {
    const j = map[i]!;
    if (j < 0) cost += a.nodeCost[i]!;
    else {
      used[j] = 1;
      cost += problem.nodeSubstitution[i * b.size + j]!;
    }
  }
  for (let j = 0; j < b.size; j++) if (!used[j]) cost += b.nodeCost[j]!;
  const kept = new Uint8Array(b.links);
  for (let k = 0; k < a.links; k++) {
    const i = map[a.linkEnds[2 * k]!]!;
    const j = map[a.linkEnds[2 * k + 1]!]!;
    const l = i < 0 || j < 0 ? -1 : linkBetween(b, i, j);
    if (l < 0) cost += a.linkCost[k]!;
    else {
      kept[l] = 1;
      cost += problem.linkSubstitution[k * b.links + l]!;
    }
  }
  for (let l = 0; l < b.links; l++) if (!kept[l]) cost += b.linkCost[l]!;
  return cost;
}

/** Cost of deleting all of one side. */
export function wholeCost(graph: FlatGraph): number {
  return graph.nodeCost.reduce((sum, cost) => sum + cost, 0) + graph.linkCost.reduce((sum, cost) => sum + cost, 0);
}
