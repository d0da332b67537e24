import { BoundState, DELETED, UNDECIDED } from "#shared/compare/edit-distance/bound-state.ts";
import { improveMap } from "#shared/compare/edit-distance/improve-map.ts";
import { type EditProblem, mapCost } from "#shared/compare/edit-distance/problem.ts";
import { isRepeat, type TwinTable } from "#shared/compare/edit-distance/twins.ts";

/** Totals closer than this are one value. */
const SAME = 1e-10;

export interface SearchOptions {
  /** Node of A and node of B that are mapped to each other (held origin); null = free. */
  readonly held: readonly [number, number] | null;
  /** Maps to begin from besides the bound's own; shape [a.size], -1 = deleted. */
  readonly hints: readonly Int32Array[];
  /** Symmetries of B, or null. */
  readonly twins: TwinTable | null;
  /** Asked now and then; true ends the search with what is proven so far. */
  readonly shouldStop: () => boolean;
}

export interface SearchAnswer {
  /** The best map found; shape [a.size], -1 = deleted. */
  readonly map: Int32Array;
  /** Its cost. */
  readonly upper: number;
  /** Proven: no map costs less. Equals `upper` when the search ended by itself. */
  readonly lower: number;
  /** Partial maps looked at. */
  readonly visited: number;
}

/**
 * The edit distance by depth-first branch and bound: nodes of A are decided in breadth-first order from the root, so that
 * each has decided neighbours, with the bound of {@link BoundState}. Ends with equal bounds unless it is stopped.
 */
export function searchEditDistance(problem: EditProblem, options: SearchOptions): SearchAnswer {
  const root = BoundState.root(problem);
  if (options.held) root.decide(options.held[0], options.held[1]);
  const order = decisionOrder(problem, options.held?.[0] ?? 0).filter((i) => root.imageOf[i] === UNDECIDED);
  const keep = new Set(options.held ? [options.held[0]] : []);
  let best = improveMap(problem, seatedMap(problem, root), keep);
  for (const hint of options.hints) {
    const start = hint.slice();
    if (options.held) {
      for (let i = 0; i < start.length; i++) if (start[i] === options.held[1]) start[i] = -1;
      start[options.held[0]] = options.held[1];
    }
    const other = improveMap(problem, start, keep);
    if (other.cost < best.cost - SAME) best = other;
  }
  const roundUp = (bound: number) => (problem.step > 0 ? Math.ceil(bound / problem.step - 1e-6) * problem.step : bound);
  const states = [root];
  let visited = 0;
  let stopped = false;
  /** Least bound among what was left unexplored because of a stop. */
  let open = Number.POSITIVE_INFINITY;

  const visit = (depth: number): void => {
    const state = states[depth]!;
    visited += 1;
    if (depth === order.length) {
      const map = completed(state);
      const cost = mapCost(problem, map);
      if (cost < best.cost - SAME) best = { map, cost };
      return;
    }
    if (stopped || ((visited & 63) === 0 && options.shouldStop())) {
      stopped = true;
      open = Math.min(open, roundUp(state.bound));
      return;
    }
    const row = order[depth]!;
    const choices: { image: number; bound: number; far: number }[] = [];
    for (let j = -1; j < problem.b.size; j++) {
      const image = j < 0 ? DELETED : j;
      if (j >= 0 && (state.sourceOf[j] !== UNDECIDED || (options.twins && isRepeat(options.twins, state.sourceOf, j)))) continue;
      const bound = state.quickBound(row, image);
      if (roundUp(bound) < best.cost - SAME)
        choices.push({ image, bound, far: j < 0 ? 0 : problem.displacement[row * problem.b.size + j]! });
    }
    choices.sort((x, y) => x.bound - y.bound || x.far - y.far);
    if (!states[depth + 1]) states[depth + 1] = root.spare();
    const child = states[depth + 1]!;
    for (const choice of choices) {
      if (roundUp(choice.bound) >= best.cost - SAME) break;
      child.copyFrom(state);
      child.decide(row, choice.image);
      if (roundUp(child.bound) >= best.cost - SAME) continue;
      visit(depth + 1);
    }
  };
  const rootBound = roundUp(root.bound);
  if (rootBound < best.cost - SAME) visit(0);
  const lower = stopped ? Math.min(best.cost, Math.max(rootBound, open)) : best.cost;
  return { map: best.map, upper: best.cost, lower, visited };
}

