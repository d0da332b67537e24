import { describe, expect, it } from "vitest";
import type { Vec3 } from "#shared/geometry/types.ts";
import { RIDGE_TILE_SIDE } from "#shared/tracing/ridge/ridge-tiles.ts";
import { brightShare, outlineRadius } from "#shared/tracing/strings/bright-share.ts";
import { contactKind } from "#shared/tracing/strings/contact-kind.ts";
import { leastStrength } from "#shared/tracing/strings/least-strength.ts";
import { outwardBranches } from "#shared/tracing/strings/outward.ts";
import { partContacts } from "#shared/tracing/strings/part-contacts.ts";
import { ridgePointsOfTile } from "#shared/tracing/strings/ridge-points.ts";
import { isRim } from "#shared/tracing/strings/rim.ts";
import { thinTree } from "#shared/tracing/strings/thin-tree.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { curve, drawTubes, line } from "#test/shared/tracing/tube-phantom.ts";

const S = 0.05;

/** A scan of solids by a test of each voxel: 1000 outside, 2000 inside. */
function solidScan(size: readonly [number, number, number], inside: (x: number, y: number, z: number) => boolean) {
  const voxels = new Float32Array(size[0] * size[1] * size[2]);
  let v = 0;
  for (let z = 0; z < size[2]; z++)
    for (let y = 0; y < size[1]; y++)
      for (let x = 0; x < size[0]; x++, v++) voxels[v] = inside(x * S, y * S, z * S) ? 2000 : 1000 + ((v * 7919) % 13);
  return createTraceContext(memoryPyramid(plainGrid(size, [S, S, S]), voxels), "bright");
}

describe("the bright share of a shell", () => {
  const middle: Vec3 = [1.5, 1.5, 1.5];
  // Strings of this radius are looked at on the level with voxels of 4 S.
  const R = 2.2 * 0.3 + 1.5 * 4 * S;

  it("is that of a cylinder through a sphere: 1 - sqrt(1 - (r / R)^2)", () => {
    const context = solidScan([61, 61, 61], (_, y, z) => Math.hypot(y - 1.5, z - 1.5) <= 0.3);
    // 92 directions: one to two of them either way.
    expect(Math.abs(brightShare(context, middle, 0.3) - (1 - Math.sqrt(1 - (0.3 / R) ** 2)))).toBeLessThan(0.03);
  });

  it("is that of a slab through a sphere: half its thickness / R", () => {
    const context = solidScan([61, 61, 61], (_, __, z) => Math.abs(z - 1.5) <= 0.3);
    expect(Math.abs(brightShare(context, middle, 0.3) - 0.3 / R)).toBeLessThan(0.04);
  });
});

describe("the outline of a string", () => {
  it("lies at its radius, and is not found in a sheet", () => {
    const context = solidScan([61, 61, 61], (x, y, z) => Math.hypot(y - 1.5, z - 1.5) <= 0.4 || x > 2.5);
    // Looked at on the level with voxels of 4 S, in steps of half of one.
    expect(Math.abs(outlineRadius(context, [1.5, 1.5, 1.5], [1, 0, 0], 0.4, 1000, 1.2) - 0.4)).toBeLessThan(2 * S);
    expect(outlineRadius(context, [2.75, 1.5, 1.5], [1, 0, 0], 0.4, 1000, 1.2)).toBeCloseTo(1.2, 1);
  });
});

describe("what a string runs into", () => {
  it("is a leaflet when it is a sheet, muscle when it is a lump or fills half of space", () => {
    const sheet = solidScan([81, 81, 81], (_, __, z) => Math.abs(z - 2) <= 0.25);
    expect(contactKind(sheet, [2, 2, 2], 0.1)).toBe("leaflet");
    const half = solidScan([81, 81, 81], (_, __, z) => z > 1.6);
    expect(contactKind(half, [2, 2, 1.9], 0.1)).toBe("muscle");
    const lump = solidScan([81, 81, 81], (x, y, z) => Math.hypot(x - 2, y - 2) <= 0.6 && z > 1.5);
    expect(contactKind(lump, [2, 2, 2.2], 0.15)).toBe("muscle");
  });
});

describe("the rim of a sheet", () => {
  it("is told from a string, also from one beside another", () => {
    const places = Array.from({ length: 30 }, (_, i): Vec3 => [0.75 + i * S, 1.5, 1.5]);
    const rim = solidScan(
      [61, 61, 61],
      (_, y, z) => Math.hypot(y - 1.5, z - 1.5) <= 0.2 || (y > 1.5 && Math.abs(z - 1.5) <= 0.2),
    );
    expect(isRim(rim, places, 0.2)).toBe(true);
    const pair = solidScan(
      [61, 61, 61],
      (_, y, z) => Math.min(Math.hypot(y - 1.5, z - 1.5), Math.hypot(y - 1.95, z - 1.5)) <= 0.2,
    );
    expect(isRim(pair, places, 0.2)).toBe(false);
  });
});

