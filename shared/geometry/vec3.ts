import type { Vec3 } from "#shared/geometry/types.ts";

/** a + b. */
export function add(a: Vec3, b: Vec3): Vec3 {
  return [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
}
/** a - b. */
export function subtract(a: Vec3, b: Vec3): Vec3 {
  return [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
}
/** a * s. */
export function scale(a: Vec3, s: number): Vec3 {
  return [a[0] * s, a[1] * s, a[2] * s];
}
/** Scalar product. */
export function dot(a: Vec3, b: Vec3): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}
/** Vector product. */
export function cross(a: Vec3, b: Vec3): Vec3 {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}
/** Euclidean length. */
export function norm(a: Vec3): number {
  return Math.sqrt(a[0] * a[0] + a[1] * a[1] + a[2] * a[2]);
}
/** Distance between two points. */
export function distance(a: Vec3, b: Vec3): number {
  return norm(subtract(a, b));
}
/** Unit vector along a; the zero vector stays zero. */
export function normalise(a: Vec3): Vec3 {
  const n = norm(a);
  return n === 0 ? [0, 0, 0] : scale(a, 1 / n);
}
/** Point at share t of the way from a to b. */
export function mix(a: Vec3, b: Vec3, t: number): Vec3 {
  return [a[0] + (b[0] - a[0]) * t, a[1] + (b[1] - a[1]) * t, a[2] + (b[2] - a[2]) * t];
}
/** Two unit vectors perpendicular to `direction` and to each other, chosen the same way for the same direction. */
export function perpendicularFrame(direction: Vec3): readonly [Vec3, Vec3] {
  const d = normalise(direction);
  const helper: Vec3 = Math.abs(d[2]) < 0.9 ? [0, 0, 1] : [0, 1, 0];
  const u = normalise(cross(helper, d));
  return [u, cross(d, u)];
}
