import type { Vec3 } from "#shared/geometry/types.ts";
import { CYLINDER_PEAK, ridgeNoiseFloor } from "#shared/tracing/cost.ts";
import { indexToLocal, localToIndex } from "#shared/tracing/local-frame.ts";
import { RIDGE_TILE_SIDE, type RidgeTile } from "#shared/tracing/ridge/ridge-tiles.ts";
import { radiusOfSigma } from "#shared/tracing/ridge/scales.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** The string that a pin means: its nearest strong voxel. */
export interface PinRidge {
  /** Millimetres along the voxel axes. */
  readonly at: Vec3;
  /** Ridge answer there, grey values. */
  readonly strength: number;
  readonly radiusMm: number;
  /** False when nothing near the pin stands out from noise; `at` is then the pin. */
  readonly found: boolean;
}

const FARTHEST_MM = 0.5;

/** Ridge strength and radius at the voxel of a level, read from its tile; of the first `count` scales when given. */
export function ridgeAtVoxel(
  context: TraceContext,
  level: number,
  x: number,
  y: number,
  z: number,
  count?: number,
): { strength: number; radiusMm: number } {
  const n = RIDGE_TILE_SIDE;
  const tile = context.ridges.tile(level, Math.floor(x / n), Math.floor(y / n), Math.floor(z / n), count);
  const o = ((z & 31) * n + (y & 31)) * n + (x & 31);
  return { strength: tile.strength[o]!, radiusMm: radiusOfScale(context, level, tile, o) };
}

function radiusOfScale(context: TraceContext, level: number, tile: RidgeTile, o: number): number {
  return radiusOfSigma(context.ridges.scales(level)[tile.scale[o]!]!.sigmaMm);
}

/**
 * The string nearest to a pin, weighing strength against distance in radii: a pin on a thin string is not taken by the
 * thick one beside it. Looks at most one local diameter away.
 * @param pin millimetres along the voxel axes.
 */
export function ridgeNearPin(context: TraceContext, level: number, pin: Vec3): PinRidge {
  const grid = context.pyramid.levels[level]!;
  const index = localToIndex(grid, pin);
  const centre = index.map(Math.round) as [number, number, number];
  const reach = Math.max(FARTHEST_MM, 3 * Math.min(...grid.spacing));
  const half = grid.spacing.map((s) => Math.ceil(reach / s)) as [number, number, number];
  const from = ([0, 1, 2] as const).map((a) => Math.max(0, centre[a] - half[a]));
  const to = ([0, 1, 2] as const).map((a) => Math.min(grid.size[a] - 1, centre[a] + half[a]));
  const least = Math.min(...grid.spacing);
  let best = 0;
  let found: PinRidge | null = null;
  for (let z = from[2]!; z <= to[2]!; z++)
    for (let y = from[1]!; y <= to[1]!; y++)
      for (let x = from[0]!; x <= to[0]!; x++) {
        const d = Math.hypot(
          (x - index[0]) * grid.spacing[0],
          (y - index[1]) * grid.spacing[1],
          (z - index[2]) * grid.spacing[2],
        );
        if (d > reach) continue;
        const { strength, radiusMm } = ridgeAtVoxel(context, level, x, y, z);
        const radii = d / Math.max(radiusMm, 1.2 * least);
        if (radii > 1.5) continue;
        const score = strength * Math.exp(-4 * radii * radii);
        if (score > best) {
          best = score;
          found = { at: indexToLocal(grid, [x, y, z]), strength, radiusMm, found: true };
        }
      }
  if (found && found.strength > followableStrength(context)) return found;
  const radiusMm = found ? found.radiusMm : 2 * least;
  return { at: pin, strength: found ? found.strength : 0, radiusMm, found: false };
}

/** Ridge answers below this are no string: noise, or a faint ripple beside the tissue's contrast. */
export function followableStrength(context: TraceContext): number {
  return Math.max(1.2 * ridgeNoiseFloor(context.levels), 0.1 * CYLINDER_PEAK * context.levels.contrast);
}
