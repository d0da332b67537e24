import { correctedDiameter, FWHM_PER_SIGMA } from "#shared/tracing/blur-correction.ts";
import { blockedShare, freeCircle, TOUCHED } from "#shared/tracing/edge-circle.ts";
import { medianOf, runningMean, runningMedian, tangents } from "#shared/tracing/polyline.ts";
import { edgesOf, INSIDE_SHARE, levelsOf, RAYS, type RadialProfiles, sampleRays } from "#shared/tracing/radial-profiles.ts";
import type { Sampler } from "#shared/tracing/sampler.ts";
import { checkStop, type StopSwitch } from "#shared/tracing/stop-switch.ts";

/** What the planes across a curve show at each of its points. */
export interface RadialMeasure {
  /** shape [n]; half width at half height, area-equivalent, millimetres; NaN where no edge was found. */
  readonly halfWidths: Float64Array;
  /** shape [n]; how far the string stands out from its surroundings there, grey values, positive; 0 where it does not. */
  readonly contrasts: Float64Array;
  /** shape [n], 0 to 1; share of the rays that run into a neighbour; see {@link TOUCHED}. */
  readonly contact: Float64Array;
  /** shape [n]; variance (mm^2) that sampling added to the scan's own blur. */
  readonly samplingVariance: Float64Array;
}

/**
 * Half widths at half height along a curve: rays in the plane normal to the tangent, the level halfway between the inside
 * (about the axis; the rim where it stands above the core) and the outside (robust against neighbours), the first crossing on
 * each ray between samples. The mean of their squares makes the radius area-equivalent; where a neighbour touches, it is that of the
 * circle through the free side.
 * @param points shape [n, 3], millimetres along the voxel axes. @param radii shape [n], first guesses, millimetres.
 * @param fwhmMm blur of the scan, to which a bright rim's level is corrected; null = unknown.
 * @source own derivation (half-height edges); Hoffmann et al. 2002 on half-height widths of narrow vessels.
 */
export function measureHalfWidths(
  sampler: Sampler,
  points: Float64Array,
  radii: Float64Array,
  sign: 1 | -1,
  stop: StopSwitch = { signal: null },
  fwhmMm: number | null = null,
): RadialMeasure {
  const n = points.length / 3;
  const directions = tangents(points);
  const profiles: RadialProfiles[] = [];
  const inside = new Float64Array(n);
  const outside = new Float64Array(n);
  const rim = new Float64Array(n);
  const samplingVariance = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    checkStop(stop);
    const made = sampleRays(sampler, points, directions, i, radii[i]!, sign);
    profiles.push(made.profiles);
    samplingVariance[i] = made.variance;
    const blurSigmaMm = fwhmMm === null ? 0 : Math.sqrt((fwhmMm / FWHM_PER_SIGMA) ** 2 + made.variance);
    const levels = levelsOf(made.profiles, radii[i]!, blurSigmaMm);
    inside[i] = levels.inside;
    outside[i] = levels.outside;
    rim[i] = levels.rimMm;
  }
  // Levels change slowly along a string; a few neighbours take the noise out before the edges are read.
  const half = 3;
  const smoothInside = runningMean(runningMedian(inside, half), half);
  const smoothOutside = runningMean(runningMedian(outside, half), half);
  const halfWidths = new Float64Array(n);
  const contrasts = new Float64Array(n);
  const edges = profiles.map((made, i) => edgesOf(made, (smoothInside[i]! + smoothOutside[i]!) / 2, rim[i]!));
  const contact = runningMedian(Float64Array.from(edges, blockedShare), half);
  for (let i = 0; i < n; i++) {
    // Not a number where the scan holds none.
    contrasts[i] = Math.max(0, smoothInside[i]! - smoothOutside[i]!) || 0;
    if (!(contrasts[i]! > 0)) halfWidths[i] = Number.NaN;
    else if (contact[i]! < TOUCHED) halfWidths[i] = areaRadius(edges[i]!, profiles[i]!.spacingMm);
    else halfWidths[i] = freeCircle(edges[i]!, profiles[i]!.spacingMm)?.radius ?? Number.NaN;
  }
  return { halfWidths, contrasts, contact, samplingVariance };
}

/** Area-equivalent radius of the edges of a string by itself; NaN when fewer than a third of the rays have one. */
function areaRadius(edges: Float64Array, spacingMm: number): number {
  const middle = medianOf([...edges].filter(Number.isFinite));
  if (!Number.isFinite(middle)) return Number.NaN;
  const own = edges.map((edge) => (edge <= 1.6 * middle + spacingMm && edge >= 0.45 * middle - spacingMm ? edge : Number.NaN));
  if (own.filter(Number.isFinite).length < RAYS / 3) return Number.NaN;
  let sum = 0;
  for (let ray = 0; ray < RAYS; ray++) {
    const opposite = own[(ray + RAYS / 2) % RAYS]!;
    const value = Number.isFinite(own[ray]!) ? own[ray]! : Number.isFinite(opposite) ? opposite : middle;
    sum += value * value;
  }
  return Math.sqrt(sum / RAYS);
}

/** Contact is looked for at every so many points of a curve that is not measured. */
const CONTACT_EVERY = 3;

/**
 * Where neighbours touch along a curve, as `contact` of {@link measureHalfWidths}, looked for at every third point.
 * @param points shape [n, 3], millimetres along the voxel axes. @param radii shape [n], about the string's, millimetres.
 */
export function contactAlong(sampler: Sampler, points: Float64Array, radii: Float64Array, sign: 1 | -1): Float64Array {
  const n = points.length / 3;
  const directions = tangents(points);
  const seen = Float64Array.from({ length: Math.ceil(n / CONTACT_EVERY) }, (_, k) => {
    const i = k * CONTACT_EVERY;
    const { profiles } = sampleRays(sampler, points, directions, i, radii[i]!, sign);
    const { inside, outside, rimMm } = levelsOf(profiles, radii[i]!);
    return inside > outside ? blockedShare(edgesOf(profiles, (inside + outside) / 2, rimMm)) : 0;
  });
  const steady = runningMedian(seen, 1);
  return Float64Array.from({ length: n }, (_, i) => steady[Math.min(steady.length - 1, Math.round(i / CONTACT_EVERY))]!);
}

/**
 * Radii from half widths: smoothed over neighbours, corrected for the scan's blur; NaN where the string is narrower than
 * one blur width or no edge was found. Without a known blur the half widths themselves ("raw").
 * @param fwhmMm blur of the scan; null = unknown.
 */
export function radiiOf(measure: RadialMeasure, stepMm: number, fwhmMm: number | null): Float64Array {
  const typical = medianOf([...measure.halfWidths].filter(Number.isFinite));
  const half = Math.max(2, Math.min(60, Math.round((Number.isFinite(typical) ? typical : stepMm) / stepMm)));
  const smooth = runningMean(runningMedian(measure.halfWidths, half), half);
  if (fwhmMm === null) return smooth;
  const corrected = smooth.map((value, i) => {
    const fwhm = Math.sqrt(fwhmMm * fwhmMm + FWHM_PER_SIGMA * FWHM_PER_SIGMA * measure.samplingVariance[i]!);
    return correctedDiameter(2 * value, fwhm, INSIDE_SHARE) / 2;
  });
  // Whether a string is below resolution is decided over a longer stretch: near the limit the width hardly changes with the diameter.
  const steady = runningMedian(corrected, 3 * half);
  return corrected.map((value, i) => (2 * value >= fwhmMm && 2 * steady[i]! >= fwhmMm ? value : Number.NaN));
}
