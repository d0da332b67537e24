import { CYLINDER_PEAK, ridgeNoiseFloor } from "#shared/tracing/cost.ts";
import { finestSpacing } from "#shared/tracing/ridge/scales.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** A string answers with at least this share of what a solid cylinder of the tissue's contrast would. */
const LEAST_SHARE = 0.3;
/** Blur of a level's voxels, beside the scan's own when that is not known: full width at half maximum, in voxels. */
const BLUR_VOXELS = 1.8;
const ABOVE_NOISE = 1.2;

/**
 * The weakest ridge answer that counts as a string of a radius on a level, grey values: above what noise alone explains on that
 * level, and a share of what the blur leaves of a solid cylinder's peak, so that broad faint ripples are no strings while thin
 * strings may be faint.
 * @source peak of a blurred cylinder: 1 - 2^(-(D / FWHM)^2), derivation beside the blur correction.
 */
export function leastStrength(context: TraceContext, level: number): (radiusMm: number) => number {
  const { levels, pyramid } = context;
  const { factor } = pyramid.levels[level]!;
  const voxelMm = finestSpacing(pyramid, level);
  // The mean of f voxels has 1 / sqrt f of their noise; neighbouring voxels of a blurred scan share theirs, so at most half of it goes.
  const noise = Math.max(1 / Math.sqrt(factor[0] * factor[1] * factor[2]), 0.5) * ridgeNoiseFloor(levels);
  const floor = ABOVE_NOISE * noise;
  const peak = LEAST_SHARE * CYLINDER_PEAK * levels.contrast;
  return (radiusMm) => Math.max(floor, peak * (1 - 2 ** -(((2 * radiusMm) / (BLUR_VOXELS * voxelMm)) ** 2)));
}
