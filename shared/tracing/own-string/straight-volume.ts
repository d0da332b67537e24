import type { Vec3 } from "#shared/geometry/types.ts";
import { cross, dot, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";
import { tangents } from "#shared/tracing/polyline.ts";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import type { Sampler } from "#shared/tracing/sampler.ts";

/** Grey values about a curve as if it were straight: planes across it, one after another, with axes that do not turn about it. */
export interface StraightVolume {
  /** Number of planes, one at each point of the curve. */
  readonly count: number;
  /** Samples from a plane's middle to its sides. */
  readonly half: number;
  /** Distance of samples in a plane, millimetres; about that of the planes. */
  readonly stepMm: number;
  /** shape [count, 2 half + 1, 2 half + 1], order plane, v, u; grey values, dark strings turned bright. */
  readonly values: Float64Array;
  /** shape [count, 3]; unit vectors of u and v in the frame of the curve. */
  readonly u: Float64Array;
  readonly v: Float64Array;
}

/**
 * The grey values about a curve, straightened: own and neighbouring strings then run along the planes, whatever bends they make
 * together, and no way through the planes is shorter than another.
 * @param points shape [n, 3], millimetres along the voxel axes, about `stepMm` apart; borrowed.
 * @param sign +1 bright strings, -1 dark ones.
 * @source axes carried along by projection, the discrete form of a frame that does not turn about its curve (Bishop 1975).
 */
export function straighten(sampler: Sampler, points: Float64Array, stepMm: number, half: number, sign: 1 | -1): StraightVolume {
  const { levels } = sampler.pyramid;
  let level = 0;
  while (level + 1 < levels.length && Math.min(...levels[level + 1]!.spacing) <= stepMm * (1 + 1e-9)) level++;
  const { spacing, factor } = levels[level]!;
  const count = points.length / 3;
  const side = 2 * half + 1;
  const values = new Float64Array(count * side * side);
  const u = new Float64Array(3 * count);
  const v = new Float64Array(3 * count);
  const directions = tangents(points);
  const inIndex = (d: Vec3) =>
    [(d[0] * stepMm) / spacing[0], (d[1] * stepMm) / spacing[1], (d[2] * stepMm) / spacing[2]] as const;
  let before: Vec3 | null = null;
  for (let i = 0; i < count; i++) {
    const along: Vec3 = [directions[3 * i]!, directions[3 * i + 1]!, directions[3 * i + 2]!];
    const carried: Vec3 | null = before && normalise(subtract(before, scale(along, dot(before, along))));
    // Where a curve turns back on itself nothing of the axis before is left.
    const ui: Vec3 = carried && Math.hypot(...carried) > 0.5 ? carried : perpendicularFrame(along)[0];
    const vi = cross(along, ui);
    before = ui;
    u.set(ui, 3 * i);
    v.set(vi, 3 * i);
    const at = (axis: 0 | 1 | 2) => points[3 * i + axis]! / spacing[axis] + 0.5 / factor[axis] - 0.5;
    const from = [at(0), at(1), at(2)] as const;
    const step = inIndex(ui);
    const row = inIndex(vi);
    for (let j = -half; j <= half; j++) {
      const offset = [j * row[0], j * row[1], j * row[2]] as const;
      sampler.addLine({ level, from, step, offset, first: -half, count: side }, values, (i * side + j + half) * side);
    }
  }
  if (sign < 0) for (let k = 0; k < values.length; k++) values[k] = -values[k]!;
  return { count, half, stepMm, values, u, v };
}

/**
 * The volume smoothed along its planes by a Gaussian: noise goes, what runs along the curve stays. Beyond the ends the last plane
 * counts as repeated. @param sigma planes.
 */
export function smoothAlong(volume: StraightVolume, sigma: number): StraightVolume {
  const { count, half, values } = volume;
  const plane = (2 * half + 1) ** 2;
  const { reach, smooth } = gaussianKernels(sigma);
  const out = new Float64Array(values.length);
  for (let i = 0; i < count; i++)
    for (let k = -reach; k <= reach; k++) {
      const from = Math.min(count - 1, Math.max(0, i + k)) * plane;
      const weight = smooth[Math.abs(k)]!;
      for (let p = 0, to = i * plane; p < plane; p++, to++) out[to] = out[to]! + weight * values[from + p]!;
    }
  return { ...volume, values: out };
}
