import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";

/** Points and which of them hang together. */
export interface LinkedPoints {
  /** Millimetres. */
  readonly places: readonly Vec3[];
  /** shape [n], millimetres: of the string about each point. */
  readonly radii: readonly number[];
  /** shape [n]: how strongly each answers. */
  readonly strengths: readonly number[];
  /** Pairs of point numbers, with what it costs to keep them. */
  readonly links: readonly (readonly [number, number, number])[];
}

/** A run of points between two nodes: from one to the other, both included. */
export type ThinPath = readonly number[];

/** Spurs up to this many radii of where they leave are no branches ... */
const SPUR_RADII = 1.3;
/** ... nor are those up to this many of their own radii, when they answer less than this share of where they leave. */
const FAINT_SPUR_RADII = 4;
const FAINT_SPUR_SHARE = 0.65;

/**
 * The tree that hangs the points together at least cost, cleared of spurs, as paths between its ends and forks. Several trees come
 * out of points that do not all hang together. Loops are opened at their dearest link.
 * @param shortestMm leaf paths shorter than this are spurs, and those shorter than 1.3 radii of the point where they leave.
 * @returns paths of two or more points, in no promised direction; single points are dropped.
 * @source minimum spanning tree, Kruskal 1956; pruning own.
 */
export function thinTree(points: LinkedPoints, shortestMm: number): ThinPath[] {
  const { places, radii, strengths } = points;
  const neighbours = spanningTree(points);
  for (let pruned = true; pruned; ) {
    pruned = false;
    const spurs: { path: number[]; length: number }[] = [];
    for (let n = 0; n < places.length; n++) {
      if (neighbours[n]!.length !== 1) continue;
      const path = walk(neighbours, n, neighbours[n]![0]!);
      const end = path.at(-1)!;
      if (neighbours[end]!.length < 3) continue;
      const length = lengthOf(places, path);
      const own = path.slice(0, Math.max(1, path.length - 1));
      const isFaint = middleOf(own, strengths) < FAINT_SPUR_SHARE * strengths[end]!;
      const least = Math.max(shortestMm, SPUR_RADII * radii[end]!, isFaint ? FAINT_SPUR_RADII * middleOf(own, radii) : 0);
      if (length < least) spurs.push({ path, length });
    }
    spurs.sort((a, b) => a.length - b.length || a.path[0]! - b.path[0]!);
    for (const { path } of spurs) {
      const end = path.at(-1)!;
      // An earlier cut may have made a through-path of what was a fork.
      if (neighbours[end]!.length < 3) continue;
      for (let i = 0; i + 1 < path.length; i++) neighbours[path[i]!] = [];
      neighbours[end] = neighbours[end]!.filter((other) => other !== path[path.length - 2]);
      pruned = true;
    }
  }
  const paths: ThinPath[] = [];
  for (let n = 0; n < places.length; n++) {
    if (neighbours[n]!.length === 0 || neighbours[n]!.length === 2) continue;
    for (const next of neighbours[n]!) {
      const path = walk(neighbours, n, next);
      if (n < path.at(-1)!) paths.push(path);
    }
  }
  return paths;
}

/** From `from` by way of `next` to the next point that is no passing place. */
function walk(neighbours: readonly (readonly number[])[], from: number, next: number): number[] {
  const path = [from, next];
  for (let at = next, before = from; neighbours[at]!.length === 2; ) {
    const on = neighbours[at]![0] === before ? neighbours[at]![1]! : neighbours[at]![0]!;
    path.push(on);
    before = at;
    at = on;
  }
  return path;
}

function spanningTree({ places, links }: LinkedPoints): number[][] {
  const group = places.map((_, n) => n);
  const leader = (n: number): number => {
    let at = n;
    while (group[at] !== at) {
      group[at] = group[group[at]!]!;
      at = group[at]!;
    }
    return at;
  };
  const neighbours: number[][] = places.map(() => []);
  const sorted = [...links].sort(([a, b, c], [d, e, f]) => c - f || a - d || b - e);
  for (const [a, b] of sorted) {
    const [one, other] = [leader(a), leader(b)];
    if (one === other) continue;
    group[one] = other;
    neighbours[a]!.push(b);
    neighbours[b]!.push(a);
  }
  return neighbours;
}

/** Median of the values of some points. */
function middleOf(numbers: readonly number[], values: readonly number[]): number {
  const sorted = numbers.map((n) => values[n]!).sort((a, b) => a - b);
  return sorted[sorted.length >> 1]!;
}

function lengthOf(places: readonly Vec3[], path: ThinPath): number {
  let sum = 0;
  for (let i = 1; i < path.length; i++) sum += distance(places[path[i - 1]!]!, places[path[i]!]!);
  return sum;
}
