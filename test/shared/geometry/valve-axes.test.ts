import { expect, test } from "vitest";
import { pointMm } from "#shared/geometry/types.ts";
import { frontDirection, valveAxes } from "#shared/geometry/valve-axes.ts";
import { dot, norm } from "#shared/geometry/vec3.ts";

const muscleHeads = [
  { muscle: "antero-lateral", head: 1, position: pointMm(-5, 0, 0) },
  { muscle: "postero-medial", head: 1, position: pointMm(5, 0, 1) },
] as const;

test("the valve stands on its muscle heads with the annulus above", () => {
  const axes = valveAxes({
    muscleHeads,
    annulus: { closed: true, points: [pointMm(-8, 0, 20), pointMm(8, 0, 20), pointMm(0, 9, 20.5)] },
  })!;
  expect(axes.up[2]).toBeGreaterThan(0.95);
  expect(axes.toAnteroLateral[0]).toBeLessThan(-0.95);
  for (const v of [axes.up, axes.toAnteroLateral, frontDirection(axes)]) expect(norm(v)).toBeCloseTo(1, 12);
  expect(dot(axes.up, axes.toAnteroLateral)).toBeCloseTo(0, 12);
});

test("commissures serve where the annulus is not marked; the first is taken as antero-lateral", () => {
  const axes = valveAxes({ muscleHeads: muscleHeads.slice(0, 1), commissures: [pointMm(-6, 0, 18), pointMm(6, 0, 18)] })!;
  expect(axes.toAnteroLateral[0]).toBeLessThan(-0.8);
});

test("without muscle heads, or without anything above them, the valve does not stand", () => {
  expect(valveAxes({})).toBeNull();
  expect(valveAxes({ muscleHeads })).toBeNull();
  expect(valveAxes({ commissures: [pointMm(0, 0, 1)] })).toBeNull();
});
