import { describe, expect, it } from "vitest";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { seededRandom } from "#test/shared/compare/small-trees.ts";

const random = seededRandom(31);
const somewhere = (size: number): Vec3 => [random() * size, random() * size, random() * size];

function lines(count: number): Vec3[][] {
  return Array.from({ length: count }, () => {
    let p = somewhere(20);
    return Array.from({ length: 1 + Math.floor(random() * 12) }, () => {
      p = [p[0] + random() - 0.5, p[1] + random() - 0.5, p[2] + random()];
      return p;
    });
  });
}

// Slow model: every polyline asked by itself.
describe("index of segments", () => {
  it("finds the same nearest distance as asking every line, near and far, with and without a choice of lines", () => {
    for (let round = 0; round < 20; round++) {
      const set = lines(1 + Math.floor(random() * 30));
      const index = new SegmentIndex(set);
      for (let k = 0; k < 40; k++) {
        const p = somewhere(k % 2 ? 20 : 300);
        const all = set.map((line) => nearestOnPolyline(line, p).distance);
        expect(index.nearest(p).distance).toBeCloseTo(Math.min(...all), 12);
        const even = all.filter((_, line) => line % 2 === 0);
        expect(index.nearest(p, (line) => line % 2 === 0).distance).toBeCloseTo(Math.min(...even), 12);
        const reached = new Set<number>();
        index.within(p, 3, (line) => reached.add(line));
        expect([...reached].sort((a, b) => a - b)).toEqual(all.flatMap((d, line) => (d <= 3 ? [line] : [])));
      }
    }
  });

  it("answers Infinity when there is nothing", () => {
    expect(new SegmentIndex([]).nearest([0, 0, 0])).toEqual({ distance: Number.POSITIVE_INFINITY, segment: -1, share: 0 });
    expect(new SegmentIndex([[[1, 0, 0]]]).nearest([0, 0, 0], () => false).segment).toBe(-1);
    expect(new SegmentIndex([[[1, 0, 0]]]).nearest([0, 0, 0]).distance).toBe(1);
  });
});