/**
 * Among all maps that cost no more than `limit`, the one with the least total displacement, then the first in order of
 * rows and columns. Gives back `start` when `budget` partial maps did not suffice to find a better one.
 * @param start a map of that cost.
 */
export function leastDisplacement(
  problem: EditProblem,
  start: Int32Array,
  limit: number,
  held: readonly [number, number] | null,
  budget: number,
  shouldStop: () => boolean,
): Int32Array {
  const width = problem.b.size;
  const total = (map: Int32Array) => map.reduce((sum, j, i) => sum + (j < 0 ? 0 : problem.displacement[i * width + j]!), 0);
  const root = BoundState.root(problem);
  if (held) root.decide(held[0], held[1]);
  const order = decisionOrder(problem, held?.[0] ?? 0).filter((i) => root.imageOf[i] === UNDECIDED);
  let best = start;
  let bestFar = total(start);
  let left = budget;
  const states = [root];
  const visit = (depth: number, far: number): void => {
    if (left-- <= 0 || ((left & 63) === 0 && shouldStop())) {
      left = 0;
      return;
    }
    const state = states[depth]!;
    if (depth === order.length) {
      const map = completed(state);
      if (mapCost(problem, map) > limit + SAME) return;
      if (far < bestFar - SAME || (far <= bestFar + SAME && isBefore(map, best))) {
        best = map;
        bestFar = Math.min(far, bestFar);
      }
      return;
    }
    const row = order[depth]!;
    const choices: { image: number; far: number }[] = [];
    for (let j = -1; j < width; j++) {
      if (j >= 0 && state.sourceOf[j] !== UNDECIDED) continue;
      const image = j < 0 ? DELETED : j;
      if (state.quickBound(row, image) <= limit + SAME)
        choices.push({ image, far: far + (j < 0 ? 0 : problem.displacement[row * width + j]!) });
    }
    choices.sort((x, y) => x.far - y.far);
    if (!states[depth + 1]) states[depth + 1] = root.spare();
    const child = states[depth + 1]!;
    for (const choice of choices) {
      if (choice.far > bestFar + SAME || left <= 0) break;
      child.copyFrom(state);
      child.decide(row, choice.image);
      if (child.bound <= limit + SAME) visit(depth + 1, choice.far);
    }
  };
  visit(0, held ? problem.displacement[held[0] * width + held[1]]! : 0);
  return best;
}

function isBefore(a: Int32Array, b: Int32Array): boolean {
  for (let i = 0; i < a.length; i++)
    if (a[i] !== b[i]) return (a[i]! < 0 ? Number.POSITIVE_INFINITY : a[i]!) < (b[i]! < 0 ? Number.POSITIVE_INFINITY : b[i]!);
  return false;
}

function completed(state: BoundState): Int32Array {
  return state.imageOf.map((j) => (j >= 0 ? j : -1));
}

/** The map that the bound's assignment suggests: pairs that gain nothing over delete and insert are left out. */
function seatedMap(problem: EditProblem, state: BoundState): Int32Array {
  return state.imageOf.map((decided, i) => {
    if (decided >= 0) return decided;
    if (decided === DELETED) return -1;
    const j = state.mateOfRow[i]!;
    return j >= 0 && j < problem.b.size && state.sourceOf[j] === UNDECIDED && state.isGain(i, j) ? j : -1;
  });
}

/** Nodes of A, breadth first from `first`; other components follow in index order. */
function decisionOrder(problem: EditProblem, first: number): number[] {
  const { a } = problem;
  const seen = new Uint8Array(a.size);
  const order: number[] = [];
  for (const start of [first, ...Array(a.size).keys()]) {
    if (start >= a.size || seen[start]) continue;
    seen[start] = 1;
    order.push(start);
    for (let head = order.length - 1; head < order.length; head++) {
      for (let at = a.offset[order[head]!]!; at < a.offset[order[head]! + 1]!; at++) {
        const other = a.neighbour[at]!;
        if (seen[other]) continue;
        seen[other] = 1;
        order.push(other);
      }
    }
  }
  return order;
}
