import { expect, test } from "vitest";
import {
  approached,
  facing,
  lookingAlong,
  mmPerPixel,
  orbitAround,
  shifted,
  turned,
  uprightOf,
  viewerAxes,
} from "#renderer/space/orbit.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { cross, distance, dot, norm, normalise } from "#shared/geometry/vec3.ts";
import { seeded } from "#test/shared/trees/seeded-random.ts";

const upright = uprightOf(null);
const start = orbitAround(pointMm(1, 2, 3), 10, 1);
const near = (a: Vec3, b: Vec3) => expect(distance(a, b)).toBeLessThan(1e-9);

test("the viewer's axes are unit vectors at right angles, with up upwards", () => {
  const random = seeded(8);
  for (let k = 0; k < 40; k++) {
    const { away, right, up } = viewerAxes(turned(start, random() * 720, random() * 300 - 150), upright);
    for (const v of [away, right, up]) expect(norm(v)).toBeCloseTo(1, 9);
    near(cross(right, away), up);
    expect(dot(up, upright.up)).toBeGreaterThan(0);
    expect(dot(right, upright.up)).toBeCloseTo(0, 9);
  }
});

test("from the front the line of sight is the front direction; a quarter turn to the right looks from the right side", () => {
  const level = { ...start, tiltDeg: 0 };
  near(viewerAxes(level, upright).away, [0, 1, 0]);
  near(viewerAxes(level, upright).right, [1, 0, 0]);
  // Walking a quarter around to the right puts the viewer on the side that was at the right.
  near(viewerAxes(turned(level, 90, 0), upright).away, [-1, 0, 0]);
});

test("nine tenths, nearly, of the scan's half diagonal are in view, in a narrow pane too", () => {
  for (const aspect of [2, 1, 0.4]) {
    const orbit = orbitAround(pointMm(0, 0, 0), 10, aspect);
    const halfHeight = (24 * Math.PI) / 360;
    const half = Math.min(halfHeight, Math.atan(Math.tan(halfHeight) * aspect));
    expect(Math.asin(8.8 / orbit.distanceMm)).toBeLessThanOrEqual(half + 1e-12);
  }
});

test("looking along a direction finds it, for any direction that is not nearly upright", () => {
  const random = seeded(9);
  for (let k = 0; k < 40; k++) {
    const away = normalise([random() - 0.5, random() - 0.5, (random() - 0.5) * 0.8]);
    if (Math.abs(away[2]) > 0.99) continue;
    near(viewerAxes(lookingAlong(start, upright, away), upright).away, away);
  }
});

test("moving the picture carries the target's plane with the pointer; coming nearer halves the distance", () => {
  const moved = shifted(start, upright, 100, 0, 500);
  expect(distance(moved.target, start.target)).toBeCloseTo(100 * mmPerPixel(start, 500), 9);
  expect(
    dot([moved.target[0] - start.target[0], moved.target[1] - start.target[1], 0], viewerAxes(start, upright).right),
  ).toBeLessThan(0);
  expect(approached(start, 2).distanceMm).toBeCloseTo(start.distanceMm / 2, 9);
});

test("a place is looked at from its own side of the valve, a little from above, and not from farther away", () => {
  const centre = pointMm(1, 2, 3);
  const random = seeded(21);
  for (let k = 0; k < 40; k++) {
    const angle = random() * 2 * Math.PI;
    const place = pointMm(1 + 8 * Math.cos(angle), 2 + 8 * Math.sin(angle), 3 + 10 * random());
    const seen = facing(turned(start, random() * 360, 0), upright, place, centre, 5);
    expect(seen.target).toEqual(place);
    expect(mmPerPixel(seen, 100) * 100).toBeCloseTo(5, 6);
    const { eye, away } = viewerAxes(seen, upright);
    // The eye stands farther out in the direction of the place, and above it.
    const outwards: Vec3 = [Math.cos(angle), Math.sin(angle), 0];
    expect(dot(away, outwards)).toBeLessThan(-0.95);
    expect(eye[2]).toBeGreaterThan(place[2]);
  }
  const close = approached(start, 50);
  expect(facing(close, upright, pointMm(9, 2, 3), centre, 500).distanceMm).toBe(close.distanceMm);
  // On the axis there is no side: the direction stays.
  expect(facing(start, upright, pointMm(1, 2, 9), centre, 5)).toMatchObject({ turnDeg: start.turnDeg, tiltDeg: start.tiltDeg });
});
