import { TautlineError } from "#shared/errors.ts";
import { roundMm, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { centrePath, type MeasuredCurve, radiiAlong } from "#shared/tracing/guided-run.ts";
import { meanFit } from "#shared/tracing/image-fit.ts";
import { legPath } from "#shared/tracing/leg-path.ts";
import { fromLocal, localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import { ownStringPath } from "#shared/tracing/own-string/own-string-path.ts";
import { passNearPin } from "#shared/tracing/pass-near-pin.ts";
import { followableStrength, type PinRidge, ridgeAtVoxel, ridgeNearPin } from "#shared/tracing/pin-ridge.ts";
import { arcLengths, interpolateAlong, resample } from "#shared/tracing/polyline.ts";
import { type StopSignal, stopIfTracingStopped, stoppable } from "#shared/tracing/stop-switch.ts";
import type { StrandRequest, TracedCurve, TraceParameters } from "#shared/tracing/strand-request.ts";
import { createTraceContext, type TraceContext } from "#shared/tracing/trace-context.ts";
import type { MadeBy } from "#shared/trees/document.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** A leg is followed when its string is seen along itself on this share of the way, noise or not. */
const SEEN_SHARE = 0.8;
/** Any other leg must stand out from the noise on this share of its length. */
const FOLLOWED_SHARE = 0.5;

/** A string between two pins is at most this much thicker than at the thicker pin. */
const ROOM_FOR_RADIUS = 1.6;
/** Stands for no limit where a pin does not show its string. */
const ANY_RADIUS_MM = 1000;

interface Stretch {
  readonly how: MadeBy;
  readonly points: Float64Array;
  readonly radii: Float64Array;
  /** Image fit, and the length it stands for; null where the image was not asked. */
  readonly fit: number | null;
}

/**
 * The committed centreline of one strand, a function of pins, scan and parameters alone: the same numbers whatever was
 * computed before. Points are half the smallest voxel spacing apart, rounded to 1e-6 mm; the ends are exactly the nodes;
 * each pin lies within one local diameter. A stretch that the image does not show is straight and makes `followed` false.
 * @param context kept between calls to reuse ridge tiles; must belong to the same pyramid and polarity.
 * @throws TautlineError `cancelled` when the signal is aborted; `misuse` when the legs do not match the pins.
 */
export function solveStrand(
  pyramid: VoxelPyramid,
  request: StrandRequest,
  parameters: TraceParameters,
  signal: StopSignal = { aborted: false },
  context: TraceContext = createTraceContext(pyramid, parameters.polarity),
): TracedCurve {
  return stoppable(context.stop, signal, () => solve(pyramid, request, parameters, signal, context));
}

function solve(
  pyramid: VoxelPyramid,
  request: StrandRequest,
  parameters: TraceParameters,
  signal: StopSignal,
  context: TraceContext,
): TracedCurve {
  const pins = [request.from, ...request.via, request.to];
  const legs = request.legs ?? pins.slice(1).map(() => "guide" as const);
  if (legs.length !== pins.length - 1) {
    const what = `a strand with ${pins.length} pins has ${pins.length - 1} legs, found ${legs.length}`;
    throw new TautlineError("misuse", what, { what });
  }
  const local = pins.map((pin) => toLocal(pyramid.grid, pin));
  const outStepMm = Math.min(...pyramid.grid.spacing) / 2;
  let followed = true;
  const paths: (FollowedLeg | "straight")[] = [];
  const ridges = local.map((pin, i) =>
    legs[i] === "guide" || legs[i - 1] === "guide" ? ridgeNearPin(context, context.workingLevel, pin) : null,
  );
  for (let leg = 0; leg < legs.length; leg++) {
    if (legs[leg] === "straight") {
      paths.push("straight");
      continue;
    }
    const path = guidedLeg(context, local, ridges, legs, leg, signal);
    stopIfTracingStopped(signal);
    if (!path) followed = false;
    paths.push(path ?? "straight");
  }
  const stretches: Stretch[] = [];
  for (let leg = 0; leg < paths.length; ) {
    if (paths[leg] === "straight") {
      stretches.push(straightStretch(local[leg]!, local[leg + 1]!, outStepMm));
      leg++;
      continue;
    }
    let end = leg;
    while (end < paths.length && paths[end] !== "straight") end++;
    stretches.push(guidedStretch(context, local, ridges, paths.slice(leg, end) as FollowedLeg[], leg, parameters, outStepMm));
    stopIfTracingStopped(signal);
    leg = end;
  }
  return assemble(pyramid, request, stretches, followed);
}

/** A guided leg as it was followed. */
interface FollowedLeg {
  /** shape [n, 3], millimetres along the voxel axes. */
  readonly points: Float64Array;
  /** shape [n]; about the radius of the leg's own string, millimetres, Infinity where not known; null when none was seen. */
  readonly radii: Float64Array | null;
}

/** One guided leg, or null when the image does not show a string between its pins. */
function guidedLeg(
  context: TraceContext,
  local: readonly Vec3[],
  ridges: readonly (PinRidge | null)[],
  legs: readonly string[],
  leg: number,
  signal: StopSignal,
): FollowedLeg | null {
  // Pins between two guided legs only show the way; nodes and pins beside a straight leg are where the path must begin.
  const anchor = (pin: number, otherLeg: number): Vec3 => (legs[otherLeg] === "guide" ? ridges[pin]!.at : local[pin]!);
  const from = anchor(leg, leg - 1);
  const to = anchor(leg + 1, leg + 1);
  if (distance(from, to) === 0) return null;
  const a = ridges[leg]!;
  const b = ridges[leg + 1]!;
  const expected = {
    ridge: Math.min(a.strength, b.strength),
    widestRadiusMm: a.found && b.found ? ROOM_FOR_RADIUS * Math.max(a.radiusMm, b.radiusMm) : ANY_RADIUS_MM,
  };
  const path = legPath(context, context.workingLevel, from, to, expected, signal);
  if (!path) return null;
  if (path.length < 6) return { points: Float64Array.of(...from, ...to), radii: null };
  const own = ownStringPath(context, path, signal);
  if (own && own.seen >= SEEN_SHARE) return own;
  return followedShare(context, path) >= FOLLOWED_SHARE ? (own ?? { points: path, radii: null }) : null;
}

/** Share of a path's points whose ridge answer is that of a string. */
function followedShare(context: TraceContext, path: Float64Array): number {
  const grid = context.pyramid.levels[context.workingLevel]!;
  const least = followableStrength(context);
  const n = path.length / 3;
  let count = 0;
  for (let i = 0; i < n; i++) {
    const index = localToIndex(grid, [path[3 * i]!, path[3 * i + 1]!, path[3 * i + 2]!]);
    const x = Math.round(index[0]);
    const y = Math.round(index[1]);
    const z = Math.round(index[2]);
    if (ridgeAtVoxel(context, context.workingLevel, x, y, z).strength >= least) count++;
  }
  return count / n;
}

function straightStretch(from: Vec3, to: Vec3, stepMm: number): Stretch {
  const points = resample(Float64Array.of(...from, ...to), stepMm);
  return { how: "straight", points, radii: new Float64Array(points.length / 3).fill(Number.NaN), fit: null };
}

/** Legs that follow each other in the image, as one smooth curve from its first pin to its last. */
function guidedStretch(
  context: TraceContext,
  local: readonly Vec3[],
  ridges: readonly (PinRidge | null)[],
  legs: readonly FollowedLeg[],
  firstLeg: number,
  parameters: TraceParameters,
  stepMm: number,
): Stretch {
  const lastPin = firstLeg + legs.length;
  const joined = new Float64Array(legs.reduce((sum, leg) => sum + leg.points.length, -3 * (legs.length - 1)));
  let at = 0;
  legs.forEach(({ points }, i) => {
    const part = i === 0 ? points : points.subarray(3);
    joined.set(part, at);
    at += part.length;
  });
  const nodeRadii = [ridges[firstLeg]!.radiusMm, ridges[lastPin]!.radiusMm] as const;
  // The widest radius at each place, leg by leg: straight from pin to pin, and by what the string itself shows.
  const widest = new Float64Array(joined.length / 3);
  let place = 0;
  legs.forEach((leg, i) => {
    const [a, b] = [ridges[firstLeg + i]!, ridges[firstLeg + i + 1]!].map((pin) =>
      pin.found ? ROOM_FOR_RADIUS * pin.radiusMm : ANY_RADIUS_MM,
    ) as [number, number];
    const steps = leg.points.length / 3 - 1;
    for (let k = i === 0 ? 0 : 1; k <= steps; k++, place++)
      widest[place] = Math.min(a + ((b - a) * k) / steps, ROOM_FOR_RADIUS * (leg.radii?.[k] ?? ANY_RADIUS_MM));
  });
  const curve: MeasuredCurve = centrePath(
    context,
    joined,
    local[firstLeg]!,
    local[lastPin]!,
    nodeRadii,
    widest,
    legs.every((leg) => leg.radii !== null),
    parameters.blurFwhmMm,
  );
  let points = resample(curve.points, stepMm);
  const arc = arcLengths(curve.points);
  const share = arcLengths(points);
  const whole = share[share.length - 1]!;
  const onKnots = whole > 0 ? share.map((s) => (s / whole) * arc[arc.length - 1]!) : share;
  const radii = interpolateAlong(arc, curve.radii, onKnots);
  for (let pin = firstLeg + 1; pin < lastPin; pin++) points = passNearPin(points, radii, local[pin]!, ridges[pin]!.radiusMm);
  return { how: "guide", points, radii, fit: meanFit(curve.points, curve.fits) };
}

/** One curve from its stretches, in the specimen's frame and rounded; stretches share their joints. */
function assemble(pyramid: VoxelPyramid, request: StrandRequest, stretches: readonly Stretch[], followed: boolean): TracedCurve {
  const total = stretches.reduce((sum, stretch) => sum + stretch.radii.length - 1, 1);
  const points = new Float64Array(3 * total);
  const radii = new Float64Array(total).fill(Number.NaN);
  const madeBy: [number, number, MadeBy][] = [];
  let at = 0;
  let fitSum = 0;
  let fitLength = 0;
  for (const stretch of stretches) {
    const n = stretch.radii.length;
    for (let i = 0; i < n; i++) {
      const p = fromLocal(pyramid.grid, [stretch.points[3 * i]!, stretch.points[3 * i + 1]!, stretch.points[3 * i + 2]!]);
      for (let c = 0; c < 3; c++) points[3 * (at + i) + c] = roundMm(p[c]!);
      if (Number.isFinite(stretch.radii[i]!)) radii[at + i] = roundMm(stretch.radii[i]!);
    }
    const last = madeBy[madeBy.length - 1];
    if (last && last[2] === stretch.how) last[1] = at + n - 1;
    else madeBy.push([at, at + n - 1, stretch.how]);
    if (stretch.fit !== null) {
      const length = arcLengths(stretch.points)[n - 1]!;
      fitSum += stretch.fit * length;
      fitLength += length;
    }
    at += n - 1;
  }
  points.set(request.from, 0);
  points.set(request.to, 3 * (total - 1));
  const imageFit = followed && fitLength > 0 ? roundMm(fitSum / fitLength) : null;
  return { points, radii, madeBy, imageFit, followed };
}

/**
 * Radii along a finished centreline that has none, millimetres rounded to 1e-6; NaN = below resolution or no edge.
 * @param points shape [n, 3], order xyz, millimetres in the specimen's frame; borrowed, not moved.
 */
export function measureRadii(
  pyramid: VoxelPyramid,
  points: Float64Array,
  parameters: TraceParameters,
  context: TraceContext = createTraceContext(pyramid, parameters.polarity),
): Float64Array {
  const local = new Float64Array(points.length);
  for (let i = 0; i < points.length; i += 3) local.set(toLocal(pyramid.grid, [points[i]!, points[i + 1]!, points[i + 2]!]), i);
  return radiiAlong(context, local, parameters.blurFwhmMm).map((radius) =>
    Number.isFinite(radius) ? roundMm(radius) : Number.NaN,
  );
}
