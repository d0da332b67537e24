import { describe, expect, it } from "vitest";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { fewestVerticesOnAverage, fewestVerticesWithin } from "#test/tools/tracing-robot/fewest-vertices.ts";

const line = (count: number, place: (share: number) => Vec3): Vec3[] =>
  Array.from({ length: count }, (_, i) => place(i / (count - 1)));

describe("the fewest vertices that reach an error", () => {
  it("are two on a straight line and one more for each corner (geometry)", () => {
    const straight = line(20, (t) => [3 * t, -t, 2 * t]);
    expect(fewestVerticesWithin(straight, 1e-9)).toBe(2);
    expect(fewestVerticesOnAverage(straight, 1e-9)).toBe(2);
    const zigzag: Vec3[] = Array.from({ length: 31 }, (_, i) => [i, Math.abs(((i + 5) % 10) - 5), 0]);
    // Corners at 5, 10, 15, 20 and 25.
    expect(fewestVerticesWithin(zigzag, 1e-9)).toBe(7);
    expect(fewestVerticesOnAverage(zigzag, 1e-9)).toBe(7);
  });

  it("on half a circle follow from the rise of its chords, r (1 - cos(angle / 2)) (geometry)", () => {
    // 121 points: chords over 30, 24 and 20 steps are 4, 5 and 6 in all.
    const half = line(121, (t) => [Math.cos(Math.PI * t), Math.sin(Math.PI * t), 0]);
    for (const chords of [3, 4, 5, 6]) {
      const rise = 1 - Math.cos(Math.PI / chords / 2);
      expect(fewestVerticesWithin(half, rise + 1e-9)).toBe(chords + 1);
      expect(fewestVerticesWithin(half, rise * 0.99)).toBeGreaterThan(chords + 1);
    }
    // On average a chord is two thirds of its rise away (parabola); equal chords are best.
    const rise = 1 - Math.cos(Math.PI / 10 / 2);
    expect(fewestVerticesOnAverage(half, (2 / 3) * rise * 1.02)).toBe(11);
    expect(fewestVerticesOnAverage(half, (2 / 3) * rise * 0.95)).toBe(12);
  });

  it("are those of trying every choice of vertices on short curves", () => {
    const random = new SeededRandom(5);
    for (let round = 0; round < 12; round++) {
      const curve = line(9, (t) => [10 * t, random.normal(), random.normal()]);
      const within = 0.5 + random.unit();
      const onAverage = 0.2 + 0.5 * random.unit();
      const best = { within: 9, onAverage: 9 };
      for (let choice = 0; choice < 2 ** 7; choice++) {
        const chosen = [0, ...Array.from({ length: 7 }, (_, k) => k + 1).filter((k) => (choice >> (k - 1)) & 1), 8];
        const away = curve.map((point, k) => {
          const next = chosen.findIndex((vertex) => vertex >= k);
          return chosen[next] === k ? 0 : nearestOnPolyline([curve[chosen[next - 1]!]!, curve[chosen[next]!]!], point).distance;
        });
        if (Math.max(...away) <= within) best.within = Math.min(best.within, chosen.length);
        if (away.reduce((a, b) => a + b) / 9 <= onAverage) best.onAverage = Math.min(best.onAverage, chosen.length);
      }
      expect(fewestVerticesWithin(curve, within)).toBe(best.within);
      expect(fewestVerticesOnAverage(curve, onAverage)).toBe(best.onAverage);
    }
  });
});
