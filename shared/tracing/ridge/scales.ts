import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Smallest diameter that the ridge measure is tuned to, millimetres. */
export const SMALLEST_DIAMETER_MM = 0.1;
/** Largest diameter that the ridge measure is tuned to, millimetres. */
export const LARGEST_DIAMETER_MM = 3;
/** Above this many voxels of a level (its finest spacing) a scale is computed on the next coarser level. */
const MOST_VOXELS_PER_SIGMA = 2;
/** Below this many voxels of the working grid a scale says nothing but noise and is left out. */
const LEAST_VOXELS_PER_SIGMA = 0.7;

/** One scale of the ridge measure and the level it is computed on. */
export interface RidgeScale {
  readonly sigmaMm: number;
  readonly level: number;
}

/**
 * All scales of the ridge measure, millimetres, ascending by a factor of sqrt 2: a solid cylinder of diameter D answers
 * most strongly at sigma = D / (2 sqrt 2), and at most 5 % less when D lies between two of them.
 * @source Lindeberg 1998 (scale-normalised derivatives); the steps are this project's own.
 */
export function allSigmasMm(): number[] {
  const first = SMALLEST_DIAMETER_MM / (2 * Math.SQRT2);
  const count = 1 + Math.ceil(Math.log2(LARGEST_DIAMETER_MM / SMALLEST_DIAMETER_MM) * 2);
  return Array.from({ length: count }, (_, k) => first * Math.SQRT2 ** k);
}

/** Radius of the solid cylinder that answers most strongly at a scale, millimetres. */
export function radiusOfSigma(sigmaMm: number): number {
  return sigmaMm * Math.SQRT2;
}

/** Finest spacing of a level, millimetres. */
export function finestSpacing(pyramid: Pick<VoxelPyramid, "levels">, level: number): number {
  return Math.min(...pyramid.levels[level]!.spacing);
}

/**
 * The scales of the ridge measure on a working level, ascending. A scale belongs to the finest level from the working
 * level upwards on which it spans at most two voxels (the coarsest level takes the rest): this is the definition, so that
 * a block and the whole level agree.
 */
export function ridgeScales(pyramid: Pick<VoxelPyramid, "levels">, workingLevel: number): RidgeScale[] {
  const least = LEAST_VOXELS_PER_SIGMA * finestSpacing(pyramid, workingLevel);
  const scales: RidgeScale[] = [];
  for (const sigmaMm of allSigmasMm()) {
    if (sigmaMm < least) continue;
    let level = workingLevel;
    while (level + 1 < pyramid.levels.length && sigmaMm > MOST_VOXELS_PER_SIGMA * finestSpacing(pyramid, level) * (1 + 1e-9))
      level++;
    scales.push({ sigmaMm, level });
  }
  return scales;
}

/**
 * The sigma to apply on a level, voxels per axis x, y, z, so that together with the blur of the downsampling itself (the
 * mean of f voxels has the variance (f^2 - 1) / 12) it makes `sigmaMm`.
 */
export function sigmaVoxels(pyramid: Pick<VoxelPyramid, "levels">, scale: RidgeScale): readonly [number, number, number] {
  const { spacing, factor } = pyramid.levels[scale.level]!;
  const along = (axis: 0 | 1 | 2) => {
    const finest = spacing[axis] / factor[axis];
    const already = (finest * finest * (factor[axis] * factor[axis] - 1)) / 12;
    return Math.sqrt(Math.max(scale.sigmaMm * scale.sigmaMm - already, 0)) / spacing[axis];
  };
  return [along(0), along(1), along(2)];
}

/** How many of a level's scales, finest first, are tuned to radii of at most `widestMm`; at least one. */
export function scalesUpTo(scales: readonly RidgeScale[], widestMm: number): number {
  return Math.max(1, scales.filter((scale) => radiusOfSigma(scale.sigmaMm) <= widestMm).length);
}