describe("ridge points", () => {
  const points = curve((t): Vec3 => [0.1 + 3.4 * t, 1.2 + 0.5 * Math.sin(4 * t), 1.3 + 0.3 * t]);
  const phantom = drawTubes([72, 64, 64], [S, S, S], [{ points, radius: () => 0.12 }], { fwhmMm: 0.09, noise: 0.1, seed: 3 });
  const context = createTraceContext(memoryPyramid(phantom.grid, phantom.voxels), "bright");
  const least = leastStrength(context, 0);
  const tiles = [0, 1, 2].flatMap((i) => [0, 1].flatMap((j) => [0, 1].map((k) => ridgePointsOfTile(context, 0, i, j, k, least))));
  const voxels = tiles.flatMap((tile) =>
    Array.from(tile.strengths, (_, n) => Array.from(tile.voxels.subarray(3 * n, 3 * n + 3))),
  );

  it("follow a string without a gap across the sides of tiles, within a voxel of its middle", () => {
    const away = points
      .filter(([x]) => x > 0.3 && x < 3.3)
      .map((p) => Math.min(...voxels.map(([x, y, z]) => Math.hypot(x! * S - p[0], y! * S - p[1], z! * S - p[2]))));
    // A crest voxel is at most half a diagonal beside the middle, and the next one a step along.
    expect(Math.max(...away)).toBeLessThan(1.6 * S);
  });

  it("are where a slow search over the whole level finds them: seams are invisible", () => {
    const answer = (x: number, y: number, z: number) => {
      const side = RIDGE_TILE_SIDE;
      const [i, j, k] = [Math.floor(x / side), Math.floor(y / side), Math.floor(z / side)];
      if (Math.min(x, y, z) < 0 || x >= 72 || y >= 64 || z >= 64) return 0;
      return context.ridges.tile(0, i, j, k).strength[((z % side) * side + (y % side)) * side + (x % side)]!;
    };
    const isCrest = (x: number, y: number, z: number) =>
      [0, 1, 2].some((normal) => {
        const own = answer(x, y, z);
        for (let p = -1; p <= 1; p++)
          for (let q = -1; q <= 1; q++) {
            const step = [0, 0, 0];
            step[(normal + 1) % 3] = p;
            step[(normal + 2) % 3] = q;
            if (answer(x + step[0]!, y + step[1]!, z + step[2]!) > own) return false;
          }
        return true;
      });
    for (const [x, y, z] of voxels) expect(isCrest(x!, y!, z!)).toBe(true);
    const found = new Set(voxels.map((voxel) => voxel.join(" ")));
    for (const x of [31, 32, 63, 64])
      for (let y = 0; y < 64; y++)
        for (let z = 0; z < 64; z++) {
          // Beside equal answers either may stand; the least that counts depends on the radius, so strong ones alone are asked for.
          if (answer(x, y, z) < 1.5 * least(0.2) || !isCrest(x, y, z)) continue;
          expect(found.has(`${x} ${y} ${z}`), `${x} ${y} ${z}`).toBe(true);
        }
  });
});

describe("a thin tree", () => {
  const chain = (places: readonly Vec3[]) => ({ places, radii: places.map(() => 0.1), strengths: places.map(() => 1) });

  it("joins a chain to one path, drops a spur and keeps a branch", () => {
    const main = Array.from({ length: 11 }, (_, i): Vec3 => [i * 0.1, 0, 0]);
    const spur: Vec3[] = [[0.5, 0.1, 0]];
    const branch = Array.from({ length: 5 }, (_, i): Vec3 => [0.3, 0, 0.1 * (i + 1)]);
    const places = [...main, ...spur, ...branch];
    const links = [
      ...main.slice(1).map((_, i) => [i, i + 1, 0.1] as const),
      [5, 11, 0.1] as const,
      [3, 12, 0.1] as const,
      ...branch.slice(1).map((_, i) => [12 + i, 13 + i, 0.1] as const),
    ];
    const paths = thinTree({ ...chain(places), links }, 0.15);
    expect(paths.map((path) => path.length).sort((a, b) => a - b)).toEqual([4, 6, 8]);
    const branches = outwardBranches(paths, 9);
    expect(branches.map(({ points, parent }) => [points[0], points.at(-1), parent])).toEqual([
      [9, 3, -1],
      [9, 10, -1],
      [3, 0, 0],
      [3, 16, 0],
    ]);
  });

  it("gives nothing for nothing, and for a single point", () => {
    expect(thinTree({ ...chain([]), links: [] }, 0.1)).toEqual([]);
    expect(thinTree({ ...chain([[0, 0, 0]]), links: [] }, 0.1)).toEqual([]);
  });

  it("opens a loop at its dearest link", () => {
    const places: Vec3[] = [
      [0, 0, 0],
      [1, 0, 0],
      [1, 1, 0],
      [0, 1, 0],
    ];
    const links = [
      [0, 1, 1],
      [1, 2, 1],
      [2, 3, 1],
      [3, 0, 5],
    ] as const;
    expect(thinTree({ ...chain(places), links }, 0.1)).toEqual([[0, 1, 2, 3]]);
  });
});

describe("contacts", () => {
  it("of two straight strings are parted, real forks are not", () => {
    const one = line([0, 0, 0], [2, 0, 0], 20);
    const other = line([1, -1, 0.1], [1, 1, 0.1], 20);
    const places = [...one, ...other];
    const radii = places.map(() => 0.06);
    const numbers = (from: number, to: number) => Array.from({ length: to - from + 1 }, (_, i) => from + i);
    const crossing = [numbers(0, 10), numbers(10, 20), numbers(21, 31), numbers(31, 41), [10, 31]];
    const parted = partContacts(crossing, places, radii, 0.05);
    expect(parted.contacts).toHaveLength(1);
    expect(parted.paths).toHaveLength(4);
    const forked = [numbers(0, 10), numbers(10, 20), [10, ...numbers(31, 41)]];
    expect(partContacts(forked, places, radii, 0.05).contacts).toHaveLength(0);
  });
});
