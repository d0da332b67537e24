import { arcLengths, pointAt } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";

/** A place on a curve with three unit vectors at right angles: along the curve and two across it. */
export interface CurveFrame {
  readonly point: Vec3;
  readonly tangent: Vec3;
  readonly across: Vec3;
  /** tangent x across. */
  readonly other: Vec3;
}

/** The polyline of flat xyz numbers. */
export function pointsOfFlat(flat: ArrayLike<number>): Vec3[] {
  const points: Vec3[] = [];
  for (let n = 0; n + 2 < flat.length; n += 3) points.push([flat[n]!, flat[n + 1]!, flat[n + 2]!]);
  return points;
}

/**
 * Frames along a polyline that do not turn about it more than they must; the first follows from the direction alone, so the
 * same curve gives the same frames.
 * @param at ascending arc lengths from the first point, millimetres, clamped to the curve.
 * @param reach directions are taken between the places this far before and after, millimetres, > 0.
 * @source Wang, Juettler, Zheng & Liu, "Computation of rotation minimizing frames", ACM Trans Graph 2008;27(1), double reflection.
 */
export function framesAlong(points: readonly Vec3[], at: readonly number[], reach: number): CurveFrame[] {
  const walk = walker(points);
  const frames: CurveFrame[] = [];
  let last: CurveFrame | null = null;
  for (const s of at) {
    const point = walk(s);
    const chord = subtract(walk(s + reach), walk(s - reach));
    const length = Math.hypot(...chord);
    // A curve that turns back within the reach has no chord: the direction before is kept.
    const tangent: Vec3 = length > 1e-12 ? scale(chord, 1 / length) : (last?.tangent ?? [0, 0, 1]);
    const across: Vec3 = last ? carried(last, point, tangent) : perpendicularFrame(tangent)[0];
    last = { point, tangent, across, other: cross(tangent, across) };
    frames.push(last);
  }
  return frames;
}

/** `pointAt` with the arc lengths found once. */
function walker(points: readonly Vec3[]): (s: number) => Vec3 {
  const lengths = arcLengths(points);
  return (s) => {
    let low = 0;
    let high = points.length - 1;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (lengths[middle]! <= s) low = middle;
      else high = middle;
    }
    return pointAt(points.slice(low, high + 1), s - lengths[low]!);
  };
}

/** The across vector of the frame before, reflected twice onto the next place and direction. */
function carried(last: CurveFrame, point: Vec3, tangent: Vec3): Vec3 {
  const step = subtract(point, last.point);
  const c1 = dot(step, step);
  const reflect = (v: Vec3, by: Vec3, c: number): Vec3 => (c < 1e-24 ? v : subtract(v, scale(by, (2 / c) * dot(by, v))));
  const r = reflect(last.across, step, c1);
  const t = reflect(last.tangent, step, c1);
  const second = subtract(tangent, t);
  const turned = reflect(r, second, dot(second, second));
  // Rounding is taken out again, so that thousands of steps stay at right angles.
  const square = subtract(turned, scale(tangent, dot(turned, tangent)));
  return normalise(dot(square, square) > 1e-12 ? square : add(perpendicularFrame(tangent)[0], [0, 0, 0]));
}
