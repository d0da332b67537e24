import type { Vec3 } from "#shared/geometry/types.ts";
import { dot, normalise, perpendicularFrame } from "#shared/geometry/vec3.ts";
import { localToIndex } from "#shared/tracing/local-frame.ts";
import { LARGEST_DIAMETER_MM } from "#shared/tracing/ridge/scales.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** Directions of a sphere shell, spread evenly: unit vectors. @source Vogel 1979 (golden-angle spiral), on the sphere. */
export const DIRECTIONS: readonly Vec3[] = Array.from({ length: 92 }, (_, n): Vec3 => {
  const z = 1 - (2 * n + 1) / 92;
  const turn = n * Math.PI * (3 - Math.sqrt(5));
  const across = Math.sqrt(1 - z * z);
  return [across * Math.cos(turn), across * Math.sin(turn), z];
});
const RING = 32;
/** Radius of the shell in radii of the string, and voxels besides. */
const SHELL_RADII = 2.2;
const SHELL_VOXELS = 1.5;
/** Bright: at least this share of the excess in the middle. */
const BRIGHT = 0.5;

/** Up to this share of a shell a place is that of strings: two ends of one take 0.1, the arms of a fork 0.2. */
export const STRING_SHARE = 0.3;

/**
 * Share of a sphere shell about a place that is as bright as the place (half as much above the background, or more), 0 to 1: about
 * 0.1 on a string of this radius, 0.2 at a fork, 0.4 in a sheet as thick as the string, more than half in
 * muscle, 0 for a spot. Each direction is the mean of three places, a voxel apart.
 * @param at millimetres along the voxel axes. @param radiusMm radius of the string, its ridge scale.
 * @source own derivation: a cylinder of radius r cuts 1 - sqrt(1 - (r / R)^2) of a sphere of radius R about its axis, a sheet r / R.
 */
export function brightShare(context: TraceContext, at: Vec3, radiusMm: number): number {
  const { voxelMm, excess } = looker(context, radiusMm);
  const middle = excess(at[0], at[1], at[2]);
  if (!(middle > 0)) return 1;
  const shell = SHELL_RADII * radiusMm + SHELL_VOXELS * voxelMm;
  let bright = 0;
  for (const [x, y, z] of DIRECTIONS) {
    let sum = 0;
    for (let step = -1; step <= 1; step++) {
      const far = shell + (step * voxelMm) / 2;
      sum += excess(at[0] + far * x, at[1] + far * y, at[2] + far * z);
    }
    if (sum > 3 * BRIGHT * middle) bright++;
  }
  return bright / DIRECTIONS.length;
}

/** Radius of the wide shell, in radii of the string. */
const WIDE_RADII = 4.5;
/** Off the axis: more than 50 degrees from it. */
const OFF_AXIS = 0.64;

/**
 * Share of a wide sphere shell about a place that is bright, and off the axis on which most of its brightness lies, 0 to 1: nothing on
 * a string, whatever crosses it and also when others run beside it; 0.05 and more on the rim of a sheet or in one.
 * @param at millimetres along the voxel axes. @param radiusMm radius of the string, its ridge scale.
 * @source own derivation: half a sheet's band on the shell lies off the axis, a string's two ends lie on it.
 */
export function offAxisShare(context: TraceContext, at: Vec3, radiusMm: number): number {
  const { voxelMm, excess } = looker(context, radiusMm);
  const least = 3 * BRIGHT * excess(at[0], at[1], at[2]);
  const shell = WIDE_RADII * radiusMm + SHELL_VOXELS * voxelMm;
  const bright: Vec3[] = [];
  for (const direction of DIRECTIONS) {
    const [x, y, z] = direction;
    let sum = 0;
    for (let step = -1; step <= 1; step++) {
      const far = shell + (step * voxelMm) / 2;
      sum += excess(at[0] + far * x, at[1] + far * y, at[2] + far * z);
    }
    if (sum > least) bright.push(direction);
  }
  // The axis: power iteration on the second moments, from the brightest side on.
  let axis: Vec3 = bright[0] ?? [0, 0, 1];
  for (let round = 0; round < 24 && bright.length > 0; round++) {
    const next = [0, 0, 0];
    for (const direction of bright) {
      const along = dot(direction, axis);
      for (let c = 0; c < 3; c++) next[c] = next[c]! + along * direction[c]!;
    }
    axis = normalise([next[0]!, next[1]!, next[2]!]);
  }
  return bright.filter((direction) => Math.abs(dot(direction, axis)) < OFF_AXIS).length / DIRECTIONS.length;
}

