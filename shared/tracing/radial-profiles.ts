import { type CrossSection, crossSection } from "#shared/tracing/cross-section.ts";
import type { Sampler } from "#shared/tracing/sampler.ts";

/** Rays of a point, evenly spread, the first along u, towards v. */
export const RAYS = 32;
/** Planes averaged to each side. */
const SLICES = 2;
/** Samples per sample step along a ray. */
const PER_STEP = 2;
/** The inside level is the mean within this share of the half width; the blur correction knows it. */
export const INSIDE_SHARE = 0.35;

/** Cosine of each ray's angle. */
export const RAY_COSINES = Float64Array.from({ length: RAYS }, (_, ray) => Math.cos((2 * Math.PI * ray) / RAYS));
/** Sine of each ray's angle. */
export const RAY_SINES = Float64Array.from({ length: RAYS }, (_, ray) => Math.sin((2 * Math.PI * ray) / RAYS));

/** Radial samples of one point's rays, and where they lie. */
export interface RadialProfiles {
  /** shape [RAYS, samples]; dark strings turned bright. */
  readonly values: Float64Array;
  readonly samples: number;
  readonly spacingMm: number;
}

/**
 * Grey values along the rays of a point in the plane normal to the tangent, each the mean of five planes; and the variance (mm^2) that
 * sampling added to the scan's own blur.
 */
export function sampleRays(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  i: number,
  radiusMm: number,
  sign: 1 | -1,
): { profiles: RadialProfiles; section: CrossSection; variance: number } {
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
  return { profiles: { values, samples, spacingMm: stepMm / PER_STEP }, section, variance };
}

/** Mean over the rays at each distance. */
function meanProfile({ values, samples }: RadialProfiles): Float64Array {
  const out = new Float64Array(samples);
  for (let ray = 0; ray < RAYS; ray++) for (let k = 0; k < samples; k++) out[k] = out[k]! + values[ray * samples + k]! / RAYS;
  return out;
}

/**
 * The level of a bright rim itself, above what blur left of it at its crest: a plate between core and surroundings as thick as the
 * crest's width at half height on both sides, which depends on the level in turn.
 * @param mean shape [samples], the mean profile; @param crest its highest sample. @param sigma blur, samples.
 * @source own derivation: c = L - (2 L - core - outside) Q(t / 2 sigma), Q the upper tail of the normal distribution.
 */
function rimLevel(mean: Float64Array, crest: number, core: number, outside: number, sigma: number): number {
  let level = mean[crest]!;
  for (let round = 0; sigma > 0 && round < 3; round++) {
    let outer = crest;
    while (outer + 1 < mean.length && mean[outer]! > (level + outside) / 2) outer++;
    let inner = crest;
    while (inner > 0 && mean[inner]! > (level + core) / 2) inner--;
    // The crossings lie between two samples each: half a sample less on both sides, on average.
    const tail = Math.min(0.25, upperTail((outer - inner - 1) / (2 * sigma)));
    level = (mean[crest]! - (core + outside) * tail) / (1 - 2 * tail);
  }
  return level;
}

/** Share of a normal distribution above z >= 0. @source Abramowitz & Stegun 1964, 26.2.17 (error below 7.5e-8). */
function upperTail(z: number): number {
  const t = 1 / (1 + 0.2316419 * z);
  const series = t * (0.31938153 + t * (-0.356563782 + t * (1.781477937 + t * (-1.821255978 + t * 1.330274429))));
  return (Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI)) * series;
}

/** Grey levels of a string and of what surrounds it. */
export interface ProfileLevels {
  readonly inside: number;
  readonly outside: number;
  /** Radius of the crest of a bright rim, millimetres; 0 where there is none. */
  readonly rimMm: number;
}

/**
 * The levels that a point's profiles show, for a string of about a radius.
 * @param blurSigmaMm the scan's blur, which lowers a thin rim's crest; 0 = not known.
 */
export function levelsOf(profiles: RadialProfiles, radiusMm: number, blurSigmaMm = 0): ProfileLevels {
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
  // A rim that stands above the core: uneven stain. Its own level is then the inside.
  let crest = 0;
  for (let k = 0; k < samples && k * spacingMm <= 1.1 * radiusMm; k++) if (mean[k]! > mean[crest]!) crest = k;
  const crestLevel = mean[crest]!;
  if (crest * spacingMm > 0.35 * radiusMm && crestLevel - outside > 1.3 * (core - outside))
    return { inside: rimLevel(mean, crest, core, outside, blurSigmaMm / spacingMm), outside, rimMm: crest * spacingMm };
  return { inside: core, outside, rimMm: 0 };
}

/**
 * Where each ray leaves its string: the first fall through a level, millimetres from the axis, shape [RAYS]; NaN where there is none.
 * @param rimMm where to begin: at the crest of a bright rim.
 */
export function edgesOf({ values, samples, spacingMm }: RadialProfiles, level: number, rimMm: number): Float64Array {
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
  return edges;
}
