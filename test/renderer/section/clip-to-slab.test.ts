import { expect, test } from "vitest";
import { bandOpacity, clipToSlab, depthOpacity, FADE_BANDS } from "#renderer/section/clip-to-slab.ts";
import { seeded } from "#test/shared/trees/seeded-random.ts";

test("a line through the slab is cut where it enters and leaves, and the pieces join", () => {
  // Depth runs from -4 to 4 while x runs from 0 to 8, so depth = x - 4.
  const runs = clipToSlab([0, 0, -4, 8, 0, 4], 1, 2);
  expect(runs.map((run) => run.band)).toEqual([4, 3, 2, 1, 0, 1, 2, 3, 4]);
  expect(runs[4]!.points).toEqual([3, 0, 5, 0]);
  expect(runs[0]!.points[0]).toBeCloseTo(1, 12);
  expect(runs[8]!.points[2]).toBeCloseTo(7, 12);
  for (let i = 1; i < runs.length; i++) expect(runs[i]!.points[0]).toBeCloseTo(runs[i - 1]!.points[2]!, 12);
});

test("a line inside the slab stays whole, one beyond the fade vanishes, and a plane without thickness works", () => {
  expect(clipToSlab([0, 0, 0.1, 1, 0, -0.2, 2, 0, 0.3], 0.5, 1)).toEqual([{ band: 0, points: [0, 0, 1, 0, 2, 0] }]);
  expect(clipToSlab([0, 0, 9, 1, 0, 8], 0.5, 1)).toEqual([]);
  expect(clipToSlab([0, 0, 0, 5, 0, 0], 0, 1)).toEqual([{ band: 0, points: [0, 0, 5, 0] }]);
});

// Slow model: sample each segment densely and look at the depth there.
test("length in each band agrees with dense sampling of random lines", () => {
  const random = seeded(7);
  for (let k = 0; k < 30; k++) {
    const seen = Array.from({ length: 15 }, () => random() * 10 - 5);
    const found = new Array<number>(FADE_BANDS + 1).fill(0);
    for (const { band, points } of clipToSlab(seen, 0.7, 2.4)) {
      for (let i = 2; i < points.length; i += 2)
        found[band]! += Math.hypot(points[i]! - points[i - 2]!, points[i + 1]! - points[i - 1]!);
    }
    const sampled = new Array<number>(FADE_BANDS + 1).fill(0);
    const pieces = 20_000;
    for (let i = 0; i + 5 < seen.length; i += 3) {
      const length = Math.hypot(seen[i + 3]! - seen[i]!, seen[i + 4]! - seen[i + 1]!) / pieces;
      for (let p = 0; p < pieces; p++) {
        const depth = Math.abs(seen[i + 2]! + (seen[i + 5]! - seen[i + 2]!) * ((p + 0.5) / pieces));
        const band = depth <= 0.7 ? 0 : Math.ceil((depth - 0.7) / 0.6);
        if (band <= FADE_BANDS) sampled[band]! += length;
      }
    }
    for (const [band, length] of found.entries()) expect(length).toBeCloseTo(sampled[band]!, 2);
  }
});

test("opacity falls with depth and never rises", () => {
  for (let band = 1; band <= FADE_BANDS; band++) expect(bandOpacity(band)).toBeLessThan(bandOpacity(band - 1));
  expect(depthOpacity(0.2, 0.2, 2)).toBe(1);
  expect(depthOpacity(-2.3, 0.2, 2)).toBe(0);
  expect(depthOpacity(0.5, 0.2, 2)).toBeGreaterThan(depthOpacity(-1, 0.2, 2));
});