/** On the rim of a sheet this much of a near shell is bright, and this much of a wide one off the rim's axis. */
const RIM_SHARE = 0.2;
const RIM_OFF_AXIS = 0.05;

/**
 * True for a place on the rim of a sheet, or in something thicker than any string.
 * @param share see {@link brightShare}. @param radiusMm the place's ridge scale; the widest answers to everything that is thicker.
 */
export function isRimOrMuscle(context: TraceContext, at: Vec3, radiusMm: number, share: number): boolean {
  if (2 * radiusMm > LARGEST_DIAMETER_MM) return true;
  return share >= RIM_SHARE && offAxisShare(context, at, radiusMm) >= RIM_OFF_AXIS;
}

/** Distances at which a ray that stays in a sheet is looked at, in radii of the string. */
const SHEET_RADII = [1.5, 2, 2.5, 3, 3.5, 4.5];
/** Rays that look for a sheet: it is thin where the last of these distances is long. */
const SHEET_RAYS = 64;

/**
 * Share of the rays across a string that stay bright (half as bright as the string, or more) from its flank to 4.5 radii away, 0
 * to 1: nothing beside other strings, which such a ray leaves again; something all along the rim of a sheet.
 * @param direction unit vector along the string.
 */
export function sheetShare(context: TraceContext, at: Vec3, direction: Vec3, radiusMm: number): number {
  const { voxelMm, excess } = looker(context, radiusMm);
  const [u, v] = perpendicularFrame(direction);
  const least = BRIGHT * excess(at[0], at[1], at[2]);
  let staying = 0;
  for (let n = 0; n < SHEET_RAYS; n++) {
    const c = Math.cos((2 * Math.PI * n) / SHEET_RAYS);
    const s = Math.sin((2 * Math.PI * n) / SHEET_RAYS);
    const stays = SHEET_RADII.every((radii) => {
      const far = radii * radiusMm + SHELL_VOXELS * voxelMm;
      return (
        excess(at[0] + far * (c * u[0] + s * v[0]), at[1] + far * (c * u[1] + s * v[1]), at[2] + far * (c * u[2] + s * v[2])) >
        least
      );
    });
    if (stays) staying++;
  }
  return staying / SHEET_RAYS;
}

/**
 * How far a string's outline is from a place on it, millimetres: along 32 rays across the string to where less than half of
 * `middle` is left, the median over the rays (a neighbour lengthens only some of them); `most` where the median ray finds no edge.
 * @param direction unit vector along the string. @param middle excess of the string, grey values.
 */
export function outlineRadius(
  context: TraceContext,
  at: Vec3,
  direction: Vec3,
  radiusMm: number,
  middle: number,
  most: number,
): number {
  const { voxelMm, excess } = looker(context, radiusMm);
  const [u, v] = perpendicularFrame(direction);
  const step = voxelMm / 2;
  const least = BRIGHT * middle;
  const rays: number[] = [];
  for (let n = 0; n < RING; n++) {
    const c = Math.cos((2 * Math.PI * n) / RING);
    const s = Math.sin((2 * Math.PI * n) / RING);
    const x = c * u[0] + s * v[0];
    const y = c * u[1] + s * v[1];
    const z = c * u[2] + s * v[2];
    let edge = most;
    // Two samples in a row below, so that one voxel of noise is no edge.
    for (let far = step, below = 0; far < most; far += step) {
      below = excess(at[0] + far * x, at[1] + far * y, at[2] + far * z) < least ? below + 1 : 0;
      if (below < 2) continue;
      edge = Math.max(far - 1.5 * step, 0);
      break;
    }
    rays.push(edge);
  }
  rays.sort((a, b) => a - b);
  return rays[RING / 2]!;
}

/** Grey value above the background, on the strings' side, at a place; millimetres along the voxel axes. */
export function excessAt(context: TraceContext, at: Vec3, radiusMm: number): number {
  return looker(context, radiusMm).excess(at[0], at[1], at[2]);
}

/** Looks at the level whose voxels are about as large as the string is thick to its middle: less noise, still sharp enough. */
function looker(context: TraceContext, radiusMm: number) {
  const { pyramid, sampler, sign, levels } = context;
  let level = 0;
  while (level + 1 < pyramid.levels.length && Math.min(...pyramid.levels[level + 1]!.spacing) <= 0.7 * radiusMm) level++;
  const grid = pyramid.levels[level]!;
  return {
    level,
    voxelMm: Math.min(...grid.spacing),
    excess(x: number, y: number, z: number): number {
      const index = localToIndex(grid, [x, y, z]);
      return sign * (sampler.at(level, index[0], index[1], index[2]) - levels.background);
    },
  };
}
