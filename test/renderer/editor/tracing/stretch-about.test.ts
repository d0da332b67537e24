import { describe, expect, it } from "vitest";
import { stretchAbout } from "#renderer/editor/tracing/stretch-about.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** A right angle: along x to 1, then along y to 1, a point every 0.25 mm of the way. */
const LINE: Vec3[] = [0, 0.25, 0.5, 0.75, 1, 1.25, 1.5, 1.75, 2].map((mm) => [Math.min(1, mm), Math.max(0, mm - 1), 0]);

describe("the stretch about a place", () => {
  it("has the points within half the length along the line, around the corner too", () => {
    expect(stretchAbout(LINE, [1, 0, 0], 1)).toEqual([2, 6]);
    expect(stretchAbout(LINE, [1, 0, 0], 0.98)).toEqual([3, 5]);
  });

  it("is the nearest point when the length holds none", () => {
    expect(stretchAbout(LINE, [0.6, 0.3, 0], 0)).toEqual([2, 2]);
    expect(stretchAbout(LINE, [0.65, 0, 0], 0.01)).toEqual([3, 3]);
  });

  it("ends with the line", () => {
    expect(stretchAbout(LINE, [0, 0, 0], 0.6)).toEqual([0, 1]);
    expect(stretchAbout(LINE, [1, 1, 0], 100)).toEqual([0, 8]);
  });
});
