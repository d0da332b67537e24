import { describe, expect, test } from "vitest";
import { pointMm, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { bricksOf } from "#shared/volume/bricks.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { framesAlong } from "#shared/volume/section/moving-frames.ts";
import { film, strip } from "#shared/volume/strip.ts";

const grid: VolumeGrid = {
  size: sizeXyz(120, 110, 70),
  spacing: spacingMm(0.04, 0.04, 0.08),
  origin: pointMm(-2, -2, -1),
  direction: [0, -1, 0, 1, 0, 0, 0, 0, 1],
  frame: "LPS",
};

/** A helix about the z axis, radius 1 mm, rising 0.6 mm a turn: an analytic curve of constant curvature and torsion. */
const turn = 0.6 / (2 * Math.PI);
const helix = (t: number): Vec3 => [-3 + Math.cos(t), 1 + Math.sin(t), 0 + turn * t];
const flat = (from: number, to: number, steps: number) =>
  Array.from({ length: steps + 1 }, (_, n) => [...helix(from + ((to - from) * n) / steps)]).flat();

/** A volume whose values depend on the place alone. */
function filled(valueAt: (p: Vec3) => number) {
  const [nx, ny, nz] = grid.size;
  const voxels = new Float32Array(nx * ny * nz);
  for (let z = 0; z < nz; z++)
    for (let y = 0; y < ny; y++) for (let x = 0; x < nx; x++) voxels[(z * ny + y) * nx + x] = valueAt(indexToMm(grid, [x, y, z]));
  return bricksOf(memoryPyramid(grid, voxels));
}

const shown = { ticket: { window: "w", lane: "space", number: 1 }, specimen: "s" } as const;

describe("Frames along a curve", () => {
  test("are at right angles, follow the direction, and do not turn about it on a plane curve", () => {
    const circle: Vec3[] = Array.from({ length: 721 }, (_, n) => [Math.cos(n / 200), Math.sin(n / 200), 0]);
    const frames = framesAlong(
      circle,
      Array.from({ length: 300 }, (_, n) => n / 100),
      0.02,
    );
    for (const { tangent, across, other } of frames) {
      const dots = [tangent, across, other].flatMap((a) =>
        [tangent, across, other].map((b) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2]),
      );
      [1, 0, 0, 0, 1, 0, 0, 0, 1].forEach((value, n) => {
        expect(dots[n]).toBeCloseTo(value, 9);
      });
      // On a plane curve the angle with the plane's normal stays as it was at the start.
      expect(other[2]).toBeCloseTo(frames[0]!.other[2], 6);
    }
  });

  test("turn on a helix by its torsion alone: the angle against the principal normal grows by torsion times length", () => {
    // Source: differential geometry, rotation-minimising frames turn against the Frenet frame by the integral of the torsion;
    // a helix of radius a and pitch 2 pi b has torsion b / (a^2 + b^2).
    const points = Array.from({ length: 20001 }, (_, n) => helix((6 * Math.PI * n) / 20000));
    const length = 6 * Math.PI * Math.hypot(1, turn);
    const frames = framesAlong(
      points,
      Array.from({ length: 4001 }, (_, n) => length * (0.001 + (0.998 * n) / 4000)),
      0.002,
    );
    const angleOf = (n: number) => {
      const t = 6 * Math.PI * (0.001 + (0.998 * n) / 4000);
      const inward: Vec3 = [-Math.cos(t), -Math.sin(t), 0];
      const { across, other } = frames[n]!;
      const along = (v: Vec3) => v[0] * inward[0] + v[1] * inward[1] + v[2] * inward[2];
      return Math.atan2(along(other), along(across));
    };
    const turned = angleOf(4000) - angleOf(0);
    const expected = (turn / (1 + turn * turn)) * 0.998 * length;
    const difference = Math.abs(((((turned - expected + Math.PI) % (2 * Math.PI)) + 2 * Math.PI) % (2 * Math.PI)) - Math.PI);
    expect(difference).toBeLessThan(0.01);
  });
});

