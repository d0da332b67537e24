import type { Matrix3, Vec3 } from "#shared/geometry/types.ts";
import { cross, dot, norm } from "#shared/geometry/vec3.ts";

/** Column `k` of a row-major matrix. */
export function columnOf(m: Matrix3, k: 0 | 1 | 2): Vec3 {
  return [m[k], m[k + 3]!, m[k + 6]!];
}

/** The row-major matrix of three columns; -0 becomes 0. */
export function matrixOfColumns(x: Vec3, y: Vec3, z: Vec3): Matrix3 {
  return [x[0] + 0, y[0] + 0, z[0] + 0, x[1] + 0, y[1] + 0, z[1] + 0, x[2] + 0, y[2] + 0, z[2] + 0];
}

/** Columns of length one and their lengths before; null when one has none, is not finite, or all lie in one plane. */
export function unitColumns(x: Vec3, y: Vec3, z: Vec3): { direction: Matrix3; lengths: Vec3 } | null {
  const lengths: Vec3 = [norm(x), norm(y), norm(z)];
  if (!lengths.every((l) => Number.isFinite(l) && l > 0)) return null;
  const [a, b, c] = [x, y, z].map((v, k) => [v[0] / lengths[k]!, v[1] / lengths[k]!, v[2] / lengths[k]!] as Vec3) as [
    Vec3,
    Vec3,
    Vec3,
  ];
  if (!(Math.abs(dot(cross(a, b), c)) >= 1e-3)) return null;
  return { direction: matrixOfColumns(a, b, c), lengths };
}
