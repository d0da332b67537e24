import { describe, expect, it } from "vitest";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { ridgeBlockInto } from "#shared/tracing/ridge/ridge-block.ts";
import type { BlockScale } from "#shared/tracing/ridge/ridge-kernel.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

type Triple = readonly [number, number, number];

const OUT: Triple = [9, 7, 6];
/** No multiple of a spacing, so that rounding does not change the reach of the kernels. */
const SIGMA_MM = 0.053;

/** A scale on voxels of any spacing, as the tiles set it up. */
function scaleOn([sx, sy, sz]: Triple, sigmaMm: number): BlockScale {
  const n = sigmaMm * sigmaMm;
  return {
    kernels: [gaussianKernels(sigmaMm / sx), gaussianKernels(sigmaMm / sy), gaussianKernels(sigmaMm / sz)],
    normalise: [n / (sx * sx), n / (sy * sy), n / (sz * sz), n / (sx * sy), n / (sx * sz), n / (sy * sz)],
    slope: [sigmaMm / sx, sigmaMm / sy, sigmaMm / sz],
    damping: 0.25,
  };
}

function answer(block: Float32Array, size: Triple, scale: BlockScale): Float32Array {
  const out = new Float32Array(size[0] * size[1] * size[2]);
  ridgeBlockInto(block, size, scale, 1, out);
  return out;
}

const wide = (size: Triple, scale: BlockScale): Triple => [
  size[0] + 2 * scale.kernels[0].reach,
  size[1] + 2 * scale.kernels[1].reach,
  size[2] + 2 * scale.kernels[2].reach,
];

/** The values of an array at places that `from` gives for each place of the new one. */
function rearranged(
  values: Float32Array,
  size: Triple,
  to: Triple,
  from: (x: number, y: number, z: number) => Triple,
): Float32Array {
  const out = new Float32Array(values.length);
  for (let z = 0, o = 0; z < to[2]; z++)
    for (let y = 0; y < to[1]; y++)
      for (let x = 0; x < to[0]; x++, o++) {
        const [a, b, c] = from(x, y, z);
        out[o] = values[(c * size[1] + b) * size[0] + a]!;
      }
  return out;
}

/** Largest difference of two answers, as a share of the largest answer. */
function apart(a: Float32Array, b: Float32Array): number {
  let most = 0;
  let top = 0;
  for (let o = 0; o < a.length; o++) {
    most = Math.max(most, Math.abs(a[o]! - b[o]!));
    top = Math.max(top, a[o]!);
  }
  return most / top;
}

const SPACING: Triple = [0.04, 0.05, 0.07];
const scale = scaleOn(SPACING, SIGMA_MM);
const size = wide(OUT, scale);
const random = seeded(17);
const block = Float32Array.from({ length: size[0] * size[1] * size[2] }, () => 1000 * random());
const plain = answer(block, OUT, scale);

// Symmetric operations change the order of sums, nothing else. Near sheets, where the smaller curvature vanishes, single precision
// is right to about 1e-3 of the larger one (see ridge-block.ts).
describe("the ridge measure of a block", () => {
  it("turns by 90 degrees with the block about every axis", () => {
    for (const [a, b] of [
      [0, 1],
      [1, 2],
      [2, 0],
    ] as const) {
      const turned = (of: Triple): Triple => {
        const out = [...of] as [number, number, number];
        [out[a], out[b]] = [of[b], of[a]];
        return out;
      };
      // Place (.., p on a, .., q on b, ..) of the turned block is the old one's q on a and (side - 1 - p) on b.
      const back =
        (of: Triple) =>
        (x: number, y: number, z: number): Triple => {
          const at = [x, y, z] as [number, number, number];
          const old = [...at] as [number, number, number];
          old[a] = at[b];
          old[b] = of[b] - 1 - at[a];
          return old;
        };
      const other = answer(rearranged(block, size, turned(size), back(size)), turned(OUT), scaleOn(turned(SPACING), SIGMA_MM));
      expect(apart(rearranged(plain, OUT, turned(OUT), back(OUT)), other)).toBeLessThan(2e-3);
    }
  });

  it("mirrors with the block", () => {
    for (const axis of [0, 1, 2] as const) {
      const flip =
        (of: Triple) =>
        (x: number, y: number, z: number): Triple => {
          const at = [x, y, z] as [number, number, number];
          at[axis] = of[axis] - 1 - at[axis];
          return at;
        };
      const other = answer(rearranged(block, size, size, flip(size)), OUT, scale);
      expect(apart(rearranged(plain, OUT, OUT, flip(OUT)), other)).toBeLessThan(2e-3);
    }
  });

  it("is the same on voxels and at a scale that are larger by one factor", () => {
    for (const factor of [0.5, 3]) {
      const spacing = SPACING.map((mm) => factor * mm) as unknown as Triple;
      expect(apart(plain, answer(block, OUT, scaleOn(spacing, factor * SIGMA_MM)))).toBeLessThan(1e-4);
    }
  });

  it("grows with the contrast, and does not mind the level", () => {
    const louder = answer(
      block.map((value) => 500 + 4 * value),
      OUT,
      scale,
    );
    expect(
      apart(
        plain.map((value) => 4 * value),
        louder,
      ),
    ).toBeLessThan(2e-3);
  });
});
