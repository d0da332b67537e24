import type { Vec3 } from "#shared/geometry/types.ts";
import { centreline, type PlainNode, type PlainStrand, type PlainTree } from "#shared/trees/plain-trees.ts";

/** A strand seen from the root: its centreline and radii run away from the root. */
export interface RootedStrand {
  readonly strand: PlainStrand;
  readonly from: string;
  readonly to: string;
  /** shape [n >= 1], millimetres. */
  readonly line: readonly Vec3[];
  /** shape [n], millimetres; null = below resolution or not measured. */
  readonly radii: readonly (number | null)[];
  /** Index of the strand that leads here from the root; -1 at the root or where the tree is not connected. */
  readonly before: number;
}

/**
 * A tree's strands oriented from its root, breadth first; strands that the root does not reach follow, each component
 * oriented from its first node. A strand closing a loop is kept, oriented as it was found.
 */
export function rootedStrands(tree: PlainTree): RootedStrand[] {
  const byId = new Map(tree.nodes.map((node) => [node.id, node]));
  const incident = new Map<string, PlainStrand[]>();
  for (const strand of tree.strands)
    for (const end of new Set([strand.from, strand.to])) incident.set(end, [...(incident.get(end) ?? []), strand]);
  const out: RootedStrand[] = [];
  const arrival = new Map<string, number>();
  const used = new Set<string>();
  const starts = [...(tree.root === null ? [] : [tree.root]), ...tree.nodes.map((node) => node.id)];
  for (const start of starts) {
    if (arrival.has(start) || !byId.has(start)) continue;
    arrival.set(start, -1);
    const queue = [start];
    for (let head = 0; head < queue.length; head++) {
      const from = queue[head]!;
      for (const strand of incident.get(from) ?? []) {
        if (used.has(strand.id)) continue;
        used.add(strand.id);
        const to = strand.from === from ? strand.to : strand.from;
        out.push(orient(strand, from, to, byId, arrival.get(from)!));
        if (arrival.has(to)) continue;
        arrival.set(to, out.length - 1);
        queue.push(to);
      }
    }
  }
  return out;
}

function orient(
  strand: PlainStrand,
  from: string,
  to: string,
  byId: ReadonlyMap<string, PlainNode>,
  before: number,
): RootedStrand {
  const line = centreline(strand, byId.get(strand.from), byId.get(strand.to));
  const known = strand.points && strand.radii && strand.radii.length === line.length ? [...strand.radii] : line.map(() => null);
  const turned = strand.from !== from;
  return { strand, from, to, line: turned ? line.reverse() : line, radii: turned ? known.reverse() : known, before };
}

/** Paths from the root to each end, as indices of strands in order. */
export function pathsToEnds(strands: readonly RootedStrand[]): number[][] {
  const leadsOn = new Set(strands.map((strand) => strand.before));
  return strands.flatMap((_, i) => {
    if (leadsOn.has(i)) return [];
    const path: number[] = [];
    for (let k = i; k >= 0; k = strands[k]!.before) path.unshift(k);
    return [path];
  });
}
