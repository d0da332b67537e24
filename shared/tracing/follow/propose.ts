import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type {
  DoubtfulStretch,
  FollowProposal,
  FollowReason,
  ProposedNode,
  ProposedStrand,
} from "#shared/tracing/follow/proposal.ts";
import { type GraphStrand, lengthOf, type StringGraph, turned } from "#shared/tracing/follow/string-graph.ts";
import { fromLocal } from "#shared/tracing/local-frame.ts";
import { medianOf } from "#shared/tracing/polyline.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import type { StopSignal, TraceContext } from "#shared/tracing/trace-context.ts";
import type { NodeKind } from "#shared/trees/document.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Pins stand at most this far apart along a strand. */
const PIN_STEP_MM = 2.5;
/** Strands shorter than this many radii have no pin between their nodes. */
const PINLESS_RADII = 6;

/** A place on a followed string that a person should look at. */
export interface DoubtfulPlace {
  /** Millimetres along the voxel axes. */
  readonly at: Vec3;
  readonly reachMm: number;
  readonly reason: FollowReason;
}

/** What becomes of a graph: nodes with kinds, strands away from the origin. */
interface Rooted {
  readonly root: number;
  /** In the order away from the root, each from its inner node. */
  readonly strands: readonly GraphStrand[];
}

/**
 * The proposal of a followed string: its origin is the thickest end in muscle, else the thickest end; every strand is solved
 * exactly as one traced by hand through the same pins. Yields before each strand is solved.
 * @param clicked millimetres along the voxel axes.
 */
export function* propose(
  scan: VoxelPyramid,
  context: TraceContext,
  parameters: TraceParameters,
  graph: StringGraph,
  doubts: readonly DoubtfulPlace[],
  clicked: Vec3,
  meets: ReadonlyMap<number, number>,
  signal: StopSignal,
): Generator<void, FollowProposal> {
  const { grid } = scan;
  const { root, strands } = rooted(graph);
  const positions = graph.nodes.map(({ at }) => roundPoint(fromLocal(grid, insideScan(grid, at))));
  const nodes = graph.nodes.map((node, n): ProposedNode => {
    const kind = kindOf(node.reason, n === root);
    const seen = kind !== "origin" || node.reason === "muscle";
    return {
      id: `n${n + 1}`,
      kind,
      ...(n === root ? { site: node.reason === "muscle" ? "head" : node.reason === "scan-edge" ? "scan-edge" : "unseen" } : {}),
      position: positions[n]!,
      certainty: seen && node.reason !== "faint" && node.reason !== "touches" ? "sure" : "doubtful",
      reason: node.reason,
      meets: meets.get(n) ?? null,
    };
  });
  const out: ProposedStrand[] = [];
  let [nearest, at] = [Number.POSITIVE_INFINITY, { strand: "s1", point: 0 }];
  let lengthMm = 0;
  const click = fromLocal(grid, clicked);
  for (const [n, strand] of strands.entries()) {
    yield;
    const via = pinsOf(strand).map((pin) => roundPoint(fromLocal(grid, insideScan(grid, pin))));
    const request = { from: positions[strand.a]!, via, to: positions[strand.b]! };
    const curve = solveStrand(scan, request, parameters, signal, context);
    const id = `s${n + 1}`;
    const places = Array.from(
      curve.radii,
      (_, i): Vec3 => [curve.points[3 * i]!, curve.points[3 * i + 1]!, curve.points[3 * i + 2]!],
    );
    places.forEach((place, point) => {
      const away = distance(place, click);
      if (away >= nearest) return;
      nearest = away;
      at = { strand: id, point };
    });
    lengthMm += lengthOf(places);
    out.push({
      id,
      from: nodes[strand.a]!.id,
      to: nodes[strand.b]!.id,
      via,
      points: Array.from(curve.points),
      radii: Array.from(curve.radii, (radius) => (Number.isFinite(radius) ? radius : null)),
      imageFit: curve.imageFit,
      doubtful: curve.followed
        ? doubtfulStretches(
            places,
            doubts.map((doubt) => ({ ...doubt, at: fromLocal(grid, doubt.at) })),
          )
        : [{ first: 0, last: places.length - 1, reason: "faint" }],
    });
  }
  return { nodes, strands: out, root: nodes[root]!.id, clicked: at, lengthMm: roundMm(lengthMm) };
}

