/** Links of a node beyond which the exact star match gives way to a weaker bound that still holds. */
const EXACT_LINKS = 7;

/**
 * Half the least cost of turning the open links of a node of A into the open links of a node of B: each link kept,
 * deleted or inserted on its own. The other half is counted at the links' other ends, so that the sum over a map's node
 * pairs never exceeds the map's cost (the branch bound).
 *
 * @param linksA link numbers of A, the first `countA` entries count; likewise B.
 * @param substitution shape [links of A, links of B], row-major with `width` columns.
 * @param costA cost of deleting each link; `costB` of inserting.
 * @source Riesen & Bunke, Image Vis Comput 2009;27:950-959; Blumenthal & Gamper, VLDB J 2020;29:419-458 (branch bound)
 */
export function halfStarCost(
  linksA: Int32Array,
  countA: number,
  linksB: Int32Array,
  countB: number,
  substitution: Float64Array,
  width: number,
  costA: Float64Array,
  costB: Float64Array,
): number {
  if (countA <= EXACT_LINKS && countB <= EXACT_LINKS)
    return match(linksA, countA, linksB, countB, 0, 0, substitution, width, costA, costB) / 2;
  let fromA = 0;
  for (let k = 0; k < countA; k++) {
    let least = costA[linksA[k]!]!;
    for (let l = 0; l < countB; l++) least = Math.min(least, substitution[linksA[k]! * width + linksB[l]!]!);
    fromA += least;
  }
  let fromB = 0;
  for (let l = 0; l < countB; l++) {
    let least = costB[linksB[l]!]!;
    for (let k = 0; k < countA; k++) least = Math.min(least, substitution[linksA[k]! * width + linksB[l]!]!);
    fromB += least;
  }
  return Math.max(fromA, fromB) / 2;
}

function match(
  linksA: Int32Array,
  countA: number,
  linksB: Int32Array,
  countB: number,
  k: number,
  taken: number,
  substitution: Float64Array,
  width: number,
  costA: Float64Array,
  costB: Float64Array,
): number {
  if (k === countA) {
    let rest = 0;
    for (let l = 0; l < countB; l++) if ((taken & (1 << l)) === 0) rest += costB[linksB[l]!]!;
    return rest;
  }
  const link = linksA[k]!;
  let best = costA[link]! + match(linksA, countA, linksB, countB, k + 1, taken, substitution, width, costA, costB);
  for (let l = 0; l < countB; l++) {
    if ((taken & (1 << l)) !== 0) continue;
    const here = substitution[link * width + linksB[l]!]!;
    if (here >= best) continue;
    best = Math.min(
      best,
      here + match(linksA, countA, linksB, countB, k + 1, taken | (1 << l), substitution, width, costA, costB),
    );
  }
  return best;
}
