import type { Vec3 } from "#shared/geometry/types.ts";
import { arcLengths } from "#shared/tracing/polyline.ts";

/** One string of a fork: its centreline from the fork outwards, and how thick it is. */
export interface ForkArm {
  /** shape [n, 3], n >= 2, millimetres; the first point is the one at the fork. */
  readonly points: Float64Array;
  /** shape [n], millimetres; NaN = not known. */
  readonly radii: Float64Array;
}

/** Where a fork belongs. */
export interface ForkPlace {
  /** The point nearest to the extrapolated centrelines, in the frame of the arms, millimetres. */
  readonly at: Vec3;
  /** Root mean square distance of that point from the lines, millimetres: how well they meet. */
  readonly spreadMm: number;
  /** Largest radius among the arms where they are first seen apart, millimetres; the local diameter is twice that. */
  readonly radiusMm: number;
}

/** Each arm's line is fitted over this many local diameters from where the arm is seen by itself. */
const FITTED_DIAMETERS = 2;
/** A fork is never moved farther than this from where it was put, in local diameters. */
const FARTHEST_DIAMETERS = 3;
/** Pull towards the place given, beside the arms' weight of 1 each: settles what nearly parallel arms leave open. */
const PULL = 0.003;

/**
 * The place of a fork by the point rule: the point nearest (least squares) to the centrelines of its strings, extrapolated as
 * straight lines from where each is seen by itself. A string is by itself from one local diameter on, and where it is farther
 * from the other arms than their radii together, so that the merged stretch, which no centreline shows, takes no part.
 * @param arms two or more; a strand that runs through the fork counts as two arms.
 * @param near where the fork was put (a pin, a meeting of curves); the answer stays within three local diameters of it.
 * @param usualRadiusMm stands in for arms whose radius is not known.
 * @returns null when fewer than two arms are long enough to have a direction.
 * @source least-squares intersection of lines (normal equations of the projections); own choice of the stretches.
 */
export function placeFork(arms: readonly ForkArm[], near: Vec3, usualRadiusMm: number): ForkPlace | null {
  const radii = arms.map((arm) => typicalRadius(arm, usualRadiusMm));
  const diameter = 2 * Math.max(...radii);
  // sum (I - d d') p = sum (I - d d') c, a symmetric 3 x 3 system: xx, xy, xz, yy, yz, zz.
  const m: SymmetricRows = [PULL, 0, 0, PULL, 0, PULL];
  const right: [number, number, number] = [PULL * near[0], PULL * near[1], PULL * near[2]];
  const lines: FittedLine[] = [];
  arms.forEach((arm, k) => {
    const line = lineOf(arm, firstApart(arms, radii, k, diameter), FITTED_DIAMETERS * diameter);
    if (!line) return;
    lines.push(line);
    const [x, y, z] = line.direction;
    const rows = [1 - x * x, -x * y, -x * z, 1 - y * y, -y * z, 1 - z * z] as const;
    rows.forEach((value, i) => {
      m[i] = m[i]! + value;
    });
    const [cx, cy, cz] = line.middle;
    right[0] = right[0]! + rows[0] * cx + rows[1] * cy + rows[2] * cz;
    right[1] = right[1]! + rows[1] * cx + rows[3] * cy + rows[4] * cz;
    right[2] = right[2]! + rows[2] * cx + rows[4] * cy + rows[5] * cz;
  });
  if (lines.length < 2) return null;
  const free = solveSymmetric(m, right);
  const away = [free[0] - near[0], free[1] - near[1], free[2] - near[2]] as const;
  const share = Math.min(1, (FARTHEST_DIAMETERS * diameter) / Math.hypot(...away));
  const at: Vec3 = [near[0] + share * away[0], near[1] + share * away[1], near[2] + share * away[2]];
  const spread = lines.reduce((sum, line) => sum + squaredDistance(line, at), 0) / lines.length;
  return { at, spreadMm: Math.sqrt(spread), radiusMm: diameter / 2 };
}

