import { searchPartition } from "#shared/agreement/partition-search.ts";
import { bestMatching } from "#shared/compare/edit-distance/assignment.ts";

/** A positive attraction between two vertices of different passes. */
export interface Attraction {
  readonly a: number;
  readonly b: number;
  readonly gain: number;
}

/** Vertices in groups with at most one of each pass. */
export interface Partition {
  /** Vertices of each group, ascending; groups in the order of their first vertex. Single vertices are groups. */
  readonly groups: readonly (readonly number[])[];
  /** Sum of the attractions inside groups. */
  readonly total: number;
  /** True when the total is proven to be the greatest. */
  readonly exact: boolean;
  /** Vertices of each connected part for which the best found was taken. */
  readonly unproven: readonly number[];
}

/** Connected parts of up to this many vertices are searched to the end; larger ones only when a bound proves the best found. */
export const EXACT_VERTICES = 16;

/**
 * The partition of greatest total attraction with at most one vertex of each pass in a group: exact for each connected
 * part with vertices of two passes, with up to {@link EXACT_VERTICES} vertices, or where the sum of the passes' best
 * pairings is reached; else the best found from several starts. Ties go by the order of the vertices.
 * @param passOf pass of each vertex, ascending from 0. @source own derivation; bound by pairwise assignment
 */
export function bestPartition(passOf: readonly number[], attractions: readonly Attraction[]): Partition {
  const groups: number[][] = [];
  const unproven: number[] = [];
  let total = 0;
  for (const part of connectedParts(passOf.length, attractions)) {
    const inside = part.attractions;
    const local = new Map(part.vertices.map((vertex, i) => [vertex, i]));
    const gains = new Float64Array(part.vertices.length ** 2);
    for (const { a, b, gain } of inside) {
      const [i, j] = [local.get(a)!, local.get(b)!];
      gains[i * part.vertices.length + j] = gain;
      gains[j * part.vertices.length + i] = gain;
    }
    const solved = solvePart(
      part.vertices.map((vertex) => passOf[vertex]!),
      gains,
    );
    total += solved.total;
    if (!solved.exact) unproven.push(part.vertices.length);
    for (const group of solved.groups) groups.push(group.map((i) => part.vertices[i]!));
  }
  for (const group of groups) group.sort((a, b) => a - b);
  groups.sort((a, b) => a[0]! - b[0]!);
  return { groups, total, exact: unproven.length === 0, unproven };
}

interface Part {
  readonly vertices: number[];
  readonly attractions: Attraction[];
}

function connectedParts(count: number, attractions: readonly Attraction[]): Part[] {
  const parent = Array.from({ length: count }, (_, i) => i);
  const find = (i: number): number => {
    let root = i;
    while (parent[root] !== root) root = parent[root]!;
    while (parent[i] !== root) [parent[i], i] = [root, parent[i]!];
    return root;
  };
  for (const { a, b } of attractions) {
    const [x, y] = [find(a), find(b)];
    parent[Math.max(x, y)] = Math.min(x, y);
  }
  const parts = new Map<number, Part>();
  for (let i = 0; i < count; i++) {
    const root = find(i);
    if (!parts.has(root)) parts.set(root, { vertices: [], attractions: [] });
    parts.get(root)!.vertices.push(i);
  }
  for (const attraction of attractions) parts.get(find(attraction.a))!.attractions.push(attraction);
  return [...parts.values()];
}

interface Solved {
  readonly groups: number[][];
  readonly total: number;
  readonly exact: boolean;
}

const ROUNDING = 1e-9;

/** @param passes pass of each vertex, ascending. @param gains shape [n, n], symmetric, 0 = no attraction. */
function solvePart(passes: readonly number[], gains: Float64Array): Solved {
  const n = passes.length;
  if (n === 1) return { groups: [[0]], total: 0, exact: true };
  const names = [...new Set(passes)];
  const members = names.map((name) => passes.flatMap((pass, i) => (pass === name ? [i] : [])));
  const pairing = members.map((own, p) => members.slice(0, p).map((other) => pairingTotal(own, other, gains, n)));
  const bound = pairing.flat().reduce((sum, value) => sum + value, 0);
  let best: number[][] = [];
  let total = Number.NEGATIVE_INFINITY;
  for (let turn = 0; turn < names.length && total < bound - ROUNDING; turn++) {
    const order = [...members.slice(turn), ...members.slice(0, turn)];
    const groups = improve(grow(order, gains, n), members, passes, gains, n);
    const found = totalOf(groups, gains, n);
    if (found > total + ROUNDING) [best, total] = [groups, found];
  }
  let exact = names.length === 2 || total >= bound - ROUNDING;
  if (!exact && n <= EXACT_VERTICES) {
    const searched = searchPartition(passes, gains, pairing, total);
    exact = searched.finished;
    if (searched.groups) [best, total] = [searched.groups, totalOf(searched.groups, gains, n)];
  }
  return { groups: best.flatMap((group) => connectedInside(group, gains, n)), total, exact };
}

