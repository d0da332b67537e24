import { describe, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { ownStringPath } from "#shared/tracing/own-string/own-string-path.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { curve, distanceToPolyline, drawTubes, type Phantom } from "#test/shared/tracing/tube-phantom.ts";

const S = 0.04;
const SIZE = [88, 48, 40] as const;
const ON = { aborted: false };
const bow = curve((t): Vec3 => [0.3 + 2.9 * t, 0.6 + 0.4 * Math.sin(Math.PI * t), 0.7], 120);
const apart = 4 * S;
const beside = bow.map((p, i): Vec3 => {
  const [a, b] = [bow[Math.max(0, i - 1)]!, bow[Math.min(120, i + 1)]!];
  const length = Math.hypot(b[0] - a[0], b[1] - a[1]);
  return [p[0] - (apart * (b[1] - a[1])) / length, p[1] + (apart * (b[0] - a[0])) / length, p[2]];
});
const phantom = drawTubes(
  SIZE,
  [S, S, S],
  [bow, beside].map((points) => ({ points, radius: () => 2 * S })),
  { fwhmMm: 0.07, noise: 0.2, seed: 51 },
);
// From node to node of the outer string, but over the inner one between them: the shortcut that minimal paths take.
const shortcut = Float64Array.from(
  beside.flatMap((p, i): Vec3 => {
    const t = Math.min(1, Math.max(0, (Math.min(i, 120 - i) - 8) / 8));
    return [p[0] + t * (bow[i]![0] - p[0]), p[1] + t * (bow[i]![1] - p[1]), p[2]];
  }),
);

function ownOf(made: Phantom, path: Float64Array, caches = {}) {
  return ownStringPath(createTraceContext(memoryPyramid(made.grid, made.voxels), "bright", caches), path, ON);
}

describe("the way along one's own string", () => {
  const found = ownOf(phantom, shortcut)!;

  it("leaves the neighbour that a shortcut took, and ends where it did", () => {
    const n = found.radii.length;
    for (let i = 0; i < n; i++) {
      const p: Vec3 = [found.points[3 * i]!, found.points[3 * i + 1]!, found.points[3 * i + 2]!];
      expect(distanceToPolyline(p, beside)).toBeLessThan(1.5 * S);
    }
    expect([...found.points.slice(0, 3)]).toEqual([...shortcut.slice(0, 3)]);
    expect([...found.points.slice(-3)]).toEqual([...shortcut.slice(-3)]);
    // The radius is one string's, not that of both.
    const radii = [...found.radii].sort((a, b) => a - b);
    expect(radii[n >> 1]!).toBeGreaterThan(1 * S);
    expect(radii[n >> 1]!).toBeLessThan(3 * S);
  });

  it("is the same numbers with tiny caches", () => {
    expect(ownOf(phantom, shortcut, { ridgeTiles: 8, bricks: 2 })).toEqual(found);
  });

  it("turns by 90 degrees and mirrors with the scan", () => {
    const [nx, ny, nz] = SIZE;
    for (const [grid, place, move] of [
      [plainGrid([ny, nx, nz], [S, S, S]), (x: number, y: number, z: number) => (z * nx + x) * ny + (ny - 1 - y), 0],
      [phantom.grid, (x: number, y: number, z: number) => (z * ny + y) * nx + (nx - 1 - x), 1],
    ] as const) {
      const voxels = new Float32Array(phantom.voxels.length);
      for (let z = 0, o = 0; z < nz; z++)
        for (let y = 0; y < ny; y++) for (let x = 0; x < nx; x++, o++) voxels[place(x, y, z)] = phantom.voxels[o]!;
      const turn = (p: Vec3): Vec3 => (move === 0 ? [(ny - 1) * S - p[1], p[0], p[2]] : [(nx - 1) * S - p[0], p[1], p[2]]);
      const path = new Float64Array(shortcut.length);
      for (let i = 0; i < path.length; i += 3) path.set(turn([shortcut[i]!, shortcut[i + 1]!, shortcut[i + 2]!]), i);
      const other = ownOf({ grid, voxels }, path)!;
      const line = Array.from({ length: found.radii.length }, (_, i) =>
        turn([found.points[3 * i]!, found.points[3 * i + 1]!, found.points[3 * i + 2]!]),
      );
      // The planes' axes begin elsewhere, so that the samples lie between those of before: within half a sample.
      for (let i = 0; i < other.points.length; i += 3)
        expect(distanceToPolyline([other.points[i]!, other.points[i + 1]!, other.points[i + 2]!], line)).toBeLessThan(0.75 * S);
    }
  });

  it("is not there where no string is seen, and stops when told to", () => {
    const empty = drawTubes(SIZE, [S, S, S], [], { noise: 0.2, seed: 52 });
    expect(ownOf(empty, shortcut)).toBeNull();
    const context = createTraceContext(memoryPyramid(phantom.grid, phantom.voxels), "bright");
    expect(() => ownStringPath(context, shortcut, { aborted: true })).toThrow(/stopped/);
    expect(ownStringPath(context, Float64Array.of(1, 1, 1, 1, 1, 1), ON)).toBeNull();
  });
});
