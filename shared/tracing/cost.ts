import type { GreyLevels } from "#shared/tracing/grey-levels.ts";
import { RIDGE_TILE_SIDE, type RidgeTiles } from "#shared/tracing/ridge/ridge-tiles.ts";
import { scalesUpTo } from "#shared/tracing/ridge/scales.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Cost per millimetre on the strongest string; background costs 1. */
export const LEAST_COST = 0.03;
/** Cost per millimetre where nothing resembles a string. */
export const MOST_COST = 1;
/** A solid cylinder's best ridge answer at unit contrast, exp(-1). */
export const CYLINDER_PEAK = Math.exp(-1);
/** Share of the plain intensity in the strength: small, so that muscle stays dear, yet forks and thick places stay passable. */
const INTENSITY_SHARE = 0.06;
/** Strength at which the cost is halfway, as a share of a string's expected ridge answer. */
const HALFWAY_SHARE = 0.3;

/** How strength becomes cost: fixed numbers, from the scan (and pins) alone. */
export interface CostScale {
  readonly background: number;
  /** +1 bright strings, -1 dark ones. */
  readonly sign: 1 | -1;
  /** Strength (grey values) at which the cost is halfway between most and least. */
  readonly halfway: number;
  /** Strength above which nothing gets cheaper, in units of `halfway`: a stronger neighbour is no shortcut. */
  readonly enough: number;
  /** Scales tuned to larger radii than this take no part, millimetres. */
  readonly widestRadiusMm: number;
}

/**
 * Ridge answers that noise alone reaches about once in a thousand voxels at the finest useful scale.
 * Scale-normalised second derivatives of white noise have an SD of 0.13 to 0.16 of the noise at sigma 0.9 to 1 voxel.
 * @source own derivation: integral of the squared second derivative of a 3D Gaussian, 3 / (4 (4 pi)^(3/2) sigma^7).
 */
export function ridgeNoiseFloor(levels: GreyLevels): number {
  return 0.45 * levels.noise;
}

/**
 * The cost scale for strings that answer with `expectedRidge` (grey values; see {@link CYLINDER_PEAK}), never below what
 * noise explains.
 * @param widestRadiusMm largest radius the string may have: wider scales would see two strings side by side as one.
 */
export function costScale(
  levels: GreyLevels,
  sign: 1 | -1,
  expectedRidge: number,
  widestRadiusMm: number = Number.POSITIVE_INFINITY,
): CostScale {
  const halfway = Math.max(HALFWAY_SHARE * expectedRidge, ridgeNoiseFloor(levels));
  const enough = Math.max(1, Math.min(3, expectedRidge / halfway));
  return { background: levels.background, sign, halfway, enough, widestRadiusMm };
}

/**
 * Cost of one millimetre: falls from 1 (nothing) to 0.03 (string) with the strength, which blends the ridge answer and the
 * excess over the background so that it does not vanish where strings meet.
 */
export function costOf(ridge: number, value: number, scale: CostScale): number {
  const excess = INTENSITY_SHARE * Math.max(0, scale.sign * (value - scale.background));
  const ratio = Math.min(scale.enough, ridge / scale.halfway);
  const lift = Math.min(1.5, excess / scale.halfway);
  return LEAST_COST + (MOST_COST - LEAST_COST) / (1 + ratio * ratio + lift * lift);
}

/** Gives the costs of tiles (32 voxels a side, numbered from the level's first voxel), one by one, as a front arrives. */
export interface CostTiles {
  readonly level: number;
  /** Fills `out`, shape [32, 32, 32], x fastest, with costs per millimetre; Infinity outside the scan. */
  tileInto(i: number, j: number, k: number, out: Float32Array): void;
}

/** Costs of a level from its ridge tiles and grey values. */
export function createCostTiles(pyramid: VoxelPyramid, ridges: RidgeTiles, level: number, scale: CostScale): CostTiles {
  const n = RIDGE_TILE_SIDE;
  const { size } = pyramid.levels[level]!;
  const values = new Float32Array(n * n * n);
  const count = scalesUpTo(ridges.scales(level), scale.widestRadiusMm);
  return {
    level,
    tileInto(i, j, k, out) {
      const { strength } = ridges.tile(level, i, j, k, count);
      pyramid.readBoxInto(level, [i * n, j * n, k * n], [n, n, n], values);
      const inX = Math.min(n, size[0] - i * n);
      const inY = Math.min(n, size[1] - j * n);
      const inZ = Math.min(n, size[2] - k * n);
      if (inX < n || inY < n || inZ < n) out.fill(Number.POSITIVE_INFINITY);
      for (let z = 0; z < inZ; z++)
        for (let y = 0; y < inY; y++) {
          const row = (z * n + y) * n;
          for (let v = row; v < row + inX; v++) out[v] = costOf(strength[v]!, values[v]!, scale);
        }
    },
  };
}
