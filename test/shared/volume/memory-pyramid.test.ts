import { describe, expect, it } from "vitest";
import { downsampleInto, halvedSize } from "#shared/volume/downsample.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

describe("downsampling", () => {
  // Rule of the store: mean of the existing children, integers half up; values worked out by hand.
  it("takes the mean of existing children and rounds integers half up, also below zero", () => {
    const size = [3, 2, 1] as const;
    const source = Int16Array.of(1, 2, -3, 1, 2, -4);
    const out = new Int16Array(2);
    downsampleInto(source, size, [true, true, false], out);
    expect([...out]).toEqual([2, -3]); // (1+2+1+2)/4 = 1.5 -> 2, (-3-4)/2 = -3.5 -> -3
  });

  it("does not round float32", () => {
    const out = new Float32Array(1);
    downsampleInto(Float32Array.of(1, 2), [2, 1, 1], [true, false, false], out);
    expect(out[0]).toBe(1.5);
  });

  it("agrees with a voxel-by-voxel mean for every choice of axes, on odd sides", () => {
    let seed = 7;
    const next = () => {
      seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
      return seed >>> 16;
    };
    const size = [7, 5, 3] as const;
    const source = Uint16Array.from({ length: 105 }, next);
    for (let choice = 0; choice < 8; choice++) {
      const halve = [(choice & 1) > 0, (choice & 2) > 0, (choice & 4) > 0] as const;
      const [mx, my, mz] = halvedSize(size, halve);
      const out = new Uint16Array(mx * my * mz);
      downsampleInto(source, size, halve, out);
      const step = halve.map((h) => (h ? 2 : 1));
      for (let z = 0; z < mz; z++)
        for (let y = 0; y < my; y++)
          for (let x = 0; x < mx; x++) {
            let sum = 0;
            let n = 0;
            for (let k = 0; k < step[2]!; k++)
              for (let j = 0; j < step[1]!; j++)
                for (let i = 0; i < step[0]!; i++) {
                  const c = [x * step[0]! + i, y * step[1]! + j, z * step[2]! + k];
                  if (c[0]! >= 7 || c[1]! >= 5 || c[2]! >= 3) continue;
                  sum += source[(c[2]! * 5 + c[1]!) * 7 + c[0]!]!;
                  n++;
                }
            expect(out[(z * my + y) * mx + x]).toBe(Math.floor(sum / n + 0.5));
          }
    }
  });
});

describe("a pyramid in memory", () => {
  it("has the levels of its grid and repeats edge voxels outside", () => {
    const grid = plainGrid([100, 70, 3], [0.04, 0.04, 0.04]);
    const voxels = Uint8Array.from({ length: 21000 }, (_, i) => i % 251);
    const pyramid = memoryPyramid(grid, voxels);
    expect(pyramid.levels.map((level) => [...level.size])).toEqual([
      [100, 70, 3],
      [50, 35, 3],
    ]);
    const out = new Float32Array(6 * 2 * 1);
    pyramid.readBoxInto(0, [-2, -1, -4], [6, 2, 1], out);
    expect([...out]).toEqual([0, 0, 0, 1, 2, 3, 0, 0, 0, 1, 2, 3]);
    pyramid.readBoxInto(0, [98, 69, 2], [6, 2, 1], out);
    const end = (i: number) => voxels[20900 + i]!;
    expect([...out.slice(0, 6)]).toEqual([end(98), end(99), end(99), end(99), end(99), end(99)]);
    pyramid.readBoxInto(0, [200, 0, 0], [6, 1, 1], out.subarray(0, 6));
    expect(out[0]).toBe(voxels[99]);
  });
});
