import type { Vec3 } from "#shared/geometry/types.ts";
import { centreCurve } from "#shared/tracing/centring.ts";
import { ridgeNoiseFloor } from "#shared/tracing/cost.ts";
import { pointFits } from "#shared/tracing/image-fit.ts";
import { localToIndex } from "#shared/tracing/local-frame.ts";
import { ridgeAtVoxel } from "#shared/tracing/pin-ridge.ts";
import { arcLengths, interpolateAlong, medianOf, resample, runningMedian } from "#shared/tracing/polyline.ts";
import { contactAlong, measureHalfWidths, radiiOf } from "#shared/tracing/radius.ts";
import { finestSpacing, scalesUpTo } from "#shared/tracing/ridge/scales.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** A stretch followed in the image, centred and measured. Millimetres along the voxel axes. */
export interface MeasuredCurve {
  /** shape [n, 3]. */
  readonly points: Float64Array;
  /** shape [n]; NaN = below resolution. */
  readonly radii: Float64Array;
  /** shape [n], 0 to 1. */
  readonly fits: Float64Array;
}

/** Points across a bend: the curve is centred at steps of a voxel, or an eighth of a thick string's radius. */
function knotStep(context: TraceContext, radii: Float64Array): number {
  const typical = medianOf([...radii].filter(Number.isFinite));
  return Math.max(finestSpacing(context.pyramid, 0), 0.125 * typical);
}

/**
 * Centres a path in its string and measures it: rounds of centring with the radii of the ridge's scales, then with the
 * measured half widths.
 * @param widestMm shape [n], the largest radius the string may have at each place of the path.
 * @param onOwnString the path is known to run along the string itself, so that what blocks rays is a neighbour.
 * @param path shape [n, 3], n >= 2, in even steps. @param from, to where the curve begins and ends exactly.
 */
export function centrePath(
  context: TraceContext,
  path: Float64Array,
  from: Vec3,
  to: Vec3,
  nodeRadiiMm: readonly [number, number],
  widestMm: Float64Array,
  onOwnString: boolean,
  fwhmMm: number | null,
): MeasuredCurve {
  const level = context.workingLevel;
  const grid = context.pyramid.levels[level]!;
  const n = path.length / 3;
  const scaleRadii = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const index = localToIndex(grid, [path[3 * i]!, path[3 * i + 1]!, path[3 * i + 2]!]);
    const count = scalesUpTo(context.ridges.scales(level), widestMm[i]!);
    scaleRadii[i] = ridgeAtVoxel(
      context,
      level,
      Math.round(index[0]),
      Math.round(index[1]),
      Math.round(index[2]),
      count,
    ).radiusMm;
  }
  const steady = runningMedian(scaleRadii, 6);
  const stepMm = knotStep(context, steady);
  const start = path.slice();
  start.set(from, 0);
  start.set(to, 3 * (n - 1));
  const arc = arcLengths(start);
  const pathStep = n > 1 ? arc[n - 1]! / (n - 1) : stepMm;
  smoothInto(
    start,
    new Float64Array(n).fill(1),
    new Float64Array(n).fill(((2 * finestSpacing(context.pyramid, level)) / pathStep) ** 4),
    start,
  );
  const points = resample(start, stepMm);
  const options = {
    sign: context.sign,
    noiseFloor: ridgeNoiseFloor(context.levels),
    stepMm,
    zonesMm: nodeZones(arc, steady, nodeRadiiMm),
    path,
    stop: context.stop,
  } as const;
  const least = 0.75 * finestSpacing(context.pyramid, 0);
  const radii = interpolateAlong(arcLengths(start), steady, arcLengths(points));
  let curve = centreCurve(
    context.sampler,
    {
      points,
      radii,
      widestMm: interpolateAlong(arcLengths(start), widestMm, arcLengths(points)),
      contact: onOwnString ? contactAlong(context.sampler, points, radii, context.sign) : new Float64Array(points.length / 3),
    },
    { ...options, rounds: 3 },
  );
  const first = measureHalfWidths(context.sampler, curve.points, curve.radii, context.sign, context.stop, fwhmMm);
  const half = Math.max(3, Math.round(medianOf([...curve.radii]) / stepMm));
  const measured = runningMedian(first.halfWidths, 2 * half);
  const refined = curve.radii.map((guess, i) =>
    Number.isFinite(measured[i]!)
      ? Math.max(least, Math.min(Math.max(measured[i]!, 0.5 * guess), 1.6 * guess, curve.widestMm[i]!))
      : guess,
  );
  curve = centreCurve(
    context.sampler,
    { ...curve, radii: refined, contact: onOwnString ? first.contact : curve.contact },
    { ...options, rounds: 2 },
  );
  const final = measureHalfWidths(context.sampler, curve.points, curve.radii, context.sign, context.stop, fwhmMm);
  return {
    points: curve.points,
    radii: radiiOf(final, stepMm, fwhmMm),
    fits: pointFits(final.contrasts, context.levels.noise),
  };
}

