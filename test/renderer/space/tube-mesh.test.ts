import { expect, test } from "vitest";
import { tubeMesh } from "#renderer/space/tube-mesh.ts";

const straight = {
  points: [0, 0, 0, 0, 0, 1, 0, 0, 2, 0, 0, 3],
  radii: [0.5, 0.5, 0.5, 0.5],
  colour: [1, 0.5, 0] as const,
  dashMm: [],
};

test("every vertex of a straight tube lies at its radius, with a unit normal that points outwards", () => {
  const mesh = tubeMesh([straight], 0.1, 0.1);
  expect(mesh.positions.length).toBe(4 * 8 * 3);
  for (let i = 0; i < mesh.positions.length; i += 3) {
    expect(Math.hypot(mesh.positions[i]!, mesh.positions[i + 1]!)).toBeCloseTo(0.5, 6);
    expect(Math.hypot(mesh.normals[i]!, mesh.normals[i + 1]!, mesh.normals[i + 2]!)).toBeCloseTo(1, 6);
    expect(mesh.positions[i]! * mesh.normals[i]! + mesh.positions[i + 1]! * mesh.normals[i + 1]!).toBeCloseTo(0.5, 6);
  }
  expect(Math.max(...mesh.indices)).toBe(mesh.positions.length / 3 - 1);
});

// A closed prism of 8 sides has the area 8 * 2 r sin(22.5 deg) * length.
test("the mesh has the area of an eight-sided prism", () => {
  const mesh = tubeMesh([straight], 0.1, 0.1);
  let area = 0;
  const corner = (k: number) => [0, 1, 2].map((axis) => mesh.positions[3 * mesh.indices[k]! + axis]!);
  for (let k = 0; k < mesh.indices.length; k += 3) {
    const [a, b, c] = [corner(k), corner(k + 1), corner(k + 2)];
    const u = a!.map((v, i) => b![i]! - v);
    const w = a!.map((v, i) => c![i]! - v);
    area += Math.hypot(u[1]! * w[2]! - u[2]! * w[1]!, u[2]! * w[0]! - u[0]! * w[2]!, u[0]! * w[1]! - u[1]! * w[0]!) / 2;
  }
  expect(area).toBeCloseTo(8 * 2 * 0.5 * Math.sin(Math.PI / 8) * 3, 5);
});

test("missing and too small radii are drawn at the least width; close points are thinned out but the ends stay", () => {
  const mesh = tubeMesh([{ ...straight, radii: [Number.NaN, 0.01] }], 0.2, 5);
  expect(mesh.positions.length).toBe(2 * 8 * 3);
  expect(Math.hypot(mesh.positions[0]!, mesh.positions[1]!)).toBeCloseTo(0.2, 6);
  expect(mesh.positions[mesh.positions.length - 1]).toBeCloseTo(3, 6);
});

test("a line pattern makes dark bands and leaves no hole", () => {
  const mesh = tubeMesh([{ ...straight, dashMm: [1, 0.5] }], 0.1, 0.1);
  const dark = [...mesh.colours].filter((_, i) => i % 3 === 0 && mesh.colours[i]! < 0.5);
  expect(dark.length).toBeGreaterThan(0);
  const heights = [...mesh.positions].filter((_, i) => i % 3 === 2);
  for (const z of [0, 1, 1.5, 2.5, 3])
    expect(
      heights.some((h) => Math.abs(h - z) < 1e-6),
      `ring at ${z}`,
    ).toBe(true);
});

test("a strand of one point or none makes nothing", () => {
  expect(
    tubeMesh(
      [
        { ...straight, points: [1, 2, 3] },
        { ...straight, points: [] },
      ],
      0.1,
      0.1,
    ).indices.length,
  ).toBe(0);
});
