import { describe, expect, test } from "vitest";
import { acrossAxes, alongAxes, fixedAxes, planeStepMm, steppedBy } from "#renderer/section/planes.ts";
import { awayFrom, type PlaneAxes } from "#renderer/section/view-plane.ts";
import { IDENTITY3, type Matrix3, pointMm, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { frontDirection, valveAxes } from "#shared/geometry/valve-axes.ts";
import { distance, dot, norm, normalise } from "#shared/geometry/vec3.ts";
import { seeded } from "#test/shared/trees/seeded-random.ts";

const KINDS = ["flat", "front", "side"] as const;

function isRightAngled(axes: PlaneAxes) {
  expect(norm(axes.right)).toBeCloseTo(1, 9);
  expect(norm(axes.down)).toBeCloseTo(1, 9);
  expect(dot(axes.right, axes.down)).toBeCloseTo(0, 9);
}

const near = (a: Vec3, b: Vec3) => expect(distance(a, b)).toBeLessThan(1e-9);

describe("before the valve stands upright", () => {
  test("flat shows voxel x to the right and voxel y downwards; front and side show z upwards", () => {
    near(fixedAxes("flat", IDENTITY3, null).right, [1, 0, 0]);
    near(fixedAxes("flat", IDENTITY3, null).down, [0, 1, 0]);
    near(fixedAxes("front", IDENTITY3, null).down, [0, 0, -1]);
    near(fixedAxes("front", IDENTITY3, null).right, [1, 0, 0]);
    near(fixedAxes("side", IDENTITY3, null).down, [0, 0, -1]);
    near(fixedAxes("side", IDENTITY3, null).right, [0, 1, 0]);
  });

  test("directions that are mirrored or not at right angles still give true planes", () => {
    const mirrored: Matrix3 = [1, 0, 0, 0, 1, 0, 0, 0, -1];
    const sheared: Matrix3 = [1, 0.1, 0, 0, 0.99, 0.05, 0, 0, 1];
    for (const direction of [mirrored, sheared]) for (const kind of KINDS) isRightAngled(fixedAxes(kind, direction, null));
  });
});

describe("once the valve stands upright", () => {
  const valve = valveAxes({
    muscleHeads: [
      { muscle: "antero-lateral", head: 1, position: pointMm(1, -5, 3) },
      { muscle: "postero-medial", head: 1, position: pointMm(2, 6, 2) },
    ],
    annulus: { closed: true, points: [pointMm(20, -6, 4), pointMm(21, 5, 1), pointMm(19, 0, 9)] },
  })!;

  test("front and side have the leaflets at the top", () => {
    for (const kind of ["front", "side"] as const)
      near(fixedAxes(kind, IDENTITY3, valve).down, [-valve.up[0], -valve.up[1], -valve.up[2]]);
  });

  test("front looks along the front direction with the antero-lateral side at the left; flat looks from the leaflets down", () => {
    const front = fixedAxes("front", IDENTITY3, valve);
    near(awayFrom(front), frontDirection(valve));
    near(front.right, [-valve.toAnteroLateral[0], -valve.toAnteroLateral[1], -valve.toAnteroLateral[2]]);
    near(awayFrom(fixedAxes("flat", IDENTITY3, valve)), [-valve.up[0], -valve.up[1], -valve.up[2]]);
    for (const kind of KINDS) isRightAngled(fixedAxes(kind, IDENTITY3, valve));
  });

  test("flat and front keep the same left and right", () => {
    near(fixedAxes("flat", IDENTITY3, valve).right, fixedAxes("front", IDENTITY3, valve).right);
  });
});

describe("planes that follow a strand", () => {
  test("across looks along the strand and turns no more than the strand does", () => {
    const random = seeded(6);
    let tangent: Vec3 = normalise([0.2, 0.1, 1]);
    let axes = acrossAxes(tangent, null);
    for (let k = 0; k < 200; k++) {
      const next = normalise([
        tangent[0] + (random() - 0.5) * 0.1,
        tangent[1] + (random() - 0.5) * 0.1,
        tangent[2] + (random() - 0.5) * 0.1,
      ]);
      const after = acrossAxes(next, axes);
      isRightAngled(after);
      near(awayFrom(after), next);
      // A frame that is carried along turns by no more than the tangent does (small angles: chord for angle).
      expect(distance(after.right, axes.right)).toBeLessThanOrEqual(distance(next, tangent) + 1e-9);
      axes = after;
      tangent = next;
    }
  });

  test("along contains the strand, which runs upwards, at any turn", () => {
    const tangent = normalise([1, 2, 3]);
    for (const turn of [0, 35, 90, 179]) {
      const axes = alongAxes(tangent, null, turn);
      isRightAngled(axes);
      near(axes.down, [-tangent[0], -tangent[1], -tangent[2]]);
    }
    const a = alongAxes(tangent, null, 0).right;
    expect(dot(a, alongAxes(tangent, null, 90).right)).toBeCloseTo(0, 9);
  });
});

test("a step is one voxel along the line of sight", () => {
  const grid = { size: sizeXyz(9, 9, 9), spacing: spacingMm(0.1, 0.2, 0.5), origin: pointMm(0, 0, 0), direction: IDENTITY3 };
  expect(planeStepMm(fixedAxes("flat", IDENTITY3, null), grid)).toBeCloseTo(0.5, 12);
  expect(planeStepMm(fixedAxes("front", IDENTITY3, null), grid)).toBeCloseTo(0.2, 12);
  expect(planeStepMm(fixedAxes("side", IDENTITY3, null), grid)).toBeCloseTo(0.1, 12);
  const plane = { ...fixedAxes("flat", IDENTITY3, null), centre: pointMm(1, 1, 1), mmPerPx: 0.1 };
  near(steppedBy(plane, 3, grid).centre, [1, 1, 2.5]);
});
