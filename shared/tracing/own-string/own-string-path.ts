import { CYLINDER_PEAK } from "#shared/tracing/cost.ts";
import { cheapestThread } from "#shared/tracing/own-string/cheapest-thread.ts";
import { planeRidge, ridgeAtPlace } from "#shared/tracing/own-string/plane-ridge.ts";
import { type StraightVolume, smoothAlong, straighten } from "#shared/tracing/own-string/straight-volume.ts";
import { arcLengths, medianOf, resample, runningMean } from "#shared/tracing/polyline.ts";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { finestSpacing, LARGEST_DIAMETER_MM } from "#shared/tracing/ridge/scales.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";
import type { StopSignal, TraceContext } from "#shared/tracing/trace-context.ts";
import { stopIfAborted } from "#shared/volume/section/sample-lattice.ts";

/** Samples to each side of the curve: seven radii of the string that the step suits, and half as many about a string already found. */
const WIDE_HALF = 9;
const NARROW_HALF = 6;
/** Scale of the search across and along the string, samples. Along it strings change little, so that more noise can be taken out. */
const SIGMA = 1.1;
const SIGMA_ALONG = 2.5;
/** Finest step, voxels of the working level: keeps strings of three voxels apart that touch. */
const FINEST_STEP = 0.9;
/** Rounds until the string is found: the first finds it beside a path that may run along its neighbour, the second runs along it. */
const FIRST_ROUNDS = 2;
/** How far the path is smoothed before it is straightened, steps. */
const SMOOTHING = 8;
/**
 * A string is seen when half the way answers at least this share of what a solid cylinder of the scan's contrast would, and this
 * multiple of the noise: the cheapest thread through noise alone answers a tenth of it, a string at contrast-to-noise 3 half of it.
 */
const SEEN = 0.15;
const SEEN_IN_NOISE = 0.2;
/** The step suits a string of at most so many steps' radius; thicker ones are looked at in larger steps. */
const MOST_RADIUS = 1.7;
/** Scales among which the string's own is looked for, samples, and how much more the next one must answer to be better. */
const RADIUS_SIGMAS = [0.8, 1.13, 1.6, 2.26, 3.2] as const;
const RISE = 1.08;
/** Planes to each side over which the answers of a scale are averaged. */
const RADIUS_WINDOW = 8;

/** The way along one string. */
export interface OwnStringPath {
  /** shape [n, 3], millimetres along the voxel axes; begins and ends where the path did. */
  readonly points: Float64Array;
  /** shape [n]; about the string's radius, millimetres; Infinity where it is thicker than can be told. */
  readonly radii: Float64Array;
  /** Share of the way along which the string is seen, 0 to 1. */
  readonly seen: number;
}

/**
 * The way along the string that both ends of a path lie on, where the path may have taken a shortcut over a string that touches
 * it: the grey values about the path are straightened, so that a shortcut saves nothing, smoothed along it, which shows the
 * valley between two strings through noise, and the cheapest thread is drawn through them; repeated about the thread. Begins at the
 * finest step, which keeps the thinnest strings apart, and goes on to larger ones until the string is seen in full.
 * @param path shape [n, 3], n >= 2, within six of the string's radii of it; borrowed.
 * @returns null when no string is seen along the path.
 * @throws TautlineError `cancelled` when the signal is aborted.
 * @source own derivation on Bellman 1957 and Sato et al. 1998; curved planar sections as in Bishop 1975.
 */
export function ownStringPath(context: TraceContext, path: Float64Array, signal: StopSignal): OwnStringPath | null {
  const finest = finestSpacing(context.pyramid, context.workingLevel);
  const least = Math.max(SEEN * CYLINDER_PEAK * context.levels.contrast, SEEN_IN_NOISE * context.levels.noise);
  let best: OwnStringPath | null = null;
  let start = path;
  let mostSeen = 0;
  for (let stepMm = FINEST_STEP * finest; stepMm * MOST_RADIUS < LARGEST_DIAMETER_MM / 2; stepMm *= Math.SQRT2) {
    let found: Thread | null = null;
    const half = best ? NARROW_HALF : WIDE_HALF;
    for (let round = 0; round < (best ? 1 : FIRST_ROUNDS); round++) {
      stopIfAborted(signal);
      found = threadAtStep(context, found?.points ?? start, stepMm, half, least);
      if (!found) return best;
    }
    const seen = found!.answers.filter((answer) => answer >= least).length / found!.answers.length;
    if (seen < 0.5) continue;
    mostSeen = Math.max(mostSeen, seen);
    const radii = radiiAlongThread(found!.volume, found!.places);
    best = { points: found!.points, radii, seen: mostSeen };
    start = best.points;
    if (medianOf([...radii]) <= MOST_RADIUS * stepMm) return best;
  }
  return best;
}

