/** Steps after which a search ends unfinished; parts of the stated size need far fewer, even at their worst arrangement met in tests. */
const MOST_STEPS = 5_000_000;

/**
 * Searches all partitions with at most one vertex of each pass in a group for a total above a known one.
 * @param passes pass of each vertex, ascending. @param gains shape [n, n], symmetric.
 * @param pairing best pairing of each pass with each earlier one, by place among the passes.
 * @returns the best partition, null when none is better than `known`; finished = false when it gave up.
 */
export function searchPartition(
  passes: readonly number[],
  gains: Float64Array,
  pairing: readonly (readonly number[])[],
  known: number,
): { readonly groups: number[][] | null; readonly finished: boolean } {
  const n = passes.length;
  const above = boundsOfRest(passes, gains, pairing);
  const groups: number[][] = [];
  let best: number[][] | null = null;
  let most = known;
  let steps = 0;
  const visit = (vertex: number, total: number): void => {
    steps += 1;
    if (steps > MOST_STEPS || total + above[vertex]! <= most + 1e-9) return;
    if (vertex === n) {
      most = total;
      best = groups.map((group) => [...group]);
      return;
    }
    const choices = groups
      .map((group, at) => ({ at, gain: group.reduce((sum, other) => sum + gains[vertex * n + other]!, 0) }))
      .filter(({ at }) => groups[at]!.every((other) => passes[other] !== passes[vertex]))
      .sort((a, b) => b.gain - a.gain || a.at - b.at);
    for (const { at, gain } of choices) {
      groups[at]!.push(vertex);
      visit(vertex + 1, total + gain);
      groups[at]!.pop();
    }
    groups.push([vertex]);
    visit(vertex + 1, total);
    groups.pop();
  };
  visit(0, 0);
  return { groups: best, finished: steps <= MOST_STEPS };
}

/** For each vertex, the most that it and those after it can add: later passes their best pairings, its own pass its best partners. */
function boundsOfRest(passes: readonly number[], gains: Float64Array, pairing: readonly (readonly number[])[]): Float64Array {
  const n = passes.length;
  const names = [...new Set(passes)];
  const place = passes.map((pass) => names.indexOf(pass));
  const above = new Float64Array(n + 1);
  for (let vertex = n - 1; vertex >= 0; vertex--) {
    const best = new Float64Array(place[vertex]!);
    for (let other = 0; other < vertex; other++)
      if (place[other]! < place[vertex]!) best[place[other]!] = Math.max(best[place[other]!]!, gains[vertex * n + other]!);
    above[vertex] = above[vertex + 1]! + best.reduce((sum, value) => sum + value, 0);
    if (vertex > 0 && place[vertex - 1] === place[vertex]) continue;
    const later = pairing.slice(place[vertex]!).reduce((sum, row) => sum + row.reduce((inner, value) => inner + value, 0), 0);
    above[vertex] = Math.min(above[vertex]!, later);
  }
  return above;
}
