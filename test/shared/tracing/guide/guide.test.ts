import { beforeAll, describe, expect, test } from "vitest";
import { type PointMm, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { type GuideFronts, growGuideFronts, openGuideFronts } from "#shared/tracing/guide/guide-fronts.ts";
import { previewGuide } from "#shared/tracing/guide/guide-preview.ts";
import { snap } from "#shared/tracing/guide/snap.ts";
import { createTraceContext, type TraceContext } from "#shared/tracing/trace-context.ts";
import { indexToMm, mmToIndex, type VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { seeded } from "#test/main/engine/write-store.ts";

const grid: VolumeGrid = {
  size: sizeXyz(150, 96, 96),
  spacing: spacingMm(0.05, 0.05, 0.05),
  origin: pointMm(10, -5, 2),
  direction: [0, -1, 0, 1, 0, 0, 0, 0, 1],
  frame: "LPS",
};
const RADIUS_MM = 0.2;

/** Two strings along the first voxel axis: one that winds, and a straight one behind it. Voxel indices of their axes. */
const winding = (x: number) => [x, 48 + 18 * Math.sin(x / 28), 40] as const;
const behind = (x: number) => [x, 48, 70] as const;
const place = (index: readonly [number, number, number]): PointMm => indexToMm(grid, index);

function scan() {
  const random = seeded(21);
  const voxels = new Uint16Array(150 * 96 * 96);
  for (let z = 0; z < 96; z++)
    for (let y = 0; y < 96; y++)
      for (let x = 0; x < 150; x++) {
        // A cut of 1 mm in the string behind.
        const cut = x >= 70 && x < 90;
        const near = Math.min(
          Math.hypot(y - winding(x)[1], z - winding(x)[2]) * Math.cos(Math.atan((18 / 28) * Math.cos(x / 28))),
          cut ? 99 : Math.hypot(y - behind(x)[1], z - behind(x)[2]),
        );
        const share = Math.min(1, Math.max(0, (RADIUS_MM / 0.05 - near) / 2 + 0.5));
        voxels[(z * 96 + y) * 150 + x] = 1000 + 1500 * share + 150 * (random() + random() - 1);
      }
  return memoryPyramid(grid, voxels);
}

/** Distance of a place from the axis of the winding string, millimetres (nearest of finely spaced points). */
function fromWinding(p: readonly [number, number, number]): number {
  let nearest = Number.POSITIVE_INFINITY;
  for (let x = 0; x <= 149; x += 0.25) {
    const q = place([...winding(x)]);
    nearest = Math.min(nearest, Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]));
  }
  return nearest;
}

