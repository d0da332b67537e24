import { describe, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { type ForkArm, placeFork } from "#shared/tracing/place-fork.ts";
import { dist, line, seeded } from "#test/shared/tracing/tube-phantom.ts";

const arm = (points: readonly Vec3[], radius: number): ForkArm => ({
  points: Float64Array.from(points.flat()),
  radii: new Float64Array(points.length).fill(radius),
});

const fork: Vec3 = [2, 1, 1.5];
const straightArms = (half: number) => [
  arm(line(fork, [0, 1, 1.5]), 0.12),
  arm(line(fork, [4, 1 + 2 * Math.tan(half), 1.5]), 0.08),
  arm(line(fork, [4, 1 - 2 * Math.tan(half), 1.7]), 0.08),
];

describe("the place of a fork", () => {
  // The place is known by construction: the lines meet in it.
  it("is where straight strings meet, wherever near it the fork was put", () => {
    const random = seeded(5);
    for (const half of [0.2, 0.5, 0.9])
      for (let trial = 0; trial < 5; trial++) {
        const near: Vec3 = [2 + 0.2 * (random() - 0.5), 1 + 0.2 * (random() - 0.5), 1.5 + 0.2 * (random() - 0.5)];
        const found = placeFork(straightArms(half), near, 0.1)!;
        expect(dist(found.at, fork)).toBeLessThan(0.02);
        expect(found.radiusMm).toBeCloseTo(0.12, 6);
        expect(found.spreadMm).toBeLessThan(0.02);
      }
  });

  it("takes no notice of the merged stretch, where curves run to the place that was clicked", () => {
    const clicked: Vec3 = [2.15, 1.1, 1.45];
    const pulled = straightArms(0.4).map(({ points, radii }) => {
      const out = points.slice();
      for (let i = 0; i < radii.length; i++) {
        const away = Math.hypot(points[3 * i]! - fork[0], points[3 * i + 1]! - fork[1], points[3 * i + 2]! - fork[2]);
        const weight = Math.max(0, 1 - away / 0.2);
        for (let c = 0; c < 3; c++) out[3 * i + c] = points[3 * i + c]! + weight * (clicked[c]! - fork[c]!);
      }
      return { points: out, radii };
    });
    expect(dist(placeFork(pulled, clicked, 0.1)!.at, fork)).toBeLessThan(0.03);
  });

  it("moves with its strings when they are turned, mirrored and scaled", () => {
    const near: Vec3 = [2.05, 1.05, 1.45];
    const plain = placeFork(straightArms(0.5), near, 0.1)!;
    for (const [turn, size] of [
      [(p: Vec3): Vec3 => [-p[1], p[0], p[2]], 1],
      [(p: Vec3): Vec3 => [-p[0], p[1], p[2]], 1],
      [(p: Vec3): Vec3 => [3 * p[0], 3 * p[1], 3 * p[2]], 3],
    ] as const) {
      const arms = straightArms(0.5).map(({ points, radii }) => {
        const out = points.slice();
        for (let i = 0; i < radii.length; i++) out.set(turn([points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!]), 3 * i);
        return { points: out, radii: radii.map((radius) => size * radius) };
      });
      expect(dist(placeFork(arms, turn(near), 0.1 * size)!.at, turn(plain.at))).toBeLessThan(1e-9);
    }
  });

  it("stays near where it was put when strings are nearly parallel, and is unknown with one string", () => {
    const near: Vec3 = [2, 1, 1.5];
    const parallel = [arm(line(near, [0, 1, 1.5]), 0.1), arm(line(near, [4, 1.001, 1.5]), 0.1)];
    expect(dist(placeFork(parallel, near, 0.1)!.at, near)).toBeLessThan(0.6 + 1e-9);
    expect(placeFork(parallel.slice(1), near, 0.1)).toBeNull();
    const unknown = straightArms(0.5).map(({ points }) => ({
      points,
      radii: new Float64Array(points.length / 3).fill(Number.NaN),
    }));
    expect(placeFork(unknown, near, 0.1)!.radiusMm).toBe(0.1);
    const spot = { points: Float64Array.of(2, 1, 1.5, 2, 1, 1.5), radii: Float64Array.of(0.1, 0.1) };
    expect(placeFork([spot, spot], near, 0.1)).toBeNull();
  });
});
