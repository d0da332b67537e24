import { describe, expect, it } from "vitest";
import { pointAt } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { arcLengthsOfPins, placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { at, fork, string } from "../drawn-tree.ts";
import { seeded } from "../seeded-random.ts";

/** Slow model: every assignment of pins to points that keeps their order, by trying all. */
function leastByTrying(points: readonly Vec3[], pins: readonly Vec3[], from = 0): number {
  if (pins.length === 0) return 0;
  let least = Number.POSITIVE_INFINITY;
  for (let i = from; i < points.length; i++) {
    least = Math.min(least, distance(points[i]!, pins[0]!) ** 2 + leastByTrying(points, pins.slice(1), i));
  }
  return least;
}

describe("where a curve passes its pins", () => {
  it("is at the pins themselves on a polyline of pins", () => {
    const points: Vec3[] = [at(0, 0, 0), at(3, 0, 0), at(3, 4, 0), at(3, 4, 12)];
    expect(arcLengthsOfPins(points, points.slice(1, 3))).toEqual([3, 7]);
    expect(arcLengthsOfPins(points, [])).toEqual([]);
  });

  it("keeps the order of pins where the string comes back near itself", () => {
    // Out along y = 0 and back along y = 0.1: the nearest point of the first pin lies on the way back.
    const out = Array.from({ length: 11 }, (_, i): Vec3 => at(i, 0, 0));
    const back = Array.from({ length: 11 }, (_, i): Vec3 => at(10 - i, 0.1, 0));
    const [first, second, third] = arcLengthsOfPins([...out, ...back], [at(2, 0.09, 0), at(9, 0, 0), at(5, 0.1, 0)]);
    expect(first).toBeCloseTo(2, 9);
    expect(second).toBeCloseTo(9, 9);
    expect(third).toBeCloseTo(15.1, 9);
  });

  // Source: the slow model above. Seed 11. Places between curve points may only be nearer than the best points.
  it("is no farther than the best of all ordered assignments, on random curves that cross themselves", () => {
    const random = seeded(11);
    const place = (): Vec3 => at(Math.floor(random() * 4) * 3, Math.floor(random() * 4) * 3, 0);
    for (let k = 0; k < 200; k++) {
      const points = Array.from({ length: 9 }, place);
      const pins = Array.from({ length: 3 }, place);
      const places = arcLengthsOfPins(points, pins);
      expect([...places].sort((a, b) => a - b)).toEqual(places);
      const cost = places.reduce((sum, s, i) => sum + distance(pointAt(points, s), pins[i]!) ** 2, 0);
      expect(cost).toBeLessThanOrEqual(leastByTrying(points, pins) + 1e-9);
    }
  });
});

describe("a place on a strand", () => {
  it("lies on the curve, in the stretch between its pins", () => {
    const d = string();
    const strand = d.strands.get("s1")!;
    expect(placeOnLine(d, strand, at(2, 0, 5))).toMatchObject({ leg: 0, node: null });
    expect(placeOnLine(d, strand, at(6, 0, 0))).toMatchObject({ leg: 1, point: [6, 0, 0], node: null });
    expect(placeOnLine(d, strand, at(11, 0, 0)).leg).toBe(2);
  });
  it("is the node at either end", () => {
    const d = fork();
    expect(placeOnLine(d, d.strands.get("s2")!, at(-5, 0, 0)).node).toBe("n3");
    expect(placeOnLine(d, d.strands.get("s2")!, at(99, 0, 0)).node).toBe("n2");
  });
  it("is found on the pins of a strand without a curve", () => {
    const d = string();
    const bare = { ...d.strands.get("s1")!, curve: null };
    expect(placeOnLine(d, bare, at(6, 3, 0))).toEqual({ point: [6, 0, 0], atMm: 6, leg: 1, node: null });
  });
});
