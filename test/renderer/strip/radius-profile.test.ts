import { expect, test } from "vitest";
import { radiusProfile } from "#renderer/strip/radius-profile.ts";

const N = Number.NaN;

test("measured points form runs, and what is below resolution between them is a gap, never a line", () => {
  const { runs, gaps } = radiusProfile([0, 1, 2, 3, 4, 5], [0.3, 0.3, N, N, 0.2, 0.2]);
  expect(runs).toEqual([
    { at: [0, 1], radii: [0.3, 0.3] },
    { at: [4, 5], radii: [0.2, 0.2] },
  ]);
  expect(gaps).toEqual([[1, 4]]);
});

test("gaps at the ends and a strand without any radius are told", () => {
  expect(radiusProfile([0, 1, 2], [N, 0.2, N]).gaps).toEqual([
    [0, 1],
    [1, 2],
  ]);
  expect(radiusProfile([0, 1, 2], [N, N, N])).toMatchObject({ runs: [], gaps: [[0, 2]] });
  expect(radiusProfile([], [])).toMatchObject({ runs: [], gaps: [] });
});

test("the axis ends at a round number not below the largest radius", () => {
  expect(radiusProfile([0, 1], [0.31, 0.2]).fullMm).toBe(0.5);
  expect(radiusProfile([0, 1], [0.5, 0.2]).fullMm).toBe(0.5);
  expect(radiusProfile([0, 1], [1.2, 0.2]).fullMm).toBe(1.5);
});
