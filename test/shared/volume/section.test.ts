import { describe, expect, test } from "vitest";
import type { PlaneMm, SectionRequest } from "#shared/api/engine.ts";
import { isTautlineError } from "#shared/errors.ts";
import { type Matrix3, pointMm, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { bricksOf } from "#shared/volume/bricks.ts";
import { createStored, type StoredDtype } from "#shared/volume/dtype.ts";
import { indexToMm, mmToIndex, type VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { section } from "#shared/volume/section.ts";
import { seeded } from "#test/main/engine/write-store.ts";

// The reference: one voxel at a time, straight from the definitions (trilinear interpolation; a voxel reaches half a spacing
// to each side of its centre; outside is 0), written for these tests and sharing nothing with the kernel but the frame maths.

type Request = Omit<SectionRequest, "ticket" | "specimen">;

function slowSection(grid: VolumeGrid, voxels: ArrayLike<number>, size: Vec3, factor: Vec3, request: Request, samples: number) {
  const { plane, slabMm, slabMode, low, high } = request;
  const normal = unit(crossed(plane.u, plane.v));
  const out: number[] = [];
  for (let j = 0; j < plane.height; j++)
    for (let i = 0; i < plane.width; i++) {
      const values: number[] = [];
      for (let k = 0; k < samples; k++) {
        const depth = samples === 1 ? 0 : -slabMm / 2 + (slabMm * k) / (samples - 1);
        const p = [0, 1, 2].map(
          (c) => plane.origin[c]! + (i + 0.5) * plane.u[c]! + (j + 0.5) * plane.v[c]! + depth * normal[c]!,
        ) as [number, number, number];
        const whole = mmToIndex(grid, p);
        if (whole.some((value, c) => value < -0.5 || value > grid.size[c]! - 0.5)) continue;
        values.push(
          slowTrilinear(voxels, size, whole.map((value, c) => (value + 0.5) / factor[c]! - 0.5) as [number, number, number]),
        );
      }
      if (values.length === 0) {
        out.push(0);
        continue;
      }
      const value = slabMode === "max" ? Math.max(...values) : values.reduce((a, b) => a + b, 0) / values.length;
      out.push(Math.min(255, Math.max(0, Math.round(((value - low) / (high - low)) * 255))));
    }
  return out;
}

function slowTrilinear(voxels: ArrayLike<number>, size: Vec3, at: Vec3): number {
  const p = at.map((value, c) => Math.min(Math.max(value, 0), size[c]! - 1));
  let sum = 0;
  for (let corner = 0; corner < 8; corner++) {
    let weight = 1;
    const index = [0, 0, 0];
    for (let c = 0; c < 3; c++) {
      const base = Math.floor(p[c]!);
      const up = (corner >> c) & 1;
      weight *= up ? p[c]! - base : 1 - (p[c]! - base);
      index[c] = Math.min(base + up, size[c]! - 1);
    }
    if (weight > 0) sum += weight * voxels[(index[2]! * size[1] + index[1]!) * size[0] + index[0]!]!;
  }
  return sum;
}

function crossed(a: Vec3, b: Vec3): Vec3 {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}
function unit(a: Vec3): Vec3 {
  const n = Math.hypot(...a);
  return [a[0] / n, a[1] / n, a[2] / n];
}

/** A rotation by three angles, row-major. */
function rotation(a: number, b: number, c: number): Matrix3 {
  const [ca, sa, cb, sb, cc, sc] = [Math.cos(a), Math.sin(a), Math.cos(b), Math.sin(b), Math.cos(c), Math.sin(c)];
  return [
    cb * cc,
    sa * sb * cc - ca * sc,
    ca * sb * cc + sa * sc,
    cb * sc,
    sa * sb * sc + ca * cc,
    ca * sb * sc - sa * cc,
    -sb,
    sa * cb,
    ca * cb,
  ];
}

/** A plane through the middle of the grid, turned by a rotation. */
function planeThrough(grid: VolumeGrid, turn: Matrix3, pixel: number, width: number, height: number): PlaneMm {
  const middle = indexToMm(grid, [(grid.size[0] - 1) / 2, (grid.size[1] - 1) / 2, (grid.size[2] - 1) / 2]);
  const u: Vec3 = [turn[0] * pixel, turn[3] * pixel, turn[6] * pixel];
  const v: Vec3 = [turn[1] * pixel, turn[4] * pixel, turn[7] * pixel];
  const corner = [0, 1, 2].map((c) => middle[c]! - (width / 2) * u[c]! - (height / 2) * v[c]!);
  return { origin: pointMm(corner[0]!, corner[1]!, corner[2]!), u, v, width, height };
}

const still = { slabMm: 0, slabMode: "max", quality: "still", low: 0, high: 1000 } as const;

describe("A section", () => {
  const random = seeded(20260101);
  const turned: VolumeGrid = {
    size: sizeXyz(70, 45, 83),
    spacing: spacingMm(0.03, 0.05, 0.04),
    origin: pointMm(-3, 11, 0.5),
    direction: rotation(0.4, -0.8, 1.9),
    frame: "LPS",
  };
  const noise = (dtype: StoredDtype, count: number) => {
    const voxels = createStored(dtype, count);
    for (let n = 0; n < count; n++)
      voxels[n] = Math.floor(random() * (dtype === "uint8" ? 256 : 1000)) - (dtype === "int16" ? 300 : 0);
    return voxels;
  };

  for (const dtype of ["uint8", "uint16", "int16", "float32"] as const)
    for (const [slabMm, slabMode] of [
      [0, "max"],
      [0.31, "max"],
      [0.31, "mean"],
    ] as const)
      test(`of ${dtype} noise on a turned, anisotropic grid equals the slow reference (slab ${slabMm} mm, ${slabMode})`, () => {
        const voxels = noise(dtype, 70 * 45 * 83);
        const pyramid = memoryPyramid(turned, voxels);
        const high = dtype === "uint8" ? 255 : 900;
        // Wider than the scan, so that all its edges are crossed. At most two thirds of the slab's bricks are held at once.
        const request: Request = {
          ...still,
          high,
          slabMm,
          slabMode,
          plane: planeThrough(turned, rotation(1.1, 0.3, -0.7), 0.042, 118, 103),
        };
        const found = section(bricksOf(pyramid, 12), request);
        const samples = slabMm === 0 ? 1 : 2 * Math.ceil(slabMm / 0.03) + 1;
        const expected = slowSection(turned, voxels, turned.size, [1, 1, 1], request, samples);
        expect(found.header).toMatchObject({ width: 118, height: 103, level: 0, dtype: "uint8" });
        let differing = 0;
        expected.forEach((value, n) => {
          // The last bit of a sum may round the other way just at a half.
          const off = Math.abs(value - found.body[n]!);
          expect(off).toBeLessThanOrEqual(1);
          if (off === 1) differing++;
        });
        expect(differing).toBeLessThan(5);
        expect(expected.filter((value) => value > 0).length).toBeGreaterThan(2000);
        expect(expected.filter((value) => value === 0).length).toBeGreaterThan(1000);
      });

  test("at 60 random angles, pixel sizes and slabs equals the slow reference (seed 77)", () => {
    const voxels = noise("uint16", 70 * 45 * 83);
    const pyramid = memoryPyramid(turned, voxels);
    const draw = seeded(77);
    for (let round = 0; round < 60; round++) {
      const pixel = 0.004 + 0.05 * draw();
      const slabMm = round % 3 === 0 ? 0.5 * draw() : 0;
      const plane = planeThrough(turned, rotation(7 * draw(), 7 * draw(), 7 * draw()), pixel, 30 + Math.floor(150 * draw()), 9);
      const shifted = {
        ...plane,
        origin: pointMm(plane.origin[0] + draw() - 0.5, plane.origin[1] + draw() - 0.5, plane.origin[2] + draw() - 0.5),
      };
      const request: Request = { ...still, slabMm, slabMode: round % 2 === 0 ? "max" : "mean", plane: shifted };
      const samples = 2 * Math.ceil(slabMm / 0.03 - 1e-9) + 1;
      const expected = slowSection(turned, voxels, turned.size, [1, 1, 1], request, samples);
      const { header, body } = section(bricksOf(pyramid, round % 2 === 0 ? 9 : 512), request);
      expect(header.level).toBe(0);
      expected.forEach((value, n) => {
        expect(Math.abs(value - body[n]!)).toBeLessThanOrEqual(1);
      });
    }
  });

  test("from a coarser level equals the slow reference on that level's voxels, also at the odd far edge", () => {
    const grid: VolumeGrid = { ...turned, size: sizeXyz(129, 70, 67), spacing: spacingMm(0.04, 0.04, 0.04) };
    const pyramid = memoryPyramid(grid, noise("uint16", 129 * 70 * 67));
    const plane = planeThrough(grid, rotation(0.2, 0.5, 0.9), 0.08, 90, 90);
    const found = section(bricksOf(pyramid), { ...still, plane });
    expect(found.header.level).toBe(1);
    const level = pyramid.levels[1]!;
    const expected = slowSection(grid, pyramid.arrays[1]!, level.size, level.factor, { ...still, plane }, 1);
    expected.forEach((value, n) => {
      expect(Math.abs(value - found.body[n]!)).toBeLessThanOrEqual(1);
    });
  });

  test("of a linear ramp gives the ramp itself, exactly up to rounding, at every angle", () => {
    const grid: VolumeGrid = { ...turned, size: sizeXyz(64, 60, 40) };
    const ramp = (x: number, y: number, z: number) => 20 + 1.25 * x + 0.75 * y + 0.5 * z;
    const voxels = new Float32Array(64 * 60 * 40);
    for (let z = 0; z < 40; z++)
      for (let y = 0; y < 60; y++) for (let x = 0; x < 64; x++) voxels[(z * 60 + y) * 64 + x] = ramp(x, y, z);
    const bricks = bricksOf(memoryPyramid(grid, voxels));
    for (let turn = 0; turn < 12; turn++) {
      const plane = planeThrough(grid, rotation(random() * 6, random() * 6, random() * 6), 0.021, 40, 40);
      const { body } = section(bricks, { ...still, low: 0, high: 255, plane });
      for (let j = 0; j < 40; j++)
        for (let i = 0; i < 40; i++) {
          const p = [0, 1, 2].map((c) => plane.origin[c]! + (i + 0.5) * plane.u[c]! + (j + 0.5) * plane.v[c]!) as [
            number,
            number,
            number,
          ];
          const [x, y, z] = mmToIndex(grid, p);
          // Low 0 and high 255 show the value itself, so the grey is the ramp rounded to a whole number.
          expect(Math.abs(body[j * 40 + i]! - ramp(x, y, z))).toBeLessThanOrEqual(0.5 + 1e-6);
        }
    }
  });

  test("shows a ball as a circle although voxels are three times as long along z", () => {
    const grid: VolumeGrid = {
      ...turned,
      size: sizeXyz(90, 90, 30),
      spacing: spacingMm(0.02, 0.02, 0.06),
      direction: rotation(0, 0, 0),
    };
    const middle = indexToMm(grid, [44.5, 44.5, 14.5]);
    const voxels = new Uint8Array(90 * 90 * 30);
    for (let z = 0; z < 30; z++)
      for (let y = 0; y < 90; y++)
        for (let x = 0; x < 90; x++) {
          const p = indexToMm(grid, [x, y, z]);
          const d = Math.hypot(p[0] - middle[0], p[1] - middle[1], p[2] - middle[2]);
          voxels[(z * 90 + y) * 90 + x] = Math.round(255 * Math.min(1, Math.max(0, (0.6 - d) / 0.1 + 0.5)));
        }
    const { body } = section(bricksOf(memoryPyramid(grid, voxels)), {
      ...still,
      high: 255,
      plane: planeThrough(grid, rotation(1.2, 0.4, 0.3), 0.01, 180, 180),
    });
    for (let angle = 0; angle < 360; angle += 15) {
      const along = (r: number) => {
        const i = Math.round(89.5 + r * Math.cos((angle * Math.PI) / 180));
        const j = Math.round(89.5 + r * Math.sin((angle * Math.PI) / 180));
        return body[j * 180 + i]!;
      };
      // The radius is 0.6 mm = 60 pixels; the slope is 10 pixels wide, a voxel along z is 6.
      expect(along(50)).toBeGreaterThan(200);
      expect(along(70)).toBeLessThan(55);
    }
  });

  test("wholly beside the scan is 0 everywhere, also when background is shown bright", () => {
    const bricks = bricksOf(memoryPyramid(turned, noise("uint16", 70 * 45 * 83)));
    const plane = { ...planeThrough(turned, rotation(0, 0, 0), 0.04, 50, 50), origin: pointMm(500, 500, 500) };
    expect(section(bricks, { ...still, low: -1000, high: -900, plane }).body.every((value) => value === 0)).toBe(true);
  });

  test("of a scan one voxel thick, or one voxel in all, is read without falling off its edge", () => {
    const flat: VolumeGrid = { ...turned, size: sizeXyz(33, 40, 1), direction: rotation(0, 0, 0) };
    const voxels = noise("uint8", 33 * 40);
    const request: Request = { ...still, high: 255, plane: planeThrough(flat, rotation(0.3, 0.1, 0.2), 0.01, 120, 90) };
    const expected = slowSection(flat, voxels, flat.size, [1, 1, 1], request, 1);
    section(bricksOf(memoryPyramid(flat, voxels)), request).body.forEach((value, n) => {
      expect(Math.abs(value - expected[n]!)).toBeLessThanOrEqual(1);
    });
    const single: VolumeGrid = { ...flat, size: sizeXyz(1, 1, 1) };
    const { body } = section(bricksOf(memoryPyramid(single, Uint8Array.of(77))), {
      ...still,
      high: 255,
      plane: planeThrough(single, rotation(0, 0, 0), 0.01, 3, 3),
    });
    expect([...body]).toEqual(new Array(9).fill(77));
  });

  test("takes the nearest coarser level while moving and the sharp one when still", () => {
    const grid: VolumeGrid = { ...turned, size: sizeXyz(260, 100, 100), spacing: spacingMm(0.04, 0.04, 0.04) };
    const bricks = bricksOf(memoryPyramid(grid, new Uint8Array(260 * 100 * 100)));
    const at = (pixel: number, quality: "moving" | "still") =>
      section(bricks, { ...still, quality, plane: planeThrough(grid, rotation(0, 0, 0), pixel, 4, 4) }).header.level;
    expect([at(0.04, "still"), at(0.06, "still"), at(0.08, "still"), at(0.5, "still")]).toEqual([0, 0, 1, 2]);
    expect([at(0.04, "moving"), at(0.06, "moving"), at(0.08, "moving"), at(0.12, "moving")]).toEqual([0, 1, 1, 2]);
  });

  test("stops with `cancelled` as soon as its signal says so", () => {
    const bricks = bricksOf(memoryPyramid(turned, new Uint8Array(70 * 45 * 83)));
    let looks = 0;
    const signal = {
      get aborted() {
        looks++;
        return looks > 2;
      },
    };
    const plane = planeThrough(turned, rotation(0, 0, 0), 0.005, 500, 500);
    let error: unknown;
    try {
      section(bricks, { ...still, plane }, signal);
    } catch (thrown) {
      error = thrown;
    }
    expect(isTautlineError(error, "cancelled")).toBe(true);
    expect(looks).toBe(3);
  });
});