interface FittedLine {
  readonly middle: Vec3;
  readonly direction: Vec3;
}

type SymmetricRows = [number, number, number, number, number, number];

/** Median of an arm's known radii. */
function typicalRadius(arm: ForkArm, usual: number): number {
  const known = arm.radii.filter(Number.isFinite).sort();
  return known.length > 0 ? known[known.length >> 1]! : usual;
}

/** Arc length along arm `k` from which on it is by itself; at most two thirds of its length. */
function firstApart(arms: readonly ForkArm[], radii: readonly number[], k: number, diameter: number): number {
  const { points } = arms[k]!;
  const arc = arcLengths(points);
  const most = (2 / 3) * arc[arc.length - 1]!;
  let from = Math.min(diameter, most);
  arms.forEach((other, o) => {
    if (o === k) return;
    const clear = radii[k]! + radii[o]!;
    for (let i = 0; i < arc.length && arc[i]! <= most; i++)
      if (arc[i]! > from && distanceToPoints(points, i, other.points) < clear) from = arc[i]!;
  });
  return from;
}

function distanceToPoints(points: Float64Array, i: number, others: Float64Array): number {
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k < others.length; k += 3) {
    const x = points[3 * i]! - others[k]!;
    const y = points[3 * i + 1]! - others[k + 1]!;
    const z = points[3 * i + 2]! - others[k + 2]!;
    least = Math.min(least, x * x + y * y + z * z);
  }
  return Math.sqrt(least);
}

/** The regression line of an arm's points on arc length over a stretch; null when it holds no length. */
function lineOf(arm: ForkArm, from: number, length: number): FittedLine | null {
  const arc = arcLengths(arm.points);
  const middle = [0, 0, 0];
  const slope = [0, 0, 0];
  let count = 0;
  let meanArc = 0;
  for (let i = 0; i < arc.length; i++) {
    if (arc[i]! < from || arc[i]! > from + length) continue;
    count++;
    meanArc += arc[i]!;
    for (let c = 0; c < 3; c++) middle[c] = middle[c]! + arm.points[3 * i + c]!;
  }
  if (count < 2) return null;
  meanArc /= count;
  for (let c = 0; c < 3; c++) middle[c] = middle[c]! / count;
  for (let i = 0; i < arc.length; i++) {
    if (arc[i]! < from || arc[i]! > from + length) continue;
    for (let c = 0; c < 3; c++) slope[c] = slope[c]! + (arc[i]! - meanArc) * (arm.points[3 * i + c]! - middle[c]!);
  }
  const norm = Math.hypot(slope[0]!, slope[1]!, slope[2]!);
  if (!(norm > 0)) return null;
  return {
    middle: [middle[0]!, middle[1]!, middle[2]!],
    direction: [slope[0]! / norm, slope[1]! / norm, slope[2]! / norm],
  };
}

function squaredDistance({ middle, direction }: FittedLine, at: Vec3): number {
  const x = at[0] - middle[0];
  const y = at[1] - middle[1];
  const z = at[2] - middle[2];
  const along = x * direction[0] + y * direction[1] + z * direction[2];
  return Math.max(0, x * x + y * y + z * z - along * along);
}

/** Solves a positive definite 3 x 3 system given as xx, xy, xz, yy, yz, zz, by cofactors. */
function solveSymmetric([a, b, c, d, e, f]: SymmetricRows, r: Vec3): Vec3 {
  const c0 = d * f - e * e;
  const c1 = c * e - b * f;
  const c2 = b * e - c * d;
  const k = 1 / (a * c0 + b * c1 + c * c2);
  const c3 = a * f - c * c;
  const c4 = b * c - a * e;
  const c5 = a * d - b * b;
  return [
    k * (c0 * r[0] + c1 * r[1] + c2 * r[2]),
    k * (c1 * r[0] + c3 * r[1] + c4 * r[2]),
    k * (c2 * r[0] + c4 * r[1] + c5 * r[2]),
  ];
}
