import { expect, test } from "vitest";
import { planeCrossings } from "#renderer/section/plane-crossings.ts";

test("a string at right angles to the plane gives a circle of its radius", () => {
  const [outline, ...rest] = planeCrossings([10, 20, -1, 10, 20, 3], [0.4, 0.8], 0.1);
  expect(rest).toEqual([]);
  expect(outline).toMatchObject({ x: 10, y: 20, measured: true });
  expect(outline!.shortPx).toBeCloseTo(5, 9);
  expect(outline!.longPx).toBeCloseTo(5, 9);
});

// Geometry: a cylinder cut at angle a to its axis gives an ellipse with axes r and r / sin a.
test("a string at 45 degrees gives an ellipse with axes r and r times the root of two, along the string", () => {
  const [outline] = planeCrossings([0, 0, -1, 20, 0, 1], [0.5, 0.5], 0.1);
  expect(outline!.x).toBeCloseTo(10, 9);
  expect(outline!.shortPx).toBeCloseTo(5, 9);
  expect(outline!.longPx).toBeCloseTo(5 * Math.SQRT2, 9);
  expect(outline!.angle).toBeCloseTo(0, 9);
});

test("a point on the plane counts once, a string in the plane not at all, an unmeasured radius is said", () => {
  expect(planeCrossings([0, 0, -1, 1, 0, 0, 2, 0, 1], [1, 1, 1], 1)).toHaveLength(1);
  expect(planeCrossings([0, 0, 0, 5, 0, 0], [1, 1], 1)).toHaveLength(0);
  expect(planeCrossings([0, 0, 0, 5, 0, 2], [1, 1], 1)).toHaveLength(1);
  expect(planeCrossings([0, 0, -1, 0, 0, 1], [Number.NaN, Number.NaN], 1)[0]!.measured).toBe(false);
  expect(planeCrossings([0, 0, -1, 0, 0, 1], [Number.NaN, 2], 1)[0]!.shortPx).toBe(2);
});
