import { describe, expect, it } from "vitest";
import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { ridgeBlockInto } from "#shared/tracing/ridge/ridge-block.ts";
import { type BlockScale, createRidgeKernel } from "#shared/tracing/ridge/ridge-kernel.ts";
import { ridgeInDouble } from "#test/shared/tracing/ridge/ridge-in-double.ts";
import { ridgeInSingle, thirdOfAngle } from "#test/shared/tracing/ridge/ridge-in-single.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

function scaleOf(sigma: number, damping = 0): BlockScale {
  const kernel = gaussianKernels(sigma);
  const n = sigma * sigma;
  return { kernels: [kernel, kernel, kernel], normalise: [n, n, n, n, n, n], slope: [sigma, sigma, sigma], damping };
}

/** Response at the centre of a block that holds f(x, y, z), indices from the centre. */
function responseAt(f: (x: number, y: number, z: number) => number, scale: BlockScale, polarity: 1 | -1 = 1): number {
  const reach = scale.kernels[0].reach;
  const side = 2 * reach + 1;
  const block = new Float32Array(side ** 3);
  for (let z = 0; z < side; z++)
    for (let y = 0; y < side; y++)
      for (let x = 0; x < side; x++) block[(z * side + y) * side + x] = f(x - reach, y - reach, z - reach);
  const out = new Float32Array(1);
  ridgeBlockInto(block, [1, 1, 1], scale, polarity, out);
  return out[0]!;
}

/** Coverage of the voxel at (x, y) by a disc, by 12 x 12 samples. */
function disc(radius: number): (x: number, y: number) => number {
  const known = new Map<number, number>();
  return (x, y) => {
    const key = x * 1000 + y;
    const before = known.get(key);
    if (before !== undefined) return before;
    let inside = 0;
    for (let j = 0; j < 12; j++)
      for (let i = 0; i < 12; i++) if (Math.hypot(x + (i + 0.5) / 12 - 0.5, y + (j + 0.5) / 12 - 0.5) <= radius) inside++;
    known.set(key, inside / 144);
    return inside / 144;
  };
}

describe("Gaussian derivative kernels", () => {
  it("answer constants, ramps and parabolas exactly at every sigma, also very small ones", () => {
    for (const sigma of [0, 0.2, 0.5, 0.7, 0.9, 1.3, 2, 4]) {
      const { reach, smooth, first, second } = gaussianKernels(sigma);
      let [one, ramp, zero, parabola] = [smooth[0]!, 0, second[0]!, 0];
      for (let k = 1; k <= reach; k++) {
        one += 2 * smooth[k]!;
        ramp += 2 * k * first[k]!;
        zero += 2 * second[k]!;
        parabola += 2 * k * k * second[k]!;
      }
      expect(one).toBeCloseTo(1, 12);
      expect(ramp).toBeCloseTo(1, 12);
      expect(zero).toBeCloseTo(0, 12);
      expect(parabola).toBeCloseTo(2, 12);
    }
  });
});

