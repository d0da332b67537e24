import { arcLengths, polylineLength, resample } from "#shared/geometry/polyline.ts";
import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, distance, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

/** What shapes a string between its two ends. Lengths in millimetres. */
export interface CurveShape {
  /** Places to pass between the ends. */
  readonly through?: readonly Vec3[];
  /** Direction at the start and at the end, along the string; absent = towards the next place. */
  readonly leave?: Vec3;
  readonly arrive?: Vec3;
  /** Greatest sideways sway between two places, as a share of their distance. */
  readonly sway: number;
  /** Distance between the points of the result. */
  readonly step: number;
}

/**
 * The centreline of a string: a cubic Hermite spline through the places, swayed sideways by one and a half slow waves that
 * vanish at every place it must pass; points at equal steps, rounded to 1e-6 mm, both ends included exactly.
 * @source cubic Hermite interpolation with Catmull-Rom tangents (Catmull & Rom 1974); the sway is own derivation.
 */
export function stringCurve(from: Vec3, to: Vec3, shape: CurveShape, random: SeededRandom): Vec3[] {
  const places = [from, ...(shape.through ?? []), to];
  const fine: Vec3[] = [];
  for (let k = 1; k < places.length; k++) {
    const [a, b] = [places[k - 1]!, places[k]!];
    const length = distance(a, b);
    const startDirection = k === 1 ? (shape.leave ?? subtract(b, a)) : subtract(b, places[k - 2]!);
    const endDirection = k === places.length - 1 ? (shape.arrive ?? subtract(b, a)) : subtract(places[k + 1]!, a);
    const ta = scale(normalise(startDirection), length);
    const tb = scale(normalise(endDirection), length);
    const [u, v] = perpendicularFrame(subtract(b, a));
    const swayU = shape.sway * length * random.between(-1, 1);
    const swayV = shape.sway * length * random.between(-1, 1);
    const count = Math.max(4, Math.ceil((2 * length) / shape.step));
    for (let i = k === 1 ? 0 : 1; i <= count; i++) {
      const t = i / count;
      // Both the wave and its slope vanish at the ends, so that directions there stay as asked.
      const envelope = Math.sin(Math.PI * t) ** 2;
      const wave = envelope * swayU;
      const second = envelope * swayV * Math.cos(1.5 * Math.PI * t);
      fine.push(add(hermite(a, b, ta, tb, t), add(scale(u, wave), scale(v, second))));
    }
  }
  return resample(fine, shape.step).map(roundPoint);
}

function hermite(a: Vec3, b: Vec3, ta: Vec3, tb: Vec3, t: number): Vec3 {
  const t2 = t * t;
  const t3 = t2 * t;
  const ka = 2 * t3 - 3 * t2 + 1;
  const kta = t3 - 2 * t2 + t;
  const kb = -2 * t3 + 3 * t2;
  const ktb = t3 - t2;
  return [0, 1, 2].map((c) => ka * a[c]! + kta * ta[c]! + kb * b[c]! + ktb * tb[c]!) as unknown as Vec3;
}

/** Radii along a string that thins evenly from one end to the other; one per point, millimetres, rounded to 1e-6. */
export function taperedRadii(points: readonly Vec3[], start: number, end: number): number[] {
  const at = arcLengths(points);
  const total = polylineLength(points) || 1;
  return at.map((s) => roundMm(start + (end - start) * (s / total)));
}