describe("A guide", () => {
  let context: TraceContext;
  let grown: GuideFronts;
  const patient = () => false;

  beforeAll(() => {
    context = createTraceContext(scan(), "bright");
    grown = openGuideFronts(context, place(winding(20) as unknown as [number, number, number]), 64e6);
    let slices = 0;
    // Every slice ends at its first look at the time, so that growing in pieces is what is tested.
    while (slices < 60) {
      let looks = 0;
      slices++;
      if (!growGuideFronts(grown, () => looks++ > 20)) break;
    }
  }, 120_000);

  test("follows the string from the pin to a place on it, exactly from end to end, within the string", () => {
    const to = place([...winding(75)]);
    const { points, coarse, imageFit, doubtful } = previewGuide(grown, to, patient);
    expect(coarse).toBe(false);
    expect(
      points
        .slice(0, 3)
        .map((v, k) => v - grown.from[k]!)
        .every((off) => Math.abs(off) < 1e-6),
    ).toBe(true);
    expect(
      points
        .slice(-3)
        .map((v, k) => v - to[k]!)
        .every((off) => Math.abs(off) < 1e-6),
    ).toBe(true);
    let length = 0;
    for (let n = 0; n < points.length; n += 3) {
      expect(fromWinding([points[n]!, points[n + 1]!, points[n + 2]!])).toBeLessThan(RADIUS_MM);
      if (n > 0)
        length += Math.hypot(points[n]! - points[n - 3]!, points[n + 1]! - points[n - 2]!, points[n + 2]! - points[n - 1]!);
    }
    let expected = 0;
    for (let x = 20; x < 75; x += 0.25) {
      const [a, b] = [place([...winding(x)]), place([...winding(x + 0.25)])];
      expected += Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
    }
    // A preview, not the record: within 5 % of the analytic length.
    expect(Math.abs(length / expected - 1)).toBeLessThan(0.05);
    expect(imageFit).toBeGreaterThan(0.85);
    expect(doubtful).toEqual([]);
  });

  test("gives the same preview from a front grown in slices and from one that grew for this place alone", () => {
    const to = place([...winding(60)]);
    const fresh = openGuideFronts(context, grown.from, 64e6);
    expect(previewGuide(fresh, to, patient)).toEqual(previewGuide(grown, to, patient));
  });

  test("answers from the front between pin and pointer, before the one that goes everywhere has grown", () => {
    const fresh = openGuideFronts(context, grown.from, 64e6);
    const to = place([...winding(45)]);
    expect(previewGuide(fresh, to, patient).coarse).toBe(false);
    expect(fresh.fronts.map(({ front }) => front.settled)).toEqual(fresh.fronts.map(() => 0));
    const { near } = fresh;
    expect(previewGuide(fresh, place([...winding(40)]), patient).coarse).toBe(false);
    expect(fresh.near).toBe(near);
  });

  test("grows towards the pointer first while it rests, so that the guide becomes fine", () => {
    const fresh = openGuideFronts(context, grown.from, 64e6);
    const to = place([...winding(60)]);
    expect(previewGuide(fresh, to, () => true).coarse).toBe(true);
    const wide = fresh.fronts[0]!.front;
    let slices = 0;
    while (previewGuide(fresh, to, () => true).coarse && slices < 10_000) {
      let looks = 0;
      slices++;
      // One bite a slice, so that nothing else grows in the slice in which the guide arrives.
      growGuideFronts(fresh, () => looks++ > 0);
    }
    expect(slices).toBeLessThan(10_000);
    expect(wide.settled).toBe(0);
    expect(growGuideFronts(fresh, () => wide.settled > 0)).toBe(true);
    expect(wide.settled).toBeGreaterThan(0);
  });

  test("shows a coarser level's path, or a straight line without image fit, until the fine front has arrived", () => {
    const fresh = openGuideFronts(context, grown.from, 64e6);
    const to = place([...winding(60)]);
    const hasty = previewGuide(fresh, to, () => true);
    expect(hasty).toEqual({
      points: [...grown.from, ...to].map((v) => Math.round(v * 1e6) / 1e6 + 0),
      coarse: true,
      imageFit: null,
      doubtful: [[0, 1]],
    });
    const coarse = previewGuide(fresh, to, (front) => front === 0);
    expect(coarse.coarse).toBe(true);
    expect(coarse.imageFit).not.toBeNull();
    for (let n = 0; n < coarse.points.length; n += 3) {
      expect(fromWinding([coarse.points[n]!, coarse.points[n + 1]!, coarse.points[n + 2]!])).toBeLessThan(RADIUS_MM + 0.1);
    }
  });

  test("draws a straight line to a pointer outside the scan, at once", () => {
    const to = place([75, -20, 40]);
    const never = () => {
      throw new Error("a front was grown for a place outside the scan");
    };
    expect(previewGuide(grown, to, never)).toMatchObject({ coarse: true, imageFit: null });
  });

  test("names the stretch where the string is cut as doubtful, and only that", () => {
    const from = openGuideFronts(context, place([...behind(40)]), 64e6);
    const { points, doubtful, imageFit } = previewGuide(from, place([...behind(110)]), patient);
    expect(doubtful.length).toBe(1);
    const [[first, last]] = doubtful as [[number, number]];
    const x = (n: number) => mmToIndex(grid, [points[3 * n]!, points[3 * n + 1]!, points[3 * n + 2]!])[0];
    // The cut is from 70 to 90; the ridge answer reaches a radius (4 voxels) into it from both ends.
    expect(x(first)).toBeGreaterThan(66);
    expect(x(first)).toBeLessThan(80);
    expect(x(last)).toBeGreaterThan(80);
    expect(x(last)).toBeLessThan(94);
    expect(imageFit).toBeLessThan(0.95);
  });

  test("keeps its boxes within the bytes it is given", () => {
    for (const bytes of [8e6, 64e6]) {
      const { fronts } = openGuideFronts(context, grown.from, bytes);
      const taken = fronts.reduce((sum, { domain }) => sum + 13 * domain.cost.length, 0);
      // Eight tiles of 32^3 a level are always there.
      expect(taken).toBeLessThanOrEqual(Math.max(bytes, fronts.length * 13 * 8 * 32 ** 3));
    }
  });

  test("snapping finds both strings in the line of sight, one place each, with their depths", () => {
    const at = place([128, 48, 55]);
    const { candidates } = snap(context, { at, normal: [0, 0, 1], slabMm: 2, reachMm: 1.2 });
    const depths = candidates.map(({ depthMm }) => depthMm).sort((a, b) => a - b);
    // The planes of the two axes lie 15 voxels before and behind: 0.75 mm.
    expect(depths[0]).toBeGreaterThan(-0.95);
    expect(depths[0]).toBeLessThan(-0.55);
    expect(depths.at(-1)).toBeGreaterThan(0.55);
    expect(depths.at(-1)).toBeLessThan(0.95);
    for (const { point, depthMm, strength } of candidates) {
      expect(point[2] - at[2]).toBeCloseTo(depthMm, 5);
      expect(strength).toBeGreaterThan(0);
      expect(strength).toBeLessThanOrEqual(1);
      const index = mmToIndex(grid, point);
      const aside = Math.min(Math.hypot(index[1] - 48, index[2] - 70) * 0.05, fromWinding(point));
      expect(aside).toBeLessThan(RADIUS_MM);
    }
  });

  test("snapping beside all strings finds nothing, and a thin slab does not see the string behind", () => {
    const far = { at: place([30, 10, 20]), normal: [0, 0, 1], slabMm: 0.3, reachMm: 0.2 } as const;
    expect(snap(context, far)).toEqual({ candidates: [] });
    const on = { at: place([...winding(40)]), normal: [0, 0, 1], slabMm: 0.4, reachMm: 0.2 } as const;
    const { candidates } = snap(context, on);
    expect(candidates.length).toBe(1);
    expect(Math.abs(candidates[0]!.depthMm)).toBeLessThan(0.1);
  });
});
