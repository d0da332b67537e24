import { type CrossPatch, createCrossPatch } from "#shared/tracing/cross-patch.ts";
import { crossSection, samplePatchInto } from "#shared/tracing/cross-section.ts";
import { arcLengths, interpolateAlong, resample, tangents } from "#shared/tracing/polyline.ts";
import type { Sampler } from "#shared/tracing/sampler.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";

/** Planes averaged to each side of the cutting plane. */
const SLICES = 1;

/** A curve on its way to the middle of its string. All in millimetres along the voxel axes. */
export interface CentredCurve {
  /** shape [n, 3]; equal steps; the ends never move. */
  readonly points: Float64Array;
  /** shape [n]; radius used for the size of the window. */
  readonly radii: Float64Array;
}

export interface CentringOptions {
  /** +1 bright strings, -1 dark ones. */
  readonly sign: 1 | -1;
  /** Response (grey values) that noise alone explains. */
  readonly noiseFloor: number;
  /** Step between the points that are centred. */
  readonly stepMm: number;
  readonly rounds: number;
  /** The radii that hold near the two nodes; within them the neighbours at a fork outweigh the string itself. */
  readonly nodeRadiiMm: readonly [number, number];
}

/**
 * The curve moved to the middle of its string: at each point a plane normal to the tangent, in it the maximum of the image
 * smoothed at the radius' own scale (a Newton search of bounded step), then a smooth curve through the maxima, weighted by
 * how clearly each stands out; repeated. The ends stay where they are.
 * @source own derivation on Lindeberg 1998 (ridges of the image at scale r / sqrt 2) and penalised smoothing.
 */
export function centreCurve(sampler: Sampler, start: CentredCurve, options: CentringOptions): CentredCurve {
  const patch = createCrossPatch();
  let { points, radii } = start;
  for (let round = 0; round < options.rounds; round++) {
    const n = points.length / 3;
    const directions = tangents(points);
    const arc = arcLengths(points);
    const length = arc[n - 1]!;
    const targets = points.slice();
    const weights = new Float64Array(n);
    const lambdas = new Float64Array(n);
    const step = n > 1 ? length / (n - 1) : options.stepMm;
    for (let i = 0; i < n; i++) {
      lambdas[i] = (smoothingLength(radii[i]!, options.stepMm) / step) ** 4;
      if (i === 0 || i === n - 1) continue;
      weights[i] = centreAt(sampler, points, directions, i, radii[i]!, options, patch, targets);
      const near = Math.min(arc[i]! / options.nodeRadiiMm[0], (length - arc[i]!) / options.nodeRadiiMm[1]);
      if (near < 1.2) weights[i] = weights[i]! * 0.03;
    }
    smoothInto(targets, weights, lambdas, targets);
    const next = resample(targets, options.stepMm);
    radii = interpolateAlong(arcLengths(targets), radii, arcLengths(next));
    points = next;
  }
  return { points, radii };
}

/** How far smoothing reaches along the curve: about a radius, and never less than two voxels. */
function smoothingLength(radiusMm: number, stepMm: number): number {
  return Math.max(1.2 * radiusMm, 2.5 * stepMm);
}

/** Writes the centre found about point i into `targets`; returns its weight, 0 to 1. */
function centreAt(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  i: number,
  radiusMm: number,
  options: CentringOptions,
  patch: CrossPatch,
  targets: Float64Array,
): number {
  const section = crossSection(sampler, points, directions, i, radiusMm);
  const radius = radiusMm / section.stepMm;
  const sigma = Math.max(radius / Math.SQRT2, 0.9);
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
