import { perpendicularFrame } from "#shared/geometry/vec3.ts";
import { levelForRadius, type Sampler } from "#shared/tracing/sampler.ts";

/** A plane across a string, ready to be sampled: in the continuous index of one level. */
export interface CrossSection {
  readonly level: number;
  /** Sample step: the level's finest spacing, millimetres. */
  readonly stepMm: number;
  /** Index of the centre. */
  readonly centre: readonly [number, number, number];
  /** Steps of one sample along u, v and the tangent, as index changes. */
  readonly u: readonly [number, number, number];
  readonly v: readonly [number, number, number];
  readonly t: readonly [number, number, number];
  /** Unit vectors of u and v, millimetre frame. */
  readonly uMm: readonly [number, number, number];
  readonly vMm: readonly [number, number, number];
}

/**
 * The plane normal to a tangent, on the level fit for a radius.
 * @param points shape [n, 3], millimetres along the voxel axes from the first voxel's centre.
 * @param directions shape [n, 3], unit tangents.
 */
export function crossSection(
  sampler: Sampler,
  points: Float64Array,
  directions: Float64Array,
  at: number,
  radiusMm: number,
): CrossSection {
  const level = levelForRadius(sampler.pyramid, radiusMm);
  const { spacing, factor } = sampler.pyramid.levels[level]!;
  const stepMm = Math.min(...spacing);
  const tMm = [directions[3 * at]!, directions[3 * at + 1]!, directions[3 * at + 2]!] as const;
  const [uMm, vMm] = perpendicularFrame(tMm);
  const inIndex = (d: readonly [number, number, number]) =>
    [(d[0] * stepMm) / spacing[0], (d[1] * stepMm) / spacing[1], (d[2] * stepMm) / spacing[2]] as const;
  const along = (axis: 0 | 1 | 2) => points[3 * at + axis]! / spacing[axis] + 0.5 / factor[axis] - 0.5;
  return {
    level,
    stepMm,
    centre: [along(0), along(1), along(2)],
    u: inIndex(uMm),
    v: inIndex(vMm),
    t: inIndex(tMm),
    uMm,
    vMm,
  };
}

/**
 * Fills `out`, shape [2 half + 1, 2 half + 1] (v, u), with grey values at whole sample steps about the centre, the mean of
 * 2 slices + 1 planes along the tangent.
 */
export function samplePatchInto(sampler: Sampler, section: CrossSection, half: number, slices: number, out: Float64Array): void {
  const { level, centre, u, v, t } = section;
  const side = 2 * half + 1;
  const planes = 2 * slices + 1;
  out.fill(0, 0, side * side);
  for (let j = -half; j <= half; j++)
    for (let k = -slices; k <= slices; k++) {
      const offset = [j * v[0] + k * t[0], j * v[1] + k * t[1], j * v[2] + k * t[2]] as const;
      sampler.addLine({ level, from: centre, step: u, offset, first: -half, count: side }, out, (j + half) * side);
    }
  for (let o = 0; o < side * side; o++) out[o] = out[o]! / planes;
}
