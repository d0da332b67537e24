import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { compactGraph, type GraphStrand, passedThrough, type StringGraph } from "#shared/tracing/follow/string-graph.ts";
import { medianOf } from "#shared/tracing/polyline.ts";

/** An end in muscle is an origin of its own when its strand is at least this share as thick as the thickest such end's. */
const ORIGIN_SHARE = 0.6;

/**
 * The part of a graph that belongs to one tree: where it holds two origins, each with a trunk of its own, strings of two trees
 * touch or are joined by a string, and the thinnest strand between two forks on the way from one to the other goes. A single
 * string from muscle to muscle stays.
 * @param clicked millimetres along the voxel axes: its strand is never cut, and what hangs on it is what is kept.
 * @returns the graph, and the places where strands were cut off it.
 */
export function oneOrigin(graph: StringGraph, clicked: Vec3): { readonly graph: StringGraph; readonly cuts: readonly Vec3[] } {
  const { nodes } = graph;
  let strands: readonly GraphStrand[] = graph.strands;
  const cuts: Vec3[] = [];
  for (;;) {
    const kept = nearestStrand(strands, clicked);
    const way = wayBetweenOrigins(strands, nodes);
    if (!way) break;
    const degree = (node: number) => strands.reduce((sum, { a, b }) => sum + (a === node ? 1 : 0) + (b === node ? 1 : 0), 0);
    const between = way.filter((strand) => strand !== kept && degree(strand.a) > 2 && degree(strand.b) > 2);
    if (between.length === 0) break;
    const thinnest = between.reduce((best, strand) => (middleRadius(strand) < middleRadius(best) ? strand : best));
    const left = componentOf(
      strands.filter((strand) => strand !== thinnest),
      kept,
    );
    cuts.push(...[thinnest.a, thinnest.b].filter((n) => left.some(({ a, b }) => a === n || b === n)).map((n) => nodes[n]!.at));
    strands = passedThrough(left);
  }
  return cuts.length === 0 ? { graph, cuts } : { graph: compactGraph(nodes, strands), cuts };
}

function middleRadius({ radii }: GraphStrand): number {
  return medianOf([...radii]);
}

function nearestStrand(strands: readonly GraphStrand[], at: Vec3): GraphStrand {
  const away = ({ places }: GraphStrand) =>
    places.reduce((least, place) => Math.min(least, distance(place, at)), Number.POSITIVE_INFINITY);
  return strands.reduce((best, strand) => (away(strand) < away(best) ? strand : best));
}

/** The strands from one origin to another; null when there are no two. */
function wayBetweenOrigins(strands: readonly GraphStrand[], nodes: StringGraph["nodes"]): GraphStrand[] | null {
  const ends = nodes.flatMap(({ reason }, n) => {
    const own = strands.filter(({ a, b }) => a === n || b === n);
    return reason === "muscle" && own.length === 1 ? [{ n, radius: middleRadius(own[0]!) }] : [];
  });
  const thickest = Math.max(...ends.map(({ radius }) => radius));
  const [first, second] = ends
    .filter(({ radius }) => radius >= ORIGIN_SHARE * thickest)
    .sort((a, b) => b.radius - a.radius || a.n - b.n);
  if (!first || !second) return null;
  const cameBy = new Map<number, GraphStrand | null>([[first.n, null]]);
  const queue = [first.n];
  for (const node of queue)
    for (const strand of strands) {
      const next = strand.a === node ? strand.b : strand.b === node ? strand.a : null;
      if (next === null || cameBy.has(next)) continue;
      cameBy.set(next, strand);
      queue.push(next);
    }
  const way: GraphStrand[] = [];
  for (let node = second.n, strand = cameBy.get(node); strand; strand = cameBy.get(node)) {
    way.push(strand);
    node = strand.a === node ? strand.b : strand.a;
  }
  return way;
}

function componentOf(strands: readonly GraphStrand[], of: GraphStrand): GraphStrand[] {
  const reached = new Set([of.a, of.b]);
  for (let grew = true; grew; ) {
    grew = false;
    for (const { a, b } of strands) {
      if (reached.has(a) === reached.has(b)) continue;
      reached.add(a).add(b);
      grew = true;
    }
  }
  return strands.filter(({ a }) => reached.has(a));
}
