import { correctedDiameter, FWHM_PER_SIGMA } from "#shared/tracing/blur-correction.ts";
import { crossSection } from "#shared/tracing/cross-section.ts";
import { medianOf, runningMean, runningMedian, tangents } from "#shared/tracing/polyline.ts";
import type { Sampler } from "#shared/tracing/sampler.ts";

const RAYS = 32;
/** Planes averaged to each side. */
const SLICES = 2;
/** Samples per sample step along a ray. */
const PER_STEP = 2;
/** The inside level is the mean within this share of the half width; the blur correction knows it. */
export const INSIDE_SHARE = 0.35;

const RAY_COSINES = Float64Array.from({ length: RAYS }, (_, ray) => Math.cos((2 * Math.PI * ray) / RAYS));
const RAY_SINES = Float64Array.from({ length: RAYS }, (_, ray) => Math.sin((2 * Math.PI * ray) / RAYS));

/** What the planes across a curve show at each of its points. */
export interface RadialMeasure {
  /** shape [n]; half width at half height, area-equivalent, millimetres; NaN where no edge was found. */
  readonly halfWidths: Float64Array;
  /** shape [n]; how far the string stands out from its surroundings there, grey values, positive; 0 where it does not. */
  readonly contrasts: Float64Array;
  /** shape [n]; variance (mm^2) that sampling added to the scan's own blur. */
  readonly samplingVariance: Float64Array;
}

/** Profiles of one point: radial samples of all rays, and where they lie. */
interface Profiles {
  readonly values: Float64Array;
  readonly samples: number;
  readonly spacingMm: number;
}

/**
 * Half widths at half height along a curve: rays in the plane normal to the tangent, the level halfway between the inside
 * (about the axis; the rim where it stands above the core) and the outside (robust against neighbours), the first crossing on
 * each ray between samples. Rays that hit a neighbour are dropped for the opposite ray; the mean of the squares makes
 * the radius area-equivalent.
 * @param points shape [n, 3], millimetres along the voxel axes. @param radii shape [n], first guesses, millimetres.
 * @source own derivation (half-height edges); Hoffmann et al. 2002 on half-height widths of narrow vessels.
 */
export function measureHalfWidths(sampler: Sampler, points: Float64Array, radii: Float64Array, sign: 1 | -1): RadialMeasure {
  const n = points.length / 3;
  const directions = tangents(points);
  const profiles: Profiles[] = [];
  const inside = new Float64Array(n);
  const outside = new Float64Array(n);
  const rim = new Float64Array(n);
  const samplingVariance = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const made = sampleRays(sampler, points, directions, i, radii[i]!, sign);
    profiles.push(made.profiles);
    samplingVariance[i] = made.variance;
    const levels = levelsOf(made.profiles, radii[i]!);
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
  for (let i = 0; i < n; i++) {
    // Not a number where the scan holds none.
    contrasts[i] = Math.max(0, smoothInside[i]! - smoothOutside[i]!) || 0;
    halfWidths[i] =
      contrasts[i]! > 0 ? edgeRadius(profiles[i]!, (smoothInside[i]! + smoothOutside[i]!) / 2, rim[i]!) : Number.NaN;
  }
  return { halfWidths, contrasts, samplingVariance };
}

function sampleRays(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  i: number,
  radiusMm: number,
  sign: 1 | -1,
): { profiles: Profiles; variance: number } {
  const section = crossSection(sampler, points, directions, i, radiusMm);
  const { level, centre, u, v, t, stepMm } = section;
  const samples = Math.ceil((2.6 * (radiusMm / stepMm) + 4) * PER_STEP) + 1;
  const values = new Float64Array(RAYS * samples);
  for (let ray = 0; ray < RAYS; ray++) {
    const c = RAY_COSINES[ray]! / PER_STEP;
    const s = RAY_SINES[ray]! / PER_STEP;
    const step = [c * u[0] + s * v[0], c * u[1] + s * v[1], c * u[2] + s * v[2]] as const;
    for (let slice = -SLICES; slice <= SLICES; slice++) {
      const offset = [slice * t[0], slice * t[1], slice * t[2]] as const;
      sampler.addLine({ level, from: centre, step, offset, first: 0, count: samples }, values, ray * samples);
    }
  }
  for (let k = 0; k < values.length; k++) values[k] = (sign * values[k]!) / (2 * SLICES + 1);
  const { spacing, factor } = sampler.pyramid.levels[level]!;
  // Linear interpolation adds h^2 / 6 on average over places between voxels, the mean of f voxels h0^2 (f^2 - 1) / 12; mean over axes.
  let variance = 0;
  for (const axis of [0, 1, 2] as const) {
    const finest = spacing[axis] / factor[axis];
    variance += (spacing[axis] ** 2 / 6 + (finest ** 2 * (factor[axis] ** 2 - 1)) / 12) / 3;
  }
  return { profiles: { values, samples, spacingMm: stepMm / PER_STEP }, variance };
}