/** A way found at one step. */
interface Thread {
  readonly points: Float64Array;
  /** shape [n]; what the string answers at each place. */
  readonly answers: Float64Array;
  readonly volume: StraightVolume;
  /** shape [n]; its place in each plane. */
  readonly places: Int32Array;
}

function threadAtStep(context: TraceContext, path: Float64Array, stepMm: number, half: number, least: number): Thread | null {
  const n = path.length / 3;
  const arc = arcLengths(path);
  const pathStep = arc[n - 1]! / (n - 1);
  if (!(pathStep > 0)) return null;
  const smooth = path.slice();
  smoothInto(path, new Float64Array(n).fill(1), new Float64Array(n).fill(((SMOOTHING * stepMm) / pathStep) ** 4), smooth);
  const points = resample(smooth, stepMm);
  const volume = smoothAlong(straighten(context.sampler, points, stepMm, half, context.sign), SIGMA_ALONG);
  const { count, u, v } = volume;
  if (count < 3) return null;
  const side = 2 * half + 1;
  const ridge = planeRidge(volume, SIGMA);
  const expected = Math.max(Math.min(answerNearEnd(ridge, count, side, 0), answerNearEnd(ridge, count, side, count - 1)), least);
  const places = cheapestThread(ridge, count, side, expected / 2);
  const out = points.slice();
  const answers = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    const at = i * side * side + places[i]!;
    answers[i] = ridge[at]!;
    if (i === 0 || i === count - 1) continue;
    const du = (places[i]! % side) - half + crestOffset(ridge, at, 1);
    const dv = Math.floor(places[i]! / side) - half + crestOffset(ridge, at, side);
    for (let c = 0; c < 3; c++) out[3 * i + c] = points[3 * i + c]! + stepMm * (du * u[3 * i + c]! + dv * v[3 * i + c]!);
  }
  return { points: out, answers, volume, places };
}

/** What the string answers close to one end of the path: the median over a few planes of the best about the middle. */
function answerNearEnd(ridge: Float64Array, count: number, side: number, end: number): number {
  const middle = (side * side) >> 1;
  const list: number[] = [];
  for (let k = 1; k < Math.min(8, count); k++) {
    const at = (end === 0 ? k : end - k) * side * side + middle;
    let best = 0;
    for (let v = -side; v <= side; v += side) for (let u = -1; u <= 1; u++) best = Math.max(best, ridge[at + v + u]!);
    list.push(best);
  }
  return medianOf(list);
}

/** Where between samples the crest lies, -0.5 to 0.5 of a step. */
function crestOffset(ridge: Float64Array, at: number, step: number): number {
  const before = ridge[at - step]!;
  const after = ridge[at + step]!;
  const bend = 2 * ridge[at]! - before - after;
  return bend > 0 ? Math.max(-0.5, Math.min(0.5, (after - before) / (2 * bend))) : 0;
}

/**
 * The radius that each place's own scale is tuned to: the finest from which on the next one adds next to nothing. A wider one may
 * answer more again where strings touch, for it sees two as one.
 */
function radiiAlongThread(volume: StraightVolume, places: Int32Array): Float64Array {
  const answers = RADIUS_SIGMAS.map((sigma) => {
    const at = new Float64Array(volume.count);
    const kernels = gaussianKernels(sigma);
    for (let i = 0; i < volume.count; i++) at[i] = sigma * sigma * ridgeAtPlace(volume, i, places[i]!, kernels);
    return runningMean(at, RADIUS_WINDOW);
  });
  return Float64Array.from({ length: volume.count }, (_, i) => {
    let k = 0;
    while (k + 1 < answers.length && answers[k + 1]![i]! > RISE * answers[k]![i]!) k++;
    return k + 1 === answers.length ? Number.POSITIVE_INFINITY : Math.SQRT2 * RADIUS_SIGMAS[k]! * volume.stepMm;
  });
}
