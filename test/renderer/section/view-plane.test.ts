import { expect, test } from "vitest";
import {
  awayFrom,
  fromPane,
  panned,
  requestPlane,
  stepped,
  toPane,
  type ViewPlane,
  zoomed,
} from "#renderer/section/view-plane.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { cross, distance, dot, normalise, perpendicularFrame } from "#shared/geometry/vec3.ts";
import { seeded } from "#test/shared/trees/seeded-random.ts";

const size = { width: 900, height: 700, ratio: 2 };

function somePlane(random: () => number): ViewPlane {
  const away = normalise([random() - 0.5, random() - 0.5, random() - 0.5]);
  const [right] = perpendicularFrame(away);
  return {
    centre: pointMm(random() * 20, random() * 20, random() * 20),
    right,
    down: cross(away, right),
    mmPerPx: 0.01 + random() * 0.1,
  };
}

const close = (a: Vec3, b: Vec3) => expect(distance(a, b)).toBeLessThan(1e-9);

test("a place on the plane comes back from its pixel, and depth is measured away from the viewer", () => {
  const random = seeded(1);
  for (let k = 0; k < 50; k++) {
    const plane = somePlane(random);
    const x = random() * size.width;
    const y = random() * size.height;
    const seen = toPane(plane, size, fromPane(plane, size, x, y));
    expect(seen.x).toBeCloseTo(x, 8);
    expect(seen.y).toBeCloseTo(y, 8);
    expect(seen.depthMm).toBeCloseTo(0, 9);
    const behind = stepped(plane, 1.5).centre;
    expect(toPane(plane, size, behind).depthMm).toBeCloseTo(1.5, 9);
  }
});

test("the plane asked of the engine covers the pane exactly, pixel centres half a pixel in", () => {
  const random = seeded(2);
  for (const share of [1, 0.5]) {
    const plane = somePlane(random);
    const asked = requestPlane(plane, size, share);
    expect([asked.width, asked.height]).toEqual([1800 * share, 1400 * share]);
    // The contract: the centre of pixel (i, j) lies at origin + (i + 0.5) u + (j + 0.5) v.
    const centreOf = (i: number, j: number): Vec3 =>
      [0, 1, 2].map((k) => asked.origin[k]! + (i + 0.5) * asked.u[k]! + (j + 0.5) * asked.v[k]!) as unknown as Vec3;
    const pixel = 0.5 / share / size.ratio;
    close(centreOf(0, 0), fromPane(plane, size, pixel, pixel));
    close(centreOf(asked.width - 1, asked.height - 1), fromPane(plane, size, size.width - pixel, size.height - pixel));
  }
});

test("the pane never shows a mirror image: right, down and away are right-handed", () => {
  const random = seeded(3);
  for (let k = 0; k < 20; k++) {
    const plane = somePlane(random);
    expect(dot(cross(plane.right, plane.down), awayFrom(plane))).toBeCloseTo(1, 9);
    const asked = requestPlane(plane, size, 1);
    expect(dot(normalise(cross(asked.u, asked.v)), awayFrom(plane))).toBeCloseTo(1, 9);
  }
});

test("zooming keeps the place under the pointer, also at the limits", () => {
  const random = seeded(4);
  for (const factor of [1.5, 0.3, 1e6, 1e-6]) {
    const plane = somePlane(random);
    const at = fromPane(plane, size, 120, 610);
    const seen = toPane(zoomed(plane, factor, at), size, at);
    expect(seen.x).toBeCloseTo(120, 6);
    expect(seen.y).toBeCloseTo(610, 6);
  }
});

test("dragging the picture carries the place along with the pointer", () => {
  const plane = somePlane(seeded(5));
  const at = fromPane(plane, size, 300, 200);
  const seen = toPane(panned(plane, 40, -25), size, at);
  expect(seen.x).toBeCloseTo(340, 8);
  expect(seen.y).toBeCloseTo(175, 8);
});