function pairingTotal(a: readonly number[], b: readonly number[], gains: Float64Array, n: number): number {
  const table = Float64Array.from(a.flatMap((i) => b.map((j) => gains[i * n + j]!)));
  return bestMatching(a.length, b.length, table).reduce((sum, j, i) => sum + (j < 0 ? 0 : table[i * b.length + j]!), 0);
}

function totalOf(groups: readonly (readonly number[])[], gains: Float64Array, n: number): number {
  let total = 0;
  for (const group of groups)
    for (let i = 0; i < group.length; i++) for (let j = 0; j < i; j++) total += gains[group[i]! * n + group[j]!]!;
  return total;
}

/** Adds the vertices of one pass to groups that have none of it, for the greatest gain; the others found new groups. */
function addPass(groups: readonly (readonly number[])[], own: readonly number[], gains: Float64Array, n: number): number[][] {
  const table = Float64Array.from(
    own.flatMap((vertex) => groups.map((group) => group.reduce((sum, other) => sum + gains[vertex * n + other]!, 0))),
  );
  const out = groups.map((group) => [...group]);
  bestMatching(own.length, groups.length, table).forEach((group, k) => {
    if (group < 0) out.push([own[k]!]);
    else out[group]!.push(own[k]!);
  });
  return out;
}

function grow(order: readonly (readonly number[])[], gains: Float64Array, n: number): number[][] {
  return order.reduce<number[][]>((groups, own) => addPass(groups, own, gains, n), []);
}

/** Takes out one pass after the other and puts it back at its best, and joins groups, until nothing is gained. */
function improve(
  start: number[][],
  members: readonly (readonly number[])[],
  passes: readonly number[],
  gains: Float64Array,
  n: number,
): number[][] {
  let groups = start;
  let total = totalOf(groups, gains, n);
  for (;;) {
    let next = groups;
    for (const own of members) {
      const without = next.flatMap((group) => {
        const left = group.filter((vertex) => !own.includes(vertex));
        return left.length === 0 ? [] : connectedInside(left, gains, n);
      });
      next = joinGroups(addPass(without, own, gains, n), passes, gains, n);
    }
    const found = totalOf(next, gains, n);
    if (found <= total + ROUNDING) return groups;
    [groups, total] = [next, found];
  }
}

/** Joins groups without a pass in common while that gains, the greatest gain first. */
function joinGroups(start: number[][], passes: readonly number[], gains: Float64Array, n: number): number[][] {
  const groups = start.map((group) => [...group]);
  for (;;) {
    let best = { gain: 0, i: -1, j: -1 };
    for (let i = 0; i < groups.length; i++)
      for (let j = 0; j < i; j++) {
        if (groups[i]!.some((a) => groups[j]!.some((b) => passes[a] === passes[b]))) continue;
        const gain = groups[i]!.reduce((sum, a) => sum + groups[j]!.reduce((inner, b) => inner + gains[a * n + b]!, 0), 0);
        if (gain > best.gain) best = { gain, i, j };
      }
    if (best.i < 0) return groups;
    groups[best.j]!.push(...groups[best.i]!);
    groups.splice(best.i, 1);
  }
}

/** The connected pieces of a group: vertices that nothing holds together are no group. */
function connectedInside(group: readonly number[], gains: Float64Array, n: number): number[][] {
  const left = new Set(group);
  const out: number[][] = [];
  for (const first of group) {
    if (!left.delete(first)) continue;
    const piece = [first];
    for (let head = 0; head < piece.length; head++)
      for (const other of [...left])
        if (gains[piece[head]! * n + other]! > 0) {
          left.delete(other);
          piece.push(other);
        }
    out.push(piece);
  }
  return out;
}
