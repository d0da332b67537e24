import { expect, it } from "vitest";
import { createSampler } from "#shared/tracing/sampler.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

const SIZE = [70, 45, 40] as const;

function scan(): Uint16Array {
  const random = seeded(17);
  return Uint16Array.from({ length: SIZE[0] * SIZE[1] * SIZE[2] }, () => Math.floor(random() * 60_000));
}

/** Linear interpolation along x, then y, then z, straight from the voxels; beyond the edge its nearest voxel. */
function plainly(voxels: Uint16Array, place: readonly number[]): number {
  const inside = place.map((at, axis) => Math.min(Math.max(at, 0), SIZE[axis]! - 1));
  const low = inside.map(Math.floor);
  const part = inside.map((at, axis) => at - low[axis]!);
  const voxel = (x: number, y: number, z: number) => {
    const [i, j, k] = [x, y, z].map((step, axis) => Math.min(low[axis]! + step, SIZE[axis]! - 1)) as [number, number, number];
    return voxels[(k * SIZE[1] + j) * SIZE[0] + i]!;
  };
  const mix = (a: number, b: number, t: number) => a + t * (b - a);
  const alongX = (y: number, z: number) => mix(voxel(0, y, z), voxel(1, y, z), part[0]!);
  const plane = (z: number) => mix(alongX(0, z), alongX(1, z), part[1]!);
  return mix(plane(0), plane(1), part[2]!);
}

it("a line's values are those of linear interpolation at its places, across bricks, beyond the edge and with few bricks kept", () => {
  const voxels = scan();
  const pyramid = memoryPyramid(plainGrid(SIZE, [0.04, 0.04, 0.04]), voxels);
  const random = seeded(18);
  for (const keep of [384, 2]) {
    const sampler = createSampler(pyramid, keep);
    for (let n = 0; n < 200; n++) {
      const from = SIZE.map((side) => random() * (side + 8) - 4) as [number, number, number];
      const step = [0, 1, 2].map(() => 3 * random() - 1.5) as [number, number, number];
      const offset = [0, 1, 2].map(() => random() - 0.5) as [number, number, number];
      const out = new Float64Array(24).fill(5);
      sampler.addLine({ level: 0, from, step, offset, first: -3, count: 20 }, out, 2);
      for (let k = 0; k < 24; k++) {
        const place = from.map((at, axis) => at + (k - 5) * step[axis]! + offset[axis]!) as [number, number, number];
        const value = plainly(voxels, place);
        expect(out[k]).toBe(k < 2 || k >= 22 ? 5 : 5 + value);
        if (k === 2) expect(sampler.at(0, ...place)).toBe(value);
      }
    }
  }
});
