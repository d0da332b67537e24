import { type CrossPatch, createCrossPatch } from "#shared/tracing/cross-patch.ts";
import { crossSection, samplePatchInto } from "#shared/tracing/cross-section.ts";
import { freeCircle, TOUCHED } from "#shared/tracing/edge-circle.ts";
import { arcLengths, interpolateAlong, resample, tangents } from "#shared/tracing/polyline.ts";
import { edgesOf, levelsOf, sampleRays } from "#shared/tracing/radial-profiles.ts";
import type { Sampler } from "#shared/tracing/sampler.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";
import { checkStop, type StopSwitch } from "#shared/tracing/stop-switch.ts";

/** Planes averaged to each side of the cutting plane. */
const SLICES = 1;
/**
 * Scale of the search in radii. Noise moves the maximum of a solid cylinder about equally at 0.45 to 0.7 radii; the narrow end keeps
 * two touching strings apart (their sum has two maxima only where the whole blur is below half their distance).
 */
const NARROW_SHARE = 0.45;
/** A dark core under a bright rim has its maximum in the middle only at wide scales. */
const WIDE_SHARE = 0.75;

/** A curve on its way to the middle of its string. All in millimetres along the voxel axes. */
export interface CentredCurve {
  /** shape [n, 3]; equal steps; the ends never move. */
  readonly points: Float64Array;
  /** shape [n]; radius used for the size of the window. */
  readonly radii: Float64Array;
  /** shape [n]; the largest radius the string may have. */
  readonly widestMm: Float64Array;
  /** shape [n], 0 to 1; share of the rays that run into a neighbour (see `measureHalfWidths`); 0 = none, or not known. */
  readonly contact: Float64Array;
}

export interface CentringOptions {
  /** +1 bright strings, -1 dark ones. */
  readonly sign: 1 | -1;
  /** Response (grey values) that noise alone explains. */
  readonly noiseFloor: number;
  /** Step between the points that are centred. */
  readonly stepMm: number;
  readonly rounds: number;
  /** Lengths from the two nodes along which other strings of a fork surround this one, so that its middle cannot be seen. */
  readonly zonesMm: readonly [number, number];
  /** shape [m, 3]; the path that was found: places far from it belong to another string. */
  readonly path: Float64Array;
  readonly stop: StopSwitch;
}

/**
 * The curve moved to the middle of its string: at each point a plane normal to the tangent, in it the maximum of the image
 * smoothed at half a radius (a Newton search of bounded step), then a smooth curve through the maxima, weighted by
 * how clearly each stands out; repeated. Where a neighbour touches, which draws the maximum towards it, the middle is that of the
 * circle through the free side's edges. The ends stay where they are.
 * @source own derivation on Lindeberg 1998 (ridges of the image at scale r / sqrt 2) and penalised smoothing.
 */
export function centreCurve(sampler: Sampler, start: CentredCurve, options: CentringOptions): CentredCurve {
  const patch = createCrossPatch();
  let { points, radii, widestMm, contact } = start;
  for (let round = 0; round < options.rounds; round++) {
    const n = points.length / 3;
    const directions = tangents(points);
    const arc = arcLengths(points);
    const length = arc[n - 1]!;
    const targets = points.slice();
    const weights = new Float64Array(n);
    const lambdas = new Float64Array(n);
    const share = isHollow(sampler, points, directions, radii, options, patch) ? WIDE_SHARE : NARROW_SHARE;
    const step = n > 1 ? length / (n - 1) : options.stepMm;
    for (let i = 0; i < n; i++) {
      lambdas[i] = (smoothingLength(radii[i]!, options.stepMm) / step) ** 4;
      if (i === 0 || i === n - 1) continue;
      checkStop(options.stop);
      weights[i] =
        contact[i]! >= TOUCHED
          ? centreBesideNeighbour(sampler, points, directions, i, radii[i]!, options.sign, targets)
          : centreAt(sampler, points, directions, i, radii[i]!, share, options, patch, targets);
      if (!isNear(options.path, targets, i, FARTHEST_RADII * radii[i]! + options.stepMm)) weights[i] = 0;
      if (arc[i]! < options.zonesMm[0] || length - arc[i]! < options.zonesMm[1]) weights[i] = weights[i]! * IN_ZONE;
    }
    smoothInto(targets, weights, lambdas, targets);
    const next = resample(targets, options.stepMm);
    const from = arcLengths(targets);
    const to = arcLengths(next);
    radii = interpolateAlong(from, radii, to);
    widestMm = interpolateAlong(from, widestMm, to);
    contact = interpolateAlong(from, contact, to);
    points = next;
  }
  return { points, radii, widestMm, contact };
}

/** Weight of what is seen inside a fork: next to nothing, so that the strand runs on smoothly from where it is clear to its node. */
const IN_ZONE = 0.001;

