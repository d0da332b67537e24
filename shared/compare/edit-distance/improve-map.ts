import { type EditProblem, linkBetween, mapCost } from "#shared/compare/edit-distance/problem.ts";

/**
 * A map no worse than `start`, improved by moves until none helps: sending a node elsewhere, deleting it, or exchanging two
 * images. The cost it reaches is a proven upper bound of the edit distance.
 * @param start shape [a.size], -1 = deleted; not changed.
 * @param fixed number of rows from the front of `order` that keep their image.
 */
export function improveMap(
  problem: EditProblem,
  start: Int32Array,
  keep: ReadonlySet<number>,
): { map: Int32Array; cost: number } {
  const map = start.slice();
  const sourceOf = new Int32Array(problem.b.size).fill(-1);
  map.forEach((j, i) => {
    if (j >= 0) sourceOf[j] = i;
  });
  const rows = Array.from(map.keys()).filter((i) => !keep.has(i));
  const set = (i: number, j: number) => {
    if (map[i]! >= 0 && sourceOf[map[i]!] === i) sourceOf[map[i]!] = -1;
    map[i] = j;
    if (j >= 0) sourceOf[j] = i;
  };
  let improved = true;
  while (improved) {
    improved = false;
    for (const i of rows) {
      for (let j = -1; j < problem.b.size; j++) {
        const before = map[i]!;
        if (j === before) continue;
        const rival = j >= 0 ? sourceOf[j]! : -1;
        if (rival >= 0 && keep.has(rival)) continue;
        const old = localCost(problem, map, sourceOf, i, rival, before, j);
        set(i, j);
        if (rival >= 0) set(rival, before);
        if (localCost(problem, map, sourceOf, i, rival, before, j) < old - 1e-12) {
          improved = true;
          continue;
        }
        if (rival >= 0) set(rival, -1);
        set(i, before);
        if (rival >= 0) set(rival, j);
      }
    }
  }
  return { map, cost: mapCost(problem, map) };
}

/** The part of a map's cost that depends on the images of two nodes of A and on which of two nodes of B are used. */
function localCost(
  problem: EditProblem,
  map: Int32Array,
  sourceOf: Int32Array,
  i: number,
  k: number,
  j: number,
  l: number,
): number {
  const { a, b } = problem;
  let cost = 0;
  const seen = new Set<number>();
  for (const node of k >= 0 ? [i, k] : [i]) {
    const image = map[node]!;
    cost += image < 0 ? a.nodeCost[node]! : problem.nodeSubstitution[node * b.size + image]!;
    for (let at = a.offset[node]!; at < a.offset[node + 1]!; at++) {
      const other = a.neighbour[at]!;
      if (other === i || other === k) {
        if (seen.has(a.viaLink[at]!)) continue;
        seen.add(a.viaLink[at]!);
      }
      const to = map[other]!;
      const link = image < 0 || to < 0 ? -1 : linkBetween(b, image, to);
      cost += link < 0 ? a.linkCost[a.viaLink[at]!]! : problem.linkSubstitution[a.viaLink[at]! * b.links + link]!;
    }
  }
  seen.clear();
  for (const node of [j, l]) {
    if (node < 0) continue;
    if (sourceOf[node]! < 0) cost += b.nodeCost[node]!;
    for (let at = b.offset[node]!; at < b.offset[node + 1]!; at++) {
      const other = b.neighbour[at]!;
      if (other === j || other === l) {
        if (seen.has(b.viaLink[at]!)) continue;
        seen.add(b.viaLink[at]!);
      }
      const [x, y] = [sourceOf[node]!, sourceOf[other]!];
      if (x < 0 || y < 0 || linkBetween(a, x, y) < 0) cost += b.linkCost[b.viaLink[at]!]!;
    }
  }
  return cost;
}
