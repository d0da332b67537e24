import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import { distance, mix } from "#shared/geometry/vec3.ts";
import { oneOrigin } from "#shared/tracing/follow/one-origin.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import { type DoubtfulPlace, propose } from "#shared/tracing/follow/propose.ts";
import { placeForks, type StringGraph, smoothed, stringGraph } from "#shared/tracing/follow/string-graph.ts";
import { trimBranches } from "#shared/tracing/follow/trim-branches.ts";
import { fromLocal, localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import { ridgeNearPin } from "#shared/tracing/pin-ridge.ts";
import { medianOf } from "#shared/tracing/polyline.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { type GrownString, growString } from "#shared/tracing/strings/grow-string.ts";
import { leastStrength } from "#shared/tracing/strings/least-strength.ts";
import { outwardBranches } from "#shared/tracing/strings/outward.ts";
import { partContacts, withoutInnerSpurs } from "#shared/tracing/strings/part-contacts.ts";
import { isRim } from "#shared/tracing/strings/rim.ts";
import { createStringField, type StringField, type StringPoint } from "#shared/tracing/strings/string-field.ts";
import { type ThinPath, thinTree } from "#shared/tracing/strings/thin-tree.ts";
import type { StopSignal, TraceContext } from "#shared/tracing/trace-context.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";
import { stopIfAborted } from "#shared/volume/section/sample-lattice.ts";

/** How far a run is: what can be shown of it. */
export interface FollowGrowth {
  /** Lines followed so far, flat xyz, millimetres in the specimen's frame; computed when called. */
  lines(): number[][];
}

export interface FollowOptions {
  /** Lines of strands traced already, each flat xyz, millimetres in the specimen's frame: the run does not enter them. */
  readonly traced?: readonly (readonly number[])[];
  readonly signal?: StopSignal;
}

/** Most points of a run: some metres of string at the finest voxels. Runaways end here. */
const MOST_POINTS = 60_000;
/** Leaf paths shorter than this many voxels are unevenness. */
const SHORTEST_VOXELS = 3;
/** A click takes a string at most this many voxels from the nearest strong voxel. */
const SEED_VOXELS = 4;
/** A run ends at a traced strand that is this near and bright all the way, millimetres. */
const MEETS_WITHIN_MM = 2;

/**
 * Follows the string through a place both ways, to its forks and ends, and proposes the whole as a tree; null when no string is near
 * the place. A function of scan, parameters, place and traced strands alone, however it is interrupted: a generator that yields
 * after each piece of work.
 * @param at millimetres in the specimen's frame, in the scan.
 * @throws TautlineError `cancelled` when the signal is aborted.
 * @source own: crest points of the ridge measure, hung together at least cost (Kruskal 1956), forks by the point rule.
 */
export function* followString(
  scan: VoxelPyramid,
  context: TraceContext,
  parameters: TraceParameters,
  at: PointMm | Vec3,
  options: FollowOptions = {},
): Generator<FollowGrowth, FollowProposal | null> {
  const { traced = [], signal = { aborted: false } } = options;
  const level = context.workingLevel;
  const { grid } = scan;
  const click = toLocal(grid, at);
  const pin = ridgeNearPin(context, level, click);
  if (!pin.found) return null;
  const field = createStringField(context, level, leastStrength(context, level));
  const lines = new SegmentIndex(traced.map((flat) => placesOf(flat).map((place) => toLocal(grid, place))));
  const voxelMm = Math.min(...field.spacing);
  const allowed = (point: StringPoint) => lines.nearest(point.at).distance > 0.8 * point.radiusMm + voxelMm;
  const seed = seedNear(field, pin.at, pin.radiusMm, allowed);
  if (!seed) return null;

  let grown: GrownString = { points: [seed], links: [] };
  for (const step of stepsOf(growString(field, seed, MOST_POINTS, allowed), signal)) {
    grown = step;
    yield { lines: () => thinLines(grown, scan, voxelMm) };
  }
  const points = placed(grown);
  const whole = withoutInnerSpurs(thinTree(points, SHORTEST_VOXELS * voxelMm), points.places, points.radii);
  const thin = whole.filter(
    (path) => !isRim(context, placesAt(points.places, path), medianOf(path.map((n) => points.radii[n]!))),
  );
  if (thin.length === 0) return null;
  const { paths, copies, contacts } = partContacts(thin, points.places, points.radii, voxelMm);
  for (const of of copies.values()) {
    points.places.push(points.places[of]!);
    points.radii.push(points.radii[of]!);
  }
  const branches = outwardBranches(paths, nearestOnPaths(points.places, paths, click));
  const trimmed = trimBranches(context, points, branches);
  const found = stringGraph(branches, trimmed);
  if (found.strands.length === 0) return null;
  const { graph, cuts } = oneOrigin(found, click);
  placeForks(graph, voxelMm);
  const meets = meetings(graph, lines, field);
  const rough = graph.strands.map(({ places }) => flatInFrame(smoothed(places, voxelMm), scan));
  const solving = propose(
    scan,
    context,
    parameters,
    graph,
    doubtfulPlaces(grown, [...contacts, ...cuts], voxelMm),
    click,
    meets,
    signal,
  );
  for (;;) {
    const step = solving.next();
    if (step.done) return step.value;
    yield { lines: () => rough };
  }
}

/** Runs a proposal through without a pause. */
export function followWhole(
  scan: VoxelPyramid,
  context: TraceContext,
  parameters: TraceParameters,
  at: PointMm | Vec3,
  options: FollowOptions = {},
): FollowProposal | null {
  const run = followString(scan, context, parameters, at, options);
  for (;;) {
    const step = run.next();
    if (step.done) return step.value;
  }
}

/** The steps of a generator and its last word, until the signal says stop. */
function* stepsOf<T>(run: Generator<T, T>, signal: StopSignal): Generator<T> {
  for (;;) {
    stopIfAborted(signal);
    const step = run.next();
    yield step.value;
    if (step.done) return;
  }
}

/** The point of the string that was meant: near the strong voxel that the click found. */
function seedNear(field: StringField, at: Vec3, radiusMm: number, allowed: (point: StringPoint) => boolean): StringPoint | null {
  const index = localToIndex(field.context.pyramid.levels[field.level]!, at);
  const voxel = index.map(Math.round) as [number, number, number];
  const reach = field.spacing.map((mm) => Math.max(SEED_VOXELS, Math.ceil(radiusMm / mm))) as [number, number, number];
  field.load(
    [voxel[0] - reach[0], voxel[1] - reach[1], voxel[2] - reach[2]],
    [voxel[0] + reach[0], voxel[1] + reach[1], voxel[2] + reach[2]],
  );
  let best: StringPoint | null = null;
  for (const point of field.around(voxel, reach)) {
    if (!allowed(point)) continue;
    if (!best || distance(point.at, at) < distance(best.at, at)) best = point;
  }
  return best;
}

function placesAt(places: readonly Vec3[], path: ThinPath): Vec3[] {
  return path.map((n) => places[n]!);
}

function placed({ points, links }: GrownString) {
  const number = new Map(points.map(({ id }, n) => [id, n]));
  return {
    places: points.map((point) => point.at),
    radii: points.map(({ radiusMm }) => radiusMm),
    strengths: points.map(({ strength }) => strength),
    links: links.map(({ a, b, cost }) => [number.get(a)!, number.get(b)!, cost] as const),
  };
}

function thinLines(grown: GrownString, scan: VoxelPyramid, voxelMm: number): number[][] {
  const points = placed(grown);
  return thinTree(points, SHORTEST_VOXELS * voxelMm).map((path) =>
    flatInFrame(
      smoothed(
        path.map((n) => points.places[n]!),
        voxelMm,
      ),
      scan,
    ),
  );
}

function flatInFrame(points: Float64Array, { grid }: VoxelPyramid): number[] {
  const out: number[] = [];
  for (let i = 0; i < points.length; i += 3) out.push(...fromLocal(grid, [points[i]!, points[i + 1]!, points[i + 2]!]));
  return out;
}

function placesOf(flat: readonly number[]): Vec3[] {
  return Array.from({ length: Math.floor(flat.length / 3) }, (_, i): Vec3 => [flat[3 * i]!, flat[3 * i + 1]!, flat[3 * i + 2]!]);
}

function nearestOnPaths(places: readonly Vec3[], paths: readonly ThinPath[], to: Vec3): number {
  let [best, least] = [paths[0]![0]!, Number.POSITIVE_INFINITY];
  for (const path of paths)
    for (const n of path) {
      const away = distance(places[n]!, to);
      if (away >= least) continue;
      least = away;
      best = n;
    }
  return best;
}

/** Gaps that only brightness bridges are doubtful, where neither end is a fork's flank. */
function doubtfulPlaces({ points, links }: GrownString, contacts: readonly Vec3[], voxelMm: number): DoubtfulPlace[] {
  const byId = new Map(points.map((point) => [point.id, point]));
  const touching = contacts.map((at): DoubtfulPlace => {
    const nearest = points.reduce((best, point) => (distance(point.at, at) < distance(best.at, at) ? point : best));
    return { at, reachMm: 2 * nearest.radiusMm + 2 * voxelMm, reason: "touches" };
  });
  const gaps = links.flatMap(({ a, b, bridge }): DoubtfulPlace[] => {
    if (!bridge) return [];
    const [one, other] = [byId.get(a)!, byId.get(b)!];
    const apart = distance(one.at, other.at);
    if (apart <= Math.max(one.radiusMm, other.radiusMm) + 2 * voxelMm) return [];
    return [{ at: mix(one.at, other.at, 0.5), reachMm: apart / 2 + voxelMm, reason: "faint" }];
  });
  return [...gaps, ...touching];
}

/** Ends beside a traced strand, with all between them bright: node number to the number of the line. */
function meetings(graph: StringGraph, lines: SegmentIndex, field: StringField): Map<number, number> {
  const out = new Map<number, number>();
  if (lines.segments === 0) return out;
  graph.nodes.forEach((node, n) => {
    if (node.reason === null) return;
    const nearest = lines.nearest(node.at);
    if (nearest.distance > MEETS_WITHIN_MM) return;
    const radius = endRadius(graph, n);
    // A strand that is traced is a string: beyond its own flank lies no leaflet or muscle.
    if (nearest.distance <= 4 * radius + 4 * Math.min(...field.spacing)) {
      node.reason = "traced";
      out.set(n, lines.lineOf[nearest.segment]!);
    }
  });
  return out;
}

function endRadius({ strands }: StringGraph, node: number): number {
  const strand = strands.find(({ a, b }) => a === node || b === node)!;
  return strand.a === node ? strand.radii[0]! : strand.radii.at(-1)!;
}
