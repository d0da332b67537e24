import { describe, expect, it } from "vitest";
import { blockedShare, freeCircle, TOUCHED } from "#shared/tracing/edge-circle.ts";
import { RAY_COSINES, RAY_SINES, RAYS } from "#shared/tracing/radial-profiles.ts";

/** Where rays from the origin leave an ellipse about (u, v), by the quadratic equation; Infinity stands for NaN of a blocked ray. */
function edges(u: number, v: number, a: number, b: number, blocked: (ray: number) => boolean = () => false): Float64Array {
  return Float64Array.from({ length: RAYS }, (_, ray) => {
    if (blocked(ray)) return Number.NaN;
    const [c, s] = [RAY_COSINES[ray]!, RAY_SINES[ray]!];
    const p = (c / a) ** 2 + (s / b) ** 2;
    const q = (c * u) / a ** 2 + (s * v) / b ** 2;
    const r = (u / a) ** 2 + (v / b) ** 2 - 1;
    return (q + Math.sqrt(q * q - p * r)) / p;
  });
}

describe("the circle through a string's free edges", () => {
  it("is the string's own, from wherever in it the rays begin", () => {
    for (const [u, v] of [
      [0, 0],
      [0.2, -0.1],
      [-0.3, 0.3],
    ] as const) {
      const circle = freeCircle(edges(u, v, 1, 1), 0.1)!;
      expect(circle.u).toBeCloseTo(u, 9);
      expect(circle.v).toBeCloseTo(v, 9);
      expect(circle.radius).toBeCloseTo(1, 9);
    }
  });

  it("takes no notice of a neighbour on one side: rays without an edge, long ones, and the neck between", () => {
    const free = edges(0, 0, 1, 1, (ray) => ray <= 3 || ray >= 29);
    const long = free.map((edge, ray) => (ray === 3 || ray === 29 ? 1.8 : edge));
    const neck = long.map((edge, ray) => (ray === 4 || ray === 28 ? 1.2 : edge));
    for (const seen of [free, long, neck]) {
      expect(blockedShare(seen)).toBeGreaterThanOrEqual(TOUCHED);
      const circle = freeCircle(seen, 0.1)!;
      expect(Math.hypot(circle.u, circle.v)).toBeLessThan(0.03);
      expect(Math.abs(circle.radius - 1)).toBeLessThan(0.03);
    }
  });

  it("grows with the picture, turns and mirrors with it", () => {
    const seen = edges(0.2, 0.1, 1, 1, (ray) => ray < 5).map((edge, ray) => edge * (1 + 0.05 * Math.sin(ray)));
    const plain = freeCircle(seen, 0.1)!;
    const large = freeCircle(
      seen.map((edge) => 3 * edge),
      0.3,
    )!;
    expect(large.u).toBeCloseTo(3 * plain.u, 9);
    expect(large.radius).toBeCloseTo(3 * plain.radius, 9);
    const turned = freeCircle(
      seen.map((_, ray) => seen[(ray + RAYS - 8) % RAYS]!),
      0.1,
    )!;
    expect(turned.u).toBeCloseTo(-plain.v, 9);
    expect(turned.v).toBeCloseTo(plain.u, 9);
    const mirrored = freeCircle(
      seen.map((_, ray) => seen[(RAYS - ray) % RAYS]!),
      0.1,
    )!;
    expect(mirrored.v).toBeCloseTo(-plain.v, 9);
    expect(mirrored.radius).toBeCloseTo(plain.radius, 9);
  });

  it("does not take a flattened string for two, nor says anything of too few edges", () => {
    expect(blockedShare(edges(0, 0, 1.5, 0.75))).toBe(0);
    expect(blockedShare(edges(0, 0, 1, 1))).toBe(0);
    const few = edges(0, 0, 1, 1, (ray) => ray > 4);
    expect(blockedShare(few)).toBe(0);
    expect(freeCircle(few, 0.1)).toBeNull();
    expect(freeCircle(new Float64Array(RAYS).fill(Number.NaN), 0.1)).toBeNull();
  });
});
