import { describe, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { planeRidge, ridgeAtPlace } from "#shared/tracing/own-string/plane-ridge.ts";
import { type StraightVolume, smoothAlong, straighten } from "#shared/tracing/own-string/straight-volume.ts";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { createSampler } from "#shared/tracing/sampler.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { curve, seeded } from "#test/shared/tracing/tube-phantom.ts";

const HALF = 4;
const SIDE = 2 * HALF + 1;

/** A volume of one value per place of the plane, the same in every plane. */
function planes(count: number, at: (u: number, v: number, plane: number) => number, half = HALF): StraightVolume {
  const side = 2 * half + 1;
  const values = new Float64Array(count * side * side);
  for (let i = 0; i < count; i++)
    for (let v = -half; v <= half; v++)
      for (let u = -half; u <= half; u++) values[(i * side + v + half) * side + u + half] = at(u, v, i);
  return { count, half, stepMm: 1, values, u: new Float64Array(3 * count), v: new Float64Array(3 * count) };
}

describe("grey values straightened along a curve", () => {
  const spacing = [0.04, 0.05, 0.1] as const;
  const size = [60, 50, 30] as const;
  // Linear in place, which interpolation between voxels gives back exactly.
  const field = ([x, y, z]: Vec3) => 3 * x - 2 * y + 5 * z + 7;
  const voxels = new Float32Array(size[0] * size[1] * size[2]);
  for (let z = 0, o = 0; z < size[2]; z++)
    for (let y = 0; y < size[1]; y++)
      for (let x = 0; x < size[0]; x++, o++) voxels[o] = field([x * spacing[0], y * spacing[1], z * spacing[2]]);
  const pyramid = memoryPyramid(plainGrid(size, spacing), voxels);
  const helix = curve((t): Vec3 => [1.2 + 0.5 * Math.cos(4 * t), 1.2 + 0.5 * Math.sin(4 * t), 0.8 + t], 40);
  const points = Float64Array.from(helix.flat());

  it("are those of the places that the axes name, also on anisotropic voxels; dark strings are turned bright", () => {
    for (const sign of [1, -1] as const) {
      const made = straighten(createSampler(pyramid), points, 0.05, HALF, sign);
      expect(made.count).toBe(helix.length);
      for (let i = 0; i < made.count; i++)
        for (const [u, v] of [
          [0, 0],
          [3, -2],
          [-4, 4],
        ] as const) {
          const at = [0, 1, 2].map(
            (c) => points[3 * i + c]! + 0.05 * (u * made.u[3 * i + c]! + v * made.v[3 * i + c]!),
          ) as unknown as Vec3;
          expect(made.values[(i * SIDE + v + HALF) * SIDE + u + HALF]! * sign).toBeCloseTo(field(at), 3);
        }
    }
  });

  it("have axes of unit length across the curve that do not turn about it", () => {
    const { u, v, count } = straighten(createSampler(pyramid), points, 0.05, HALF, 1);
    const dot = (a: Float64Array, i: number, b: Float64Array, j: number) =>
      a[3 * i]! * b[3 * j]! + a[3 * i + 1]! * b[3 * j + 1]! + a[3 * i + 2]! * b[3 * j + 2]!;
    for (let i = 0; i < count; i++) {
      expect(dot(u, i, u, i)).toBeCloseTo(1, 9);
      expect(dot(v, i, v, i)).toBeCloseTo(1, 9);
      expect(dot(u, i, v, i)).toBeCloseTo(0, 9);
      // The tangent turns by 0.08 a point; axes carried along turn no more than that, and about the curve not at all.
      if (i > 1 && i < count - 1) {
        expect(dot(u, i, u, i - 1)).toBeGreaterThan(Math.cos(0.12));
        expect(Math.abs(dot(u, i, v, i - 1))).toBeLessThan(0.01);
      }
    }
  });

  it("keep what is even along the curve when they are smoothed along it, and lose noise as a Gaussian mean does", () => {
    const even = planes(30, (u, v) => 2 * u + v * v);
    smoothAlong(even, 2.5).values.forEach((value, o) => {
      expect(value).toBeCloseTo(even.values[o]!, 9);
    });
    const random = seeded(3);
    const noisy = planes(400, () => random() - 0.5);
    const spread = (values: Float64Array) => Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
    // A Gaussian mean of white noise leaves 1 / sqrt(2 sigma sqrt(pi)) of its deviation.
    expect(spread(smoothAlong(noisy, 2.5).values) / spread(noisy.values)).toBeCloseTo(1 / Math.sqrt(5 * Math.sqrt(Math.PI)), 2);
  });
});

describe("the ridge across a straightened string", () => {
  const gauss = (radius2: number, s: number) => Math.exp(-radius2 / (2 * s * s));

  it("is at a Gaussian string's axis what the closed form says", () => {
    // exp(-rho^2 / (2 s^2)) smoothed at sigma: both curvatures s^2 / (s^2 + sigma^2)^2 (derivation).
    const half = 12;
    const made = planes(1, (u, v) => gauss(u * u + v * v, 2), half);
    for (const sigma of [1.1, 1.6, 2.26]) {
      const axis = planeRidge(made, sigma)[half * (2 * half + 1) + half]!;
      const expected = (sigma * sigma * 4) / (4 + sigma * sigma) ** 2;
      expect(axis / expected).toBeGreaterThan(0.98);
      expect(axis / expected).toBeLessThan(1.02);
      const single = ridgeAtPlace(made, 0, half * (2 * half + 1) + half, gaussianKernels(sigma));
      expect(sigma * sigma * single).toBeCloseTo(axis, 9);
    }
  });

  it("turns, mirrors and scales with the planes, and is nothing on sheets, slopes and in hollows", () => {
    const random = seeded(8);
    const made = planes(3, (u, v) => gauss((u - 1) ** 2 + (v + 0.5) ** 2, 1.5) + 0.1 * random());
    const plain = planeRidge(made, 1.1);
    const turned = planes(3, (u, v, i) => made.values[(i * SIDE + HALF - u) * SIDE + v + HALF]!);
    const mirrored = planes(3, (u, v, i) => 40 + 3 * made.values[(i * SIDE + v + HALF) * SIDE + HALF - u]!);
    const a = planeRidge(turned, 1.1);
    const b = planeRidge(mirrored, 1.1);
    for (let i = 0; i < 3; i++)
      for (let v = -HALF; v <= HALF; v++)
        for (let u = -HALF; u <= HALF; u++) {
          const o = (i * SIDE + v + HALF) * SIDE + u + HALF;
          expect(a[o]).toBeCloseTo(plain[(i * SIDE + HALF - u) * SIDE + v + HALF]!, 9);
          expect(b[o]! / 3).toBeCloseTo(plain[(i * SIDE + v + HALF) * SIDE + HALF - u]!, 9);
        }
    const half = 12;
    for (const flat of [
      (u: number) => gauss(u * u, 1.5),
      (u: number, v: number) => 2 * u - v,
      (u: number, v: number) => u * u + v * v,
    ]) {
      const seen = planeRidge(planes(1, flat, half), 1.1);
      // Away from the sides, beyond which values are repeated.
      for (let v = -5; v <= 5; v++)
        for (let u = -5; u <= 5; u++) expect(seen[(v + half) * (2 * half + 1) + u + half]).toBeLessThan(1e-6);
    }
  });
});