describe("A strip", () => {
  test("lays a winding tube straight: bright in the middle columns, dark beside them, in every row", () => {
    const centre = Array.from({ length: 4000 }, (_, n) => helix(-1 + (9 * n) / 4000));
    const tube = filled((p) => {
      let nearest = Number.POSITIVE_INFINITY;
      // Every tenth point: 2 micrometres apart are not needed to fill voxels of 40.
      for (let n = 0; n < centre.length; n += 10) {
        const c = centre[n]!;
        nearest = Math.min(nearest, (p[0] - c[0]) ** 2 + (p[1] - c[1]) ** 2 + (p[2] - c[2]) ** 2);
      }
      return Math.sqrt(nearest) < 0.16 ? 200 : 20;
    });
    const points = flat(0, 7, 400);
    const { header, body } = strip(tube, {
      ...shown,
      points,
      width: 41,
      height: 120,
      halfWidthMm: 0.5,
      turn: 30,
      low: 0,
      high: 255,
    });
    expect(header).toMatchObject({ width: 41, height: 120, dtype: "uint8" });
    expect(header.lengthMm).toBeCloseTo(7 * Math.hypot(1, turn), 2);
    for (let row = 0; row < 120; row++) {
      expect(body[row * 41 + 20]).toBeGreaterThan(190);
      // 0.34 mm to each side: outside the tube of 0.16 mm, inside the next winding 0.6 mm farther.
      expect(body[row * 41 + 6]).toBeLessThan(60);
      expect(body[row * 41 + 34]).toBeLessThan(60);
    }
  });

  test("begins at the bottom: the values of a ramp along z rise from the last row to the first", () => {
    const ramp = filled((p) => 100 * (p[2] + 1));
    const points = [-3.5, 0.5, -0.5, -3.5, 0.5, 1.5];
    const { body } = strip(ramp, { ...shown, points, width: 3, height: 50, halfWidthMm: 0.1, turn: 0, low: 0, high: 255 });
    for (let row = 0; row < 50; row++) {
      // Row centres: 2 mm of length in 50 rows of 0.04 mm from the bottom.
      const z = -0.5 + (50 - 1 - row + 0.5) * 0.04;
      expect(Math.abs(body[row * 3 + 1]! - 100 * (z + 1))).toBeLessThanOrEqual(0.51);
    }
  });
});

describe("A film", () => {
  test("shows the tube in the middle of each section, at equal steps with both ends", () => {
    const line = filled((p) => (Math.hypot(p[1] - 0.5, p[2] - 0.5) < 0.2 ? 250 : 10));
    const points = [-4, 0.5, 0.5, -3, 0.5, 0.5];
    const { header, body } = film(line, { ...shown, points, count: 5, side: 31, halfWidthMm: 0.5, low: 0, high: 255 });
    header.at.forEach((s, n) => {
      expect(s).toBeCloseTo(n / 4, 9);
    });
    expect(body.length).toBe(5 * 31 * 31);
    for (let n = 0; n < 5; n++) {
      const at = (i: number, j: number) => body[(n * 31 + j) * 31 + i]!;
      expect(at(15, 15)).toBe(250);
      // 0.2 mm are 6.2 pixels; corners and edges of the section lie outside.
      for (const [i, j] of [
        [0, 15],
        [30, 15],
        [15, 0],
        [15, 30],
        [0, 0],
        [30, 30],
      ] as const)
        expect(at(i, j)).toBe(10);
    }
  });

  test("and the strip agree on which way is across: a section's middle row is the strip's row there", () => {
    const slanted = filled((p) => 40 * (p[0] + 4.5) + 60 * (p[2] + 1));
    const points = flat(0.5, 4.5, 300);
    const length = 4 * Math.hypot(1, turn);
    const frames = film(slanted, { ...shown, points, count: 3, side: 41, halfWidthMm: 0.4, low: 0, high: 255 });
    const rows = 401;
    const laid = strip(slanted, { ...shown, points, width: 41, height: rows, halfWidthMm: 0.4, turn: 0, low: 0, high: 255 });
    expect(laid.header.lengthMm).toBeCloseTo(length, 2);
    const row = rows - 1 - Math.round(0.5 * rows - 0.5);
    for (let i = 0; i < 41; i++) {
      expect(Math.abs(frames.body[(41 + 20) * 41 + i]! - laid.body[row * 41 + i]!)).toBeLessThanOrEqual(3);
    }
  });
});
