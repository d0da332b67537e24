import type { CanonicalPass, ItemTable } from "#shared/agreement/items.ts";

/** A path between two nodes that all compared passes have, with no other such node between. */
export interface CommonPath {
  /** Node items at its two ends, the lower first. */
  readonly ends: readonly [number, number];
  /** For each compared pass: the strands along it, as indices into the pass's strands. */
  readonly strands: readonly (readonly number[])[];
}

/** The common paths and how much of each pass they cover. */
export interface CommonPaths {
  readonly paths: readonly CommonPath[];
  /** Share of each compared pass's length that lies on common paths, 0-1; null for a pass without length. */
  readonly coverage: readonly (number | null)[];
}

/**
 * Where one annotator's strand faces another's two, lengths are taken between nodes that all compared passes have.
 * @param nodes node items of all passes. @param compared which of the passes are compared.
 */
export function commonPaths(passes: readonly CanonicalPass[], nodes: ItemTable, compared: readonly number[]): CommonPaths {
  const common = nodes.items.flatMap((item, k) => (compared.every((p) => item.members[p]! >= 0) ? [k] : []));
  const found = compared.map((p) => {
    const itemOf = new Map(common.map((k) => [nodes.items[k]!.members[p]!, k]));
    return pathsOf(passes[p]!, itemOf);
  });
  const paths: CommonPath[] = [];
  const [own, ...others] = found;
  for (const [key, strands] of own ?? []) {
    const all = [strands, ...others.map((map) => map.get(key))];
    if (all.some((one) => one === undefined || one === null)) continue;
    const [a, b] = key.split(" ").map(Number) as [number, number];
    paths.push({ ends: [a, b], strands: all as readonly (readonly number[])[] });
  }
  paths.sort((x, y) => x.ends[0] - y.ends[0] || x.ends[1] - y.ends[1]);
  const coverage = compared.map((p, c) => {
    const length = (indices: readonly number[]) => indices.reduce((sum, k) => sum + passes[p]!.strands[k]!.length, 0);
    const all = length(passes[p]!.strands.map((_, k) => k));
    return all > 0 ? paths.reduce((sum, path) => sum + length(path.strands[c]!), 0) / all : null;
  });
  return { paths, coverage };
}

/** Strands between each two neighbouring common nodes, by "lower higher"; null where two ways join them. */
function pathsOf(pass: CanonicalPass, itemOf: ReadonlyMap<number, number>): Map<string, number[] | null> {
  const nodeAt = new Map(pass.nodes.map(({ tree, node }, k) => [`${tree} ${node}`, k]));
  const ends = pass.strands.map(({ tree, strand }) => {
    const { from, to } = pass.trees[tree]!.strands[strand]!;
    return [nodeAt.get(`${tree} ${from}`)!, nodeAt.get(`${tree} ${to}`)!] as const;
  });
  const meeting = new Map<number, number[]>();
  ends.forEach((pair, k) => {
    for (const node of new Set(pair)) meeting.set(node, [...(meeting.get(node) ?? []), k]);
  });
  const out = new Map<string, number[] | null>();
  for (const [start, item] of itemOf) {
    const stack: { node: number; way: number[] }[] = [{ node: start, way: [] }];
    const seen = new Set([start]);
    while (stack.length > 0) {
      const { node, way } = stack.pop()!;
      for (const k of meeting.get(node) ?? []) {
        const next = ends[k]![0] === node ? ends[k]![1] : ends[k]![0];
        if (way.includes(k) || next === start) continue;
        const reached = itemOf.get(next);
        if (reached === undefined) {
          if (!seen.has(next)) stack.push({ node: next, way: [...way, k] });
          seen.add(next);
        } else if (item < reached) {
          const key = `${item} ${reached}`;
          out.set(key, out.has(key) ? null : [...way, k]);
        }
      }
    }
  }
  return out;
}