describe("the ridge measure of a block", () => {
  // Closed form of a solid cylinder of radius r at scale s: r^2 / (2 s^2) exp(-r^2 / (2 s^2)) (derivation; agreed list of outside values).
  // The sampled cylinder carries the voxel's own box, variance 1/12: the tolerance is its second-order effect at r = 4.
  it("answers at a cylinder's axis as the closed form says, at any direction of the axis", () => {
    const r = 4;
    const cover = disc(r);
    for (const s of [1.8, r / Math.SQRT2, 4]) {
      const expected = ((r * r) / (2 * s * s)) * Math.exp((-r * r) / (2 * s * s));
      expect(responseAt((x, y) => cover(x, y), scaleOf(s))).toBeCloseTo(expected, 2);
      expect(responseAt((_x, y, z) => cover(y, z), scaleOf(s))).toBeCloseTo(expected, 2);
    }
  });

  it("peaks at sigma = r / sqrt 2 with exp(-1) = 0.3679 at unit contrast", () => {
    const r = 4;
    const cover = disc(r);
    const at = (s: number) => responseAt((x, y) => cover(x, y), scaleOf(s));
    const peak = at(r / Math.SQRT2);
    expect(peak).toBeCloseTo(0.3679, 2);
    expect(peak).toBeGreaterThan(at((r / Math.SQRT2) * 0.8));
    expect(peak).toBeGreaterThan(at((r / Math.SQRT2) * 1.25));
  });

  it("is not changed at the axis by damping, and is damped away from it", () => {
    const cover = disc(4);
    const s = 4 / Math.SQRT2;
    const on = responseAt((x, y) => cover(x, y), scaleOf(s, 0.25));
    expect(on).toBeCloseTo(
      responseAt((x, y) => cover(x, y), scaleOf(s)),
      6,
    );
    const off = (damping: number) => responseAt((x, y) => cover(x + 3, y), scaleOf(s, damping));
    expect(off(0.25)).toBeLessThan(0.9 * off(0));
  });

  it("does not count a slope along the string as distance from its crest", () => {
    const cover = disc(4);
    const fading = (damping: number) => responseAt((x, y, z) => cover(x, y) * (1 + 0.05 * z), scaleOf(2.8, damping));
    expect(fading(1)).toBeGreaterThan(0.97 * fading(0));
  });

  it("gives nothing for planes, ramps and constants, and takes dark strings for bright ones turned over", () => {
    const scale = scaleOf(1.5);
    expect(responseAt(() => 7, scale)).toBeLessThan(1e-5);
    expect(responseAt((x, y, z) => 3 * x - y + 2 * z, scale)).toBeLessThan(1e-4);
    expect(responseAt((_x, _y, z) => (z === 0 ? 1 : 0), scale)).toBeLessThan(1e-3);
    const cover = disc(3);
    expect(responseAt((x, y) => -cover(x, y), scale, -1)).toBe(responseAt((x, y) => cover(x, y), scale, 1));
  });

  it("has no seams: a block with its halo equals the same region of a larger one, bit for bit", () => {
    const scale = scaleOf(1.3, 0.25);
    const reach = scale.kernels[0].reach;
    const random = seeded(5);
    const whole = [20, 18, 16] as const;
    const padded = whole.map((side) => side + 2 * reach) as [number, number, number];
    const block = Float32Array.from({ length: padded[0] * padded[1] * padded[2] }, () => 1000 * random());
    const all = new Float32Array(whole[0] * whole[1] * whole[2]);
    ridgeBlockInto(block, whole, scale, 1, all);
    const start = [5, 3, 7] as const;
    const size = [9, 11, 6] as const;
    const cut = size.map((side) => side + 2 * reach) as [number, number, number];
    const part = new Float32Array(cut[0] * cut[1] * cut[2]);
    for (let z = 0; z < cut[2]; z++)
      for (let y = 0; y < cut[1]; y++)
        for (let x = 0; x < cut[0]; x++)
          part[(z * cut[1] + y) * cut[0] + x] = block[((z + start[2]) * padded[1] + y + start[1]) * padded[0] + x + start[0]]!;
    const out = new Float32Array(size[0] * size[1] * size[2]);
    ridgeBlockInto(part, size, scale, 1, out);
    for (let z = 0; z < size[2]; z++)
      for (let y = 0; y < size[1]; y++)
        for (let x = 0; x < size[0]; x++)
          expect(out[(z * size[1] + y) * size[0] + x]).toBe(
            all[((z + start[2]) * whole[1] + y + start[1]) * whole[0] + x + start[0]],
          );
  });

  /** A block of noise beside which sheets, strings and blobs stand, so that every branch is taken; anisotropic kernels. */
  function varied(seed: number, size: readonly [number, number, number]) {
    const kernels = [gaussianKernels(1.3), gaussianKernels(0.9), gaussianKernels(0.4)] as const;
    const scale: BlockScale = { kernels, normalise: [1.7, 0.8, 0.2, 1.2, 0.5, 0.4], slope: [1.3, 0.9, 0.4], damping: 0.25 };
    const random = seeded(seed);
    const [wide, high, deep] = size.map((side, k) => side + 2 * kernels[k]!.reach) as [number, number, number];
    const block = new Float32Array(wide * high * deep);
    for (let z = 0, v = 0; z < deep; z++)
      for (let y = 0; y < high; y++)
        for (let x = 0; x < wide; x++, v++) {
          const sheet = x === 7 ? 3000 : 0;
          const string = Math.hypot(y - 9, z - 4) < 1.5 ? 2000 : 0;
          const flat = x > wide - 14 && y > high - 12;
          block[v] = flat ? 5000 : 20000 + sheet + string + 400 * random();
        }
    return { block, scale };
  }

  it("equals the same steps done one voxel at a time in single precision, bit for bit, at every width of a row", () => {
    for (const [seed, nx] of [1, 2, 3, 4, 5, 8, 19].entries())
      for (const polarity of [1, -1] as const) {
        const size = [nx, 7, 5] as const;
        const { block, scale } = varied(seed + 1, size);
        const out = new Float32Array(nx * 7 * 5);
        ridgeBlockInto(block, size, scale, polarity, out);
        expect(out).toEqual(ridgeInSingle(block, size, scale, polarity));
        expect(nx < 19 || out.some((value) => value > 0)).toBe(true);
      }
  });

  it("agrees with the definition in double precision, within what single precision leaves of a sheet's second curvature", () => {
    const size = [19, 9, 6] as const;
    for (const polarity of [1, -1] as const) {
      const { block, scale } = varied(9, size);
      const out = new Float32Array(19 * 9 * 6);
      ridgeBlockInto(block, size, scale, polarity, out);
      const slow = ridgeInDouble(block, size, scale, polarity);
      // Grey values to 20 000 carry 0.001 in single precision; where the second curvature m2 is 0 an error e of it answers sqrt(m1 e).
      for (let v = 0; v < out.length; v++) expect(Math.abs(out[v]! - slow[v]!)).toBeLessThan(0.005 * slow[v]! + 6);
      const strong = slow.map((value, v) => (value > 100 ? Math.abs(out[v]! / value - 1) : 0));
      expect(Math.max(...strong)).toBeLessThan(1e-3);
      expect(slow.filter((value) => value > 100).length).toBeGreaterThan(20);
    }
  });

  it("takes the cosine of a third of the angle from a polynomial that errs by less than 2e-7", () => {
    for (let k = 0; k <= 5000; k++) {
      const s = Math.fround((k / 5000) * Math.SQRT2);
      const exact = Math.cos(Math.acos(Math.max(-1, 1 - s * s)) / 3 + (2 * Math.PI) / 3);
      expect(Math.abs(thirdOfAngle(s) - exact)).toBeLessThan(2e-7);
    }
  });

  it("does not depend on how much wider the block is, nor on what the kernel did before", () => {
    const size = [13, 6, 5] as const;
    const { block, scale } = varied(4, size);
    const expected = new Float32Array(13 * 6 * 5);
    ridgeBlockInto(block, size, scale, 1, expected);
    const reach = scale.kernels.map((kernel) => kernel.reach) as [number, number, number];
    const pad = [reach[0] + 3, reach[1] + 1, reach[2] + 2] as const;
    const kernel = createRidgeKernel();
    kernel.block(50_000).fill(Number.NaN);
    kernel.run([20, 20, 20], reach, scale, -1);
    const [wide, high, deep] = size.map((side, k) => side + 2 * pad[k]!) as [number, number, number];
    const [bw, bh, bd] = size.map((side, k) => side + 2 * reach[k]!) as [number, number, number];
    const room = kernel.block(wide * high * deep).fill(1e9);
    for (let z = 0; z < bd; z++)
      for (let y = 0; y < bh; y++)
        for (let x = 0; x < bw; x++) room[((z + 2) * high + y + 1) * wide + x + 3] = block[(z * bh + y) * bw + x]!;
    expect(kernel.run(size, pad, scale, 1).slice()).toEqual(expected);
  });
});
