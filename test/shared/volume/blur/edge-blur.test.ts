import { describe, expect, it } from "vitest";
import { EdgeBlurSurvey } from "#shared/volume/blur/edge-blur.ts";
import { fitEdge } from "#shared/volume/blur/fit-edge.ts";
import { seeded } from "#test/main/intake/written-by-hand.ts";

/** Phi by Simpson's rule over the density, 2000 steps: shares nothing with the kernel's formula. */
function normalBelow(t: number): number {
  const from = -9;
  if (t <= from) return 0;
  const n = 2000;
  const h = (t - from) / n;
  let sum = 0;
  for (let i = 0; i <= n; i++) {
    const x = from + i * h;
    sum += (i === 0 || i === n ? 1 : i % 2 ? 4 : 2) * Math.exp((-x * x) / 2);
  }
  return (sum * h) / 3 / Math.sqrt(2 * Math.PI);
}

describe("the fit of an edge", () => {
  it.each([
    [0.7, 0, 0, 0],
    [1.2, 0.4, 0, 0],
    [1.2, -0.3, 0.5, 0.3],
    [2, 0.2, 0.2, -0.4],
  ])("finds sigma %f of a plane edge with tilts %f and %f at %f", (sigma, tiltV, tiltW, shift) => {
    const [nu, nv, nw] = [15, 5, 3];
    const spacing = [0.04, 0.05, 0.08] as const;
    const values: number[] = [];
    for (let w = -1; w <= 1; w++)
      for (let v = -2; v <= 2; v++)
        for (let u = -7; u <= 7; u++) {
          const along = u * spacing[0] - shift * 0.04 + tiltV * v * spacing[1] + tiltW * w * spacing[2];
          const t = along / Math.sqrt(1 + tiltV ** 2 + tiltW ** 2) / (sigma * 0.04);
          values.push(500 - 300 * normalBelow(t));
        }
    const fit = fitEdge({ values: Float64Array.from(values), nu, nv, nw, spacing })!;
    expect(fit.sigmaMm / 0.04).toBeCloseTo(sigma, 3);
    expect(fit.step).toBeCloseTo(-300, 0);
    expect(fit.tilt[0]).toBeCloseTo(tiltV, 3);
    expect(fit.tilt[1]).toBeCloseTo(tiltW, 3);
    expect(fit.misfit).toBeLessThan(1e-3);
  });

  it("of a line of even rise has no edge to speak of", () => {
    const values = Float64Array.from({ length: 15 * 5 * 3 }, (_, k) => (k % 15) * 10);
    const fit = fitEdge({ values, nu: 15, nv: 5, nw: 3, spacing: [1, 1, 1] });
    // Whatever is fitted is far wider than the block can tell.
    if (fit) expect(fit.sigmaMm).toBeGreaterThan(15 / 2 / 2.2);
  });
});

const SIZE = 60;

/** Balls and a slab of one level in another, 64 sub-samples a voxel; shape [60, 60, 60]. */
function crispScan(): Float64Array {
  const random = seeded(5);
  const balls = Array.from({ length: 14 }, () => [random() * SIZE, random() * SIZE, random() * SIZE, 6 + random() * 9] as const);
  /** Distance outside the nearest surface, negative inside. */
  const outside = (x: number, y: number, z: number) => {
    let least = Math.abs(0.3 * x + y - 0.9 * SIZE) / Math.hypot(0.3, 1) - 4;
    for (const [bx, by, bz, r] of balls) least = Math.min(least, Math.hypot(x - bx, y - by, z - bz) - r);
    return least;
  };
  const values = new Float64Array(SIZE ** 3);
  for (let z = 0, k = 0; z < SIZE; z++)
    for (let y = 0; y < SIZE; y++)
      for (let x = 0; x < SIZE; x++, k++) {
        const far = outside(x, y, z);
        let hits = far < 0 ? 64 : 0;
        if (Math.abs(far) < 0.9) {
          hits = 0;
          for (let a = 0; a < 64; a++)
            if (outside(x + (a & 3) / 4 - 0.375, y + ((a >> 2) & 3) / 4 - 0.375, z + (a >> 4) / 4 - 0.375) < 0) hits++;
        }
        values[k] = hits / 64;
      }
  return values;
}

/**
 * The scan blurred by sampled Gaussian weights along each axis, and the width that this amounts to: the weights' own variance and
 * that of a voxel's box (1/12) added up.
 */
function blurredScan(crisp: Float64Array, blurVoxels: number, noise: number): { planes: Uint16Array[]; sigma: number } {
  const random = seeded(9);
  const reach = Math.ceil(4 * blurVoxels);
  const weights = Array.from({ length: 2 * reach + 1 }, (_, k) => Math.exp(-((k - reach) ** 2) / (2 * blurVoxels ** 2)));
  const total = weights.reduce((a, b) => a + b, 0);
  const taps = Float64Array.from(weights, (w) => w / total);
  const variance = taps.reduce((sum, tap, k) => sum + tap * (k - reach) ** 2, 0);
  let values = crisp;
  for (const stride of [1, SIZE, SIZE * SIZE]) {
    const out = new Float64Array(values.length);
    for (let k = 0; k < out.length; k++) {
      const place = Math.floor(k / stride) % SIZE;
      let sum = 0;
      for (let d = -reach; d <= reach; d++) {
        const there = Math.min(SIZE - 1, Math.max(0, place + d));
        sum += taps[d + reach]! * values[k + (there - place) * stride]!;
      }
      out[k] = sum;
    }
    values = out;
  }
  const bell = () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
  const planes = Array.from({ length: SIZE }, (_, z) => {
    const plane = values.subarray(z * SIZE * SIZE, (z + 1) * SIZE * SIZE);
    return Uint16Array.from(plane, (v) => Math.round(2000 + 10000 * v + 10000 * noise * bell()));
  });
  return { planes, sigma: Math.sqrt(variance + 1 / 12) };
}

describe("the blur of a scan", () => {
  const crisp = crispScan();
  it.each([
    // Below some 1.4 voxels of full width an edge has hardly a voxel on it; what is found there is rougher.
    [0.5, 0, 0.12],
    [0.7, 0.05, 0.06],
    [1, 0.03, 0.06],
    [1.5, 0.05, 0.06],
  ])("of sampled Gaussian weights of %f voxels, noise %f, is found with a share of error below %f", (blur, noise, tolerance) => {
    const { planes, sigma } = blurredScan(crisp, blur, noise);
    const survey = new EdgeBlurSurvey([SIZE, SIZE, SIZE], [0.04, 0.04, 0.04]);
    for (const [z, plane] of planes.entries()) survey.add(z, plane);
    const expected = sigma * 2 * Math.sqrt(2 * Math.log(2)) * 0.04;
    expect(Math.abs(survey.estimate()! / expected - 1)).toBeLessThan(tolerance);
  });

  it("of noise, of nothing, and of a scan of few slices is not told", () => {
    const random = seeded(2);
    for (const value of [() => Math.floor(random() * 1000), () => 7]) {
      const survey = new EdgeBlurSurvey([64, 64, 64], [1, 1, 1]);
      for (let z = 0; z < 64; z++) survey.add(z, Uint16Array.from({ length: 64 * 64 }, value));
      expect(survey.estimate()).toBeNull();
    }
    const few = new EdgeBlurSurvey([64, 64, 2], [1, 1, 1]);
    few.add(0, new Uint16Array(64 * 64));
    few.add(1, new Uint16Array(64 * 64));
    expect(few.estimate()).toBeNull();
  });
});
