import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { FollowReason } from "#shared/tracing/follow/proposal.ts";
import type { TrimmedBranch } from "#shared/tracing/follow/trim-branches.ts";
import { placeFork } from "#shared/tracing/place-fork.ts";
import { resample } from "#shared/tracing/polyline.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";
import type { OutwardBranch } from "#shared/tracing/strings/outward.ts";

/** A node of a followed string: a fork, or an end with the reason why the run stopped there. */
export interface GraphNode {
  at: Vec3;
  reason: FollowReason | null;
}

/** A strand of a followed string between two nodes (numbers). */
export interface GraphStrand {
  readonly a: number;
  readonly b: number;
  /** From `a` to `b`, millimetres along the voxel axes. */
  readonly places: readonly Vec3[];
  readonly radii: readonly number[];
}

export interface StringGraph {
  readonly nodes: readonly GraphNode[];
  readonly strands: readonly GraphStrand[];
}

/** Two forks closer than this many radii are one. */
const ONE_FORK_RADII = 1.5;

/**
 * The nodes and strands of trimmed branches: forks that lost their other arms are passed through, the seed is no node, and forks
 * that lie within each other are one.
 */
export function stringGraph(branches: readonly OutwardBranch[], trimmed: readonly TrimmedBranch[]): StringGraph {
  const nodes: GraphNode[] = [];
  const nodeOfPoint = new Map<number, number>();
  const nodeAt = (point: number, at: Vec3): number => {
    let node = nodeOfPoint.get(point);
    if (node === undefined) {
      node = nodes.push({ at, reason: null }) - 1;
      nodeOfPoint.set(point, node);
    }
    return node;
  };
  let strands: GraphStrand[] = [];
  for (const { number, places, radii, reason } of trimmed) {
    const { points } = branches[number]!;
    if (places.length < 2) continue;
    const a = nodeAt(points[0]!, places[0]!);
    const b = reason === null ? nodeAt(points.at(-1)!, places.at(-1)!) : nodes.push({ at: places.at(-1)!, reason }) - 1;
    strands.push({ a, b, places, radii });
  }
  strands = passedThrough(strands);
  for (;;) {
    const short = strands.findIndex(({ a, b, places, radii }) => {
      if (a === b || nodes[a]!.reason || nodes[b]!.reason || degree(strands, a) < 3 || degree(strands, b) < 3) return false;
      return lengthOf(places) < ONE_FORK_RADII * Math.max(radii[0]!, radii.at(-1)!);
    });
    if (short < 0) break;
    const { a, b } = strands[short]!;
    strands = strands
      .filter((_, n) => n !== short)
      .map((strand) => ({ ...strand, a: strand.a === b ? a : strand.a, b: strand.b === b ? a : strand.b }));
  }
  return compactGraph(nodes, strands);
}

function degree(strands: readonly GraphStrand[], node: number): number {
  return strands.reduce((sum, { a, b }) => sum + (a === node ? 1 : 0) + (b === node ? 1 : 0), 0);
}

/** Joins the two strands of every node that has two. */
export function passedThrough(from: readonly GraphStrand[]): GraphStrand[] {
  const strands = [...from];
  for (let joined = true; joined; ) {
    joined = false;
    for (const { a, b } of strands) {
      const node = [a, b].find((end) => a !== b && degree(strands, end) === 2);
      if (node === undefined) continue;
      const [one, other] = strands
        .filter((strand) => strand.a === node || strand.b === node)
        .map((s) => (s.b === node ? s : turned(s)));
      if (!one || !other || one.a === other.a) continue;
      strands.splice(
        strands.findIndex((s) => s.a === node || s.b === node),
        1,
      );
      strands.splice(
        strands.findIndex((s) => s.a === node || s.b === node),
        1,
      );
      const rest = turned(other);
      strands.push({
        a: one.a,
        b: rest.b,
        places: [...one.places, ...rest.places.slice(1)],
        radii: [...one.radii, ...rest.radii.slice(1)],
      });
      joined = true;
      break;
    }
  }
  return strands;
}

/** A strand the other way round. */
export function turned({ a, b, places, radii }: GraphStrand): GraphStrand {
  return { a: b, b: a, places: [...places].reverse(), radii: [...radii].reverse() };
}

/** The nodes that strands still end at, and those strands, numbered anew. */
export function compactGraph(nodes: readonly GraphNode[], strands: readonly GraphStrand[]): StringGraph {
  const used = [...new Set(strands.flatMap(({ a, b }) => [a, b]))].sort((a, b) => a - b);
  const number = new Map(used.map((node, n) => [node, n]));
  return {
    nodes: used.map((node) => ({ ...nodes[node]! })),
    strands: strands.map((strand) => ({ ...strand, a: number.get(strand.a)!, b: number.get(strand.b)! })),
  };
}

/** Places each fork by the point rule, from its arms as they were found. */
export function placeForks({ nodes, strands }: StringGraph, stepMm: number): void {
  nodes.forEach((node, n) => {
    if (node.reason !== null) return;
    const arms = strands
      .flatMap((strand) => [...(strand.a === n ? [strand] : []), ...(strand.b === n ? [turned(strand)] : [])])
      .map(({ places, radii }) => ({ points: smoothed(places, stepMm), radii: Float64Array.from(radii) }));
    const usual = Math.max(...arms.map(({ radii }) => radii[radii.length >> 1]!));
    const place = placeFork(arms, node.at, usual);
    if (!place) return;
    // The rule holds where the lines meet; what does not meet is left where the crests met.
    const away = distance(place.at, node.at);
    if (place.spreadMm <= place.radiusMm && away > 0) {
      const share = Math.min(1, (2 * place.radiusMm) / away);
      node.at = [0, 1, 2].map((c) => node.at[c]! + share * (place.at[c]! - node.at[c]!)) as unknown as Vec3;
    }
  });
}

/** A line of voxel places without their steps. */
export function smoothed(places: readonly Vec3[], stepMm: number): Float64Array {
  const flat = Float64Array.from(places.flat());
  const points = places.length > 2 ? resample(flat, stepMm) : flat;
  const n = points.length / 3;
  smoothInto(points, new Float64Array(n).fill(1), new Float64Array(n).fill(2 ** 4), points);
  return points;
}

/** Length of a line of places, millimetres. */
export function lengthOf(places: readonly Vec3[]): number {
  let sum = 0;
  for (let i = 1; i < places.length; i++) sum += distance(places[i - 1]!, places[i]!);
  return sum;
}
