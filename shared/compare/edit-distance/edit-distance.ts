import type { CanonicalTree } from "#shared/compare/canonical.ts";
import type { CostModel } from "#shared/compare/costs.ts";
import { type EditProblem, editProblem, wholeCost } from "#shared/compare/edit-distance/problem.ts";
import { leastDisplacement, searchEditDistance } from "#shared/compare/edit-distance/search.ts";
import { twinTable } from "#shared/compare/edit-distance/twins.ts";

export type OriginRule = "held" | "free";

export interface EditDistance {
  /** The best distance found; equals `upper`. */
  readonly ged: number;
  /** Proven: the distance is not below this. */
  readonly lower: number;
  readonly upper: number;
  /** True when lower and upper differ by less than 1e-9. */
  readonly exact: boolean;
  /** Image in B of each node of A, -1 = deleted; of the least total displacement among those of cost `ged` that the search could see. */
  readonly map: Int32Array;
  /** True when the rule of the held origin was asked for but one side has no root. */
  readonly originFreed: boolean;
  /** Cost of deleting all of A, and of inserting all of B. */
  readonly whole: { readonly a: number; readonly b: number };
  readonly visited: number;
}

/** Partial maps that the search for the clearest of several equally good maps may look at. */
const TIE_BUDGET = 20_000;

/**
 * Edit distance of two canonical trees as undirected attributed graphs, with proven bounds: the least cost over node maps,
 * the strand maps following from them. Equal for (A, B) and (B, A) whenever it is exact.
 * @param shouldStop asked now and then; true ends the search with the bounds proven so far.
 * @source Sanfeliu & Fu, IEEE Trans SMC 1983;13:353-362; Bunke & Allermann, Pattern Recognit Lett 1983;1:245-253
 */
export function editDistance(
  a: CanonicalTree,
  b: CanonicalTree,
  costs: CostModel,
  origin: OriginRule,
  shouldStop: () => boolean = () => false,
): EditDistance {
  const swapped = a.nodes.length > b.nodes.length;
  const [rows, columns] = swapped ? [b, a] : [a, b];
  const problem = editProblem(rows, columns, costs);
  const rooted = rows.root !== null && columns.root !== null;
  const held: readonly [number, number] | null = origin === "held" && rooted ? [rows.root!, columns.root!] : null;
  const hints = rows.nodes.length > 0 && columns.nodes.length > 0 ? [nearestMap(problem)] : [];
  const twins = twinTable(problem, (j) => columns.nodes[j]!.type);
  const found = searchEditDistance(problem, { held, hints, twins, shouldStop });
  const exact = found.upper - found.lower < 1e-9;
  const map = exact ? leastDisplacement(problem, found.map, found.upper, held, TIE_BUDGET, shouldStop) : found.map;
  const whole = [wholeCost(problem.a), wholeCost(problem.b)] as const;
  return {
    ged: found.upper,
    lower: found.lower,
    upper: found.upper,
    exact,
    map: swapped ? inverse(map, a.nodes.length) : map,
    originFreed: origin === "held" && !rooted && (rows.nodes.length > 0 || columns.nodes.length > 0),
    whole: swapped ? { a: whole[1], b: whole[0] } : { a: whole[0], b: whole[1] },
    visited: found.visited,
  };
}

/** Each node of A to the nearest node of B still free, nearest pairs first: where people saw the same tree this is close to the best map. */
function nearestMap(problem: EditProblem): Int32Array {
  const width = problem.b.size;
  const map = new Int32Array(problem.a.size).fill(-1);
  const used = new Uint8Array(width);
  const pairs = Array.from(problem.displacement.keys()).sort(
    (x, y) => problem.displacement[x]! - problem.displacement[y]! || x - y,
  );
  for (const at of pairs) {
    const [i, j] = [Math.floor(at / width), at % width];
    if (map[i]! >= 0 || used[j] || problem.nodeSubstitution[at]! >= 2) continue;
    map[i] = j;
    used[j] = 1;
  }
  return map;
}

function inverse(map: Int32Array, size: number): Int32Array {
  const out = new Int32Array(size).fill(-1);
  map.forEach((j, i) => {
    if (j >= 0) out[j] = i;
  });
  return out;
}