/**
 * Lengths from both ends along which the string's own middle cannot be seen: while the radius seen along the path is that of
 * a thicker neighbour at the fork, and at least the node's own radius.
 * @param arc, radii shape [n], along the path.
 */
function nodeZones(arc: Float64Array, radii: Float64Array, nodeRadiiMm: readonly [number, number]): [number, number] {
  const n = arc.length;
  const length = arc[n - 1]!;
  const middle: number[] = [];
  for (let i = 0; i < n; i++) if (arc[i]! >= 0.3 * length && arc[i]! <= 0.7 * length) middle.push(radii[i]!);
  const typical = middle.length > 0 ? medianOf(middle) : radii[n >> 1]!;
  const thick = (i: number) => radii[i]! > 1.35 * typical;
  let first = 0;
  while (first < n - 1 && thick(first)) first++;
  let last = n - 1;
  while (last > 0 && thick(last)) last--;
  const zone = (seen: number, nodeRadius: number) =>
    Math.min(0.35 * length, Math.max(seen > 0 ? seen + typical : 0, 1.2 * nodeRadius));
  return [zone(arc[first]!, nodeRadiiMm[0]), zone(length - arc[last]!, nodeRadiiMm[1])];
}

/** Radii along a curve that is not to be moved. @param points shape [n, 3], millimetres along the voxel axes. */
export function radiiAlong(context: TraceContext, points: Float64Array, fwhmMm: number | null): Float64Array {
  const level = context.workingLevel;
  const grid = context.pyramid.levels[level]!;
  const guesses = (at: Float64Array) => {
    const out = new Float64Array(at.length / 3);
    for (let i = 0; i < out.length; i++) {
      const index = localToIndex(grid, [at[3 * i]!, at[3 * i + 1]!, at[3 * i + 2]!]);
      const inside = index.map((value, axis) => Math.min(Math.max(Math.round(value), 0), grid.size[axis]! - 1));
      out[i] = ridgeAtVoxel(context, level, inside[0]!, inside[1]!, inside[2]!).radiusMm;
    }
    return out;
  };
  const stepMm = knotStep(context, guesses(points));
  const knots = resample(points, stepMm);
  let radii = runningMedian(guesses(knots), 6);
  const first = runningMedian(measureHalfWidths(context.sampler, knots, radii, context.sign, context.stop, fwhmMm).halfWidths, 4);
  radii = radii.map((guess, i) => (Number.isFinite(first[i]!) ? Math.min(Math.max(first[i]!, 0.5 * guess), 1.6 * guess) : guess));
  const measured = radiiOf(measureHalfWidths(context.sampler, knots, radii, context.sign, context.stop, fwhmMm), stepMm, fwhmMm);
  return interpolateAlong(arcLengths(knots), measured, arcLengths(points));
}
