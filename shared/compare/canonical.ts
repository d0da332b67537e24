import type { Vec3 } from "#shared/geometry/types.ts";
import { type PlainStrand, type PlainTree, placeOf, strandLength } from "#shared/trees/plain-trees.ts";

/** Node types that the edit distance tells apart: all kinds of ends are one. */
export type CanonicalType = "origin" | "fork" | "end";

export interface CanonicalNode {
  /** Id of the node in its tree; of the first in id order when forks were contracted. */
  readonly id: string;
  /** All nodes of the tree that this one stands for. */
  readonly members: readonly string[];
  readonly type: CanonicalType;
  readonly place: Vec3;
}

export interface CanonicalStrand {
  /** Id of the strand in its tree; of the first along it when waypoints were dissolved. */
  readonly id: string;
  /** All strands of the tree along it, in order from `from`. */
  readonly members: readonly string[];
  /** Indices into the nodes. */
  readonly from: number;
  readonly to: number;
  /** Sum of its members' lengths, millimetres. */
  readonly length: number;
}

/** A tree reduced to what is compared. Depends on this tree alone, never on the other side. */
export interface CanonicalTree {
  readonly nodes: readonly CanonicalNode[];
  readonly strands: readonly CanonicalStrand[];
  /** Index of the root; null when the tree names none. */
  readonly root: number | null;
}

/**
 * The canonical form: waypoints of degree two are dissolved; forks joined by strands strictly shorter than `merge` are
 * contracted all at once, to the unweighted mean of their places, and those strands vanish; other strands keep their
 * lengths, and parallel strands that result are kept. A fork with only two strands stays.
 * @param merge millimetres, 0 = contract nothing.
 */
export function canonicalTree(tree: PlainTree, merge: number): CanonicalTree {
  return contractForks(dissolveWaypoints(tree), merge);
}

function dissolveWaypoints(tree: PlainTree): CanonicalTree {
  const byId = new Map(tree.nodes.map((node) => [node.id, node]));
  const strands = [...tree.strands]
    .filter((strand) => byId.has(strand.from) && byId.has(strand.to))
    .sort((a, b) => compareIds(a.id, b.id));
  const incident = new Map<string, PlainStrand[]>(tree.nodes.map((node) => [node.id, []]));
  for (const strand of strands) {
    incident.get(strand.from)!.push(strand);
    if (strand.to !== strand.from) incident.get(strand.to)!.push(strand);
  }
  const isPassedThrough = (id: string) => byId.get(id)!.kind === "waypoint" && incident.get(id)!.length === 2 && id !== tree.root;
  const kept = tree.nodes.filter((node) => !isPassedThrough(node.id)).sort((a, b) => compareIds(a.id, b.id));
  const index = new Map(kept.map((node, i) => [node.id, i]));
  const used = new Set<string>();
  const out: CanonicalStrand[] = [];
  for (const first of strands) {
    const start = index.has(first.from) ? first.from : index.has(first.to) ? first.to : undefined;
    if (used.has(first.id) || start === undefined) continue;
    const members: string[] = [];
    let length = 0;
    let strand = first;
    let node = start;
    for (;;) {
      used.add(strand.id);
      members.push(strand.id);
      length += strandLength(strand, byId.get(strand.from), byId.get(strand.to));
      node = strand.from === node ? strand.to : strand.from;
      if (index.has(node)) break;
      const next = incident.get(node)!.find((candidate) => !used.has(candidate.id));
      if (!next) break;
      strand = next;
    }
    const end = index.get(node);
    if (end !== undefined) out.push({ id: first.id, members, from: index.get(start)!, to: end, length });
  }
  const nodes = kept.map((node): CanonicalNode => {
    return { id: node.id, members: [node.id], type: typeOf(node.kind, incident.get(node.id)!.length), place: placeOf(node) };
  });
  return { nodes, strands: out, root: tree.root === null ? null : (index.get(tree.root) ?? null) };
}

/** A waypoint that cannot be dissolved counts as what it looks like: an end when one strand or none meets it, else a fork. */
function typeOf(kind: string, degree: number): CanonicalType {
  if (kind === "origin") return "origin";
  if (kind === "fork") return "fork";
  if (kind === "waypoint") return degree <= 1 ? "end" : "fork";
  return "end";
}

function contractForks(tree: CanonicalTree, merge: number): CanonicalTree {
  const group = tree.nodes.map((_, i) => i);
  const find = (i: number): number => (group[i] === i ? i : find(group[i]!));
  const vanishes = tree.strands.map((strand) => {
    const bothForks = tree.nodes[strand.from]!.type === "fork" && tree.nodes[strand.to]!.type === "fork";
    return bothForks && strand.from !== strand.to && strand.length < merge;
  });
  tree.strands.forEach((strand, k) => {
    const [a, b] = [find(strand.from), find(strand.to)];
    if (vanishes[k] && a !== b) group[Math.max(a, b)] = Math.min(a, b);
  });
  const heads = tree.nodes.map((_, i) => i).filter((i) => find(i) === i);
  const newIndex = new Map(heads.map((head, i) => [head, i]));
  const nodes = heads.map((head): CanonicalNode => {
    const members = tree.nodes.filter((_, i) => find(i) === head);
    const first = members[0]!;
    if (members.length === 1) return first;
    const mean = (axis: 0 | 1 | 2) => members.reduce((sum, node) => sum + node.place[axis], 0) / members.length;
    return {
      id: first.id,
      members: members.flatMap((node) => node.members),
      type: first.type,
      place: [mean(0), mean(1), mean(2)],
    };
  });
  const at = (i: number) => newIndex.get(find(i))!;
  const strands = tree.strands
    .filter((_, k) => !vanishes[k])
    .map((strand) => ({ ...strand, from: at(strand.from), to: at(strand.to) }));
  return { nodes, strands, root: tree.root === null ? null : at(tree.root) };
}

/** Order of ids: numbers inside them by value, so that n9 comes before n10. */
export function compareIds(a: string, b: string): number {
  const pattern = /(\d+)/;
  const [x, y] = [a.split(pattern), b.split(pattern)];
  for (let i = 0; i < Math.min(x.length, y.length); i++) {
    if (x[i] === y[i]) continue;
    const difference = i % 2 === 1 ? Number(x[i]) - Number(y[i]) : 0;
    if (difference !== 0) return difference;
    return x[i]! < y[i]! ? -1 : 1;
  }
  return x.length - y.length || (a < b ? -1 : a > b ? 1 : 0);
}