/** Mean over the rays at each distance. */
function meanProfile({ values, samples }: Profiles): Float64Array {
  const out = new Float64Array(samples);
  for (let ray = 0; ray < RAYS; ray++) for (let k = 0; k < samples; k++) out[k] = out[k]! + values[ray * samples + k]! / RAYS;
  return out;
}

function levelsOf(profiles: Profiles, radiusMm: number): { inside: number; outside: number; rimMm: number } {
  const { values, samples, spacingMm } = profiles;
  const mean = meanProfile(profiles);
  const ringMean = (from: number, to: number) => {
    let sum = 0;
    let weight = 0;
    for (let k = 0; k < samples; k++) {
      const rho = k * spacingMm;
      if (rho < from || rho > to) continue;
      const w = Math.max(rho, spacingMm / 4);
      sum += w * mean[k]!;
      weight += w;
    }
    return weight > 0 ? sum / weight : mean[0]!;
  };
  const core = ringMean(0, Math.max(INSIDE_SHARE * radiusMm, spacingMm / 2));
  // Outside: each ray's mean beyond the string; a low share of the rays, since neighbours only raise theirs.
  const from = Math.min(samples - 3, Math.ceil((1.6 * radiusMm) / spacingMm + PER_STEP));
  const rays: number[] = [];
  for (let ray = 0; ray < RAYS; ray++) {
    let sum = 0;
    for (let k = from; k < samples; k++) sum += values[ray * samples + k]!;
    rays.push(sum / (samples - from));
  }
  rays.sort((a, b) => a - b);
  const outside = (rays[Math.floor(RAYS * 0.3)]! + rays[Math.floor(RAYS * 0.4)]! + rays[Math.floor(RAYS * 0.5)]!) / 3;
  // A rim that stands above the core: uneven stain. Its crest is then the inside.
  let crest = 0;
  for (let k = 0; k < samples && k * spacingMm <= 1.1 * radiusMm; k++) if (mean[k]! > mean[crest]!) crest = k;
  const crestLevel = mean[crest]!;
  if (crest * spacingMm > 0.35 * radiusMm && crestLevel - outside > 1.3 * (core - outside))
    return { inside: crestLevel, outside, rimMm: crest * spacingMm };
  return { inside: core, outside, rimMm: 0 };
}

/** Area-equivalent radius of the crossings of `level`; NaN when fewer than a third of the rays have one. */
function edgeRadius(profiles: Profiles, level: number, rimMm: number): number {
  const { values, samples, spacingMm } = profiles;
  const edges = new Float64Array(RAYS).fill(Number.NaN);
  const start = Math.round(rimMm / spacingMm);
  for (let ray = 0; ray < RAYS; ray++) {
    const row = ray * samples;
    for (let k = start; k + 1 < samples; k++) {
      const a = values[row + k]!;
      const b = values[row + k + 1]!;
      if (a >= level && b < level) {
        edges[ray] = (k + (a - level) / (a - b)) * spacingMm;
        break;
      }
    }
  }
  const middle = medianOf([...edges].filter(Number.isFinite));
  if (!Number.isFinite(middle)) return Number.NaN;
  let kept = 0;
  for (let ray = 0; ray < RAYS; ray++) {
    if (!(edges[ray]! <= 1.6 * middle + spacingMm && edges[ray]! >= 0.45 * middle - spacingMm)) edges[ray] = Number.NaN;
    else kept++;
  }
  if (kept < RAYS / 3) return Number.NaN;
  let sum = 0;
  for (let ray = 0; ray < RAYS; ray++) {
    const own = edges[ray]!;
    const opposite = edges[(ray + RAYS / 2) % RAYS]!;
    const value = Number.isFinite(own) ? own : Number.isFinite(opposite) ? opposite : middle;
    sum += value * value;
  }
  return Math.sqrt(sum / RAYS);
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