/** How far the centred curve may come from the path, in radii, besides a step. */
const FARTHEST_RADII = 0.8;

/** True when target i lies within a distance of a point of the path; the search begins where it is likely to be. */
function isNear(path: Float64Array, targets: Float64Array, i: number, distanceMm: number): boolean {
  const m = path.length / 3;
  const middle = Math.round(((m - 1) * i) / Math.max(targets.length / 3 - 1, 1));
  for (let n = 0; n < 2 * m; n++) {
    // middle, one before, one behind, two before ...
    const at = 3 * (n % 2 === 0 ? middle - n / 2 : middle + (n + 1) / 2);
    if (at < 0 || at >= path.length) continue;
    const x = path[at]! - targets[3 * i]!;
    const y = path[at + 1]! - targets[3 * i + 1]!;
    const z = path[at + 2]! - targets[3 * i + 2]!;
    if (Math.sqrt(x * x + y * y + z * z) <= distanceMm) return true;
  }
  return false;
}

/**
 * How far smoothing reaches along the curve: a third of a radius (a thick string's middle is little moved by noise, and its bends are not
 * to be cut), and never less than two voxels.
 */
function smoothingLength(radiusMm: number, stepMm: number): number {
  return Math.max(0.3 * radiusMm, 2.5 * stepMm);
}

/**
 * A solid cylinder answers at the narrow scale with 0.57 of what it answers at the wide one (x exp(-x), x = 1 / (2 share^2)); a
 * core this much below it is darker than its rim.
 */
const HOLLOW_ANSWER = 0.35;

/** True when a third of the curve or more has a core darker than its rim: a hollow at the narrow scale, or much flatter than a solid string. */
function isHollow(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  radii: Float64Array,
  options: CentringOptions,
  patch: CrossPatch,
): boolean {
  const n = points.length / 3;
  const every = Math.max(1, Math.floor(n / 40));
  let looked = 0;
  let hollow = 0;
  for (let i = 1; i < n - 1; i += every) {
    const section = crossSection(sampler, points, directions, i, radii[i]!);
    const narrow = Math.max((NARROW_SHARE * radii[i]!) / section.stepMm, 0.9);
    const wide = Math.max((WIDE_SHARE * radii[i]!) / section.stepMm, 0.9);
    const half = Math.ceil(2.7 * wide);
    samplePatchInto(sampler, section, half, SLICES, patch.reserve(half));
    const core = patch.findRidge(half, narrow, 0, options.sign);
    if (core.hollow || core.response < HOLLOW_ANSWER * patch.findRidge(half, wide, 0, options.sign).response) hollow++;
    looked++;
  }
  return 3 * hollow >= looked && hollow > 0;
}

/** Weight of a middle found by edges beside a neighbour, and of a place kept because none was found. */
const BY_EDGES = 0.5;
const KEPT = 0.02;

/** Writes the middle of the circle through point i's free edges into `targets`; returns its weight. */
function centreBesideNeighbour(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  i: number,
  radiusMm: number,
  sign: 1 | -1,
  targets: Float64Array,
): number {
  const { profiles, section } = sampleRays(sampler, points, directions, i, radiusMm, sign);
  const { inside, outside, rimMm } = levelsOf(profiles, radiusMm);
  const circle = freeCircle(edgesOf(profiles, (inside + outside) / 2, rimMm), profiles.spacingMm);
  if (!circle || Math.hypot(circle.u, circle.v) > 0.8 * radiusMm + profiles.spacingMm) return KEPT;
  for (let c = 0; c < 3; c++) targets[3 * i + c] = points[3 * i + c]! + circle.u * section.uMm[c]! + circle.v * section.vMm[c]!;
  return BY_EDGES;
}

/** Writes the centre found about point i into `targets`; returns its weight, 0 to 1. */
function centreAt(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  i: number,
  radiusMm: number,
  share: number,
  options: CentringOptions,
  patch: CrossPatch,
  targets: Float64Array,
): number {
  const section = crossSection(sampler, points, directions, i, radiusMm);
  const radius = radiusMm / section.stepMm;
  const sigma = Math.max(share * radius, 0.9);
  const bound = Math.max(0.6 * radius, 1);
  const half = Math.ceil(2.7 * sigma + bound);
  samplePatchInto(sampler, section, half, SLICES, patch.reserve(half));
  const found = patch.findRidge(half, sigma, bound, options.sign);
  if (found.response <= 0) return 0;
  for (let c = 0; c < 3; c++)
    targets[3 * i + c] = points[3 * i + c]! + section.stepMm * (found.u * section.uMm[c]! + found.v * section.vMm[c]!);
  const clear = found.response / options.noiseFloor;
  return (clear * clear) / (1 + clear * clear);
}