function kindOf(reason: FollowReason | null, isRoot: boolean): NodeKind {
  if (isRoot) return "origin";
  switch (reason) {
    case null:
      return "fork";
    case "leaflet":
      return "insertion";
    case "muscle":
      return "muscle-end";
    case "scan-edge":
      return "scan-edge";
    case "faint":
      return "lost-end";
    case "touches":
    case "loop":
    case "traced":
    case "enough":
      return "open";
  }
}

function rooted({ nodes, strands }: StringGraph): Rooted {
  const thickness = nodes.map((_, n) => {
    const own = strands.filter(({ a, b }) => a === n || b === n);
    return Math.max(...own.map(({ radii }) => medianOf([...radii])));
  });
  const degrees = nodes.map((_, n) => strands.reduce((sum, { a, b }) => sum + (a === n ? 1 : 0) + (b === n ? 1 : 0), 0));
  const ends = nodes.map((_, n) => n).filter((n) => degrees[n] === 1);
  const muscles = ends.filter((n) => nodes[n]!.reason === "muscle");
  const choice = muscles.length > 0 ? muscles : ends.length > 0 ? ends : [0];
  const root = choice.reduce((best, n) => (thickness[n]! > thickness[best]! ? n : best));
  const out: GraphStrand[] = [];
  const taken = new Set<number>();
  const queue = [root];
  for (const node of queue)
    strands.forEach((strand, n) => {
      if (taken.has(n) || (strand.a !== node && strand.b !== node)) return;
      taken.add(n);
      const away = strand.a === node ? strand : turned(strand);
      out.push(away);
      queue.push(away.b);
    });
  return { root, strands: out };
}

/** Places along a strand for the pins between its nodes: evenly, away from its forks. */
function pinsOf({ places, radii }: GraphStrand): Vec3[] {
  const length = lengthOf(places);
  const thickest = Math.max(radii[0]!, radii.at(-1)!, medianOf([...radii]));
  if (length < PINLESS_RADII * thickest || places.length < 5) return [];
  const count = Math.ceil(length / PIN_STEP_MM);
  const pins: Vec3[] = [];
  let along = 0;
  for (let i = 1, next = 1; i < places.length - 1 && next <= count; i++) {
    along += distance(places[i - 1]!, places[i]!);
    if (along >= (length * (next - 0.5)) / count) {
      pins.push(places[i]!);
      next++;
    }
  }
  return pins;
}

/** A place moved to the nearest one between the centres of the scan's outermost voxels. */
function insideScan({ size, spacing }: VolumeGrid, at: Vec3): Vec3 {
  return at.map((mm, axis) => Math.min(Math.max(mm, 0), (size[axis]! - 1) * spacing[axis]!)) as unknown as Vec3;
}

function doubtfulStretches(places: readonly Vec3[], doubts: readonly DoubtfulPlace[]): DoubtfulStretch[] {
  const out: DoubtfulStretch[] = [];
  for (const { at, reachMm, reason } of doubts) {
    let first = -1;
    let last = -1;
    places.forEach((place, i) => {
      if (distance(place, at) > reachMm) return;
      if (first < 0) first = i;
      last = i;
    });
    if (first < 0) continue;
    const before = out.find((stretch) => stretch.reason === reason && first <= stretch.last + 1 && last >= stretch.first - 1);
    if (before) {
      out.splice(out.indexOf(before), 1, { first: Math.min(first, before.first), last: Math.max(last, before.last), reason });
    } else out.push({ first, last, reason });
  }
  return out.sort((a, b) => a.first - b.first);
}
