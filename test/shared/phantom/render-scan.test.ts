import { describe, expect, it } from "vitest";
import { type ScanLook, scanOfSolids } from "#shared/phantom/render-scan.ts";
import { Solids } from "#shared/phantom/solids.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { plainGrid } from "#shared/volume/grid.ts";

const QUIET: ScanLook = {
  seed: 1,
  background: 0,
  contrast: { string: 10000, muscle: 8000, leaflet: 6000 },
  noise: 0,
  blurFwhmMm: 0,
  ring: 0,
  fibre: 0,
};

function render(side: number, n: number, solids: Solids, look: ScanLook, cuts: readonly number[] = []): Uint16Array {
  const slab = scanOfSolids(plainGrid([n, n, n], [side, side, side]), solids.lists(), look);
  const out = new Uint16Array(n ** 3);
  const edges = [0, ...cuts, n];
  for (let k = 1; k < edges.length; k++) slab(edges[k - 1]!, edges[k]!, out.subarray(edges[k - 1]! * n * n, edges[k]! * n * n));
  return out;
}

const sum = (values: Uint16Array) => values.reduce((a, b) => a + b, 0);

describe("solids in a scan", () => {
  it("fill the volume that geometry gives them, wherever they lie", () => {
    const random = new SeededRandom(11);
    for (let k = 0; k < 4; k++) {
      const place = () => [random.between(1, 3), random.between(1, 3), random.between(1, 3)] as const;
      const [a, b] = [place(), place()];
      const radius = random.between(0.25, 0.7);
      const solids = new Solids();
      solids.addTube("string", [a, b], [radius, radius]);
      const length = Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
      const exact = Math.PI * radius ** 2 * length + (4 / 3) * Math.PI * radius ** 3;
      const filled = (sum(render(0.1, 41, solids, QUIET)) / 10000) * 0.1 ** 3;
      // 27 sub-samples a voxel: the error is that of counting points a thirtieth of a millimetre apart.
      expect(filled / exact).toBeGreaterThan(0.99);
      expect(filled / exact).toBeLessThan(1.01);
    }
  });

  it("have the thickness that a sheet was given, slanted too", () => {
    const solids = new Solids();
    const rows = [-9, 0, 9].map((i) => [-9, 0, 9].map((j) => [2 + i, 2 + j, 2 + 0.5 * i - 0.25 * j] as const));
    solids.addSheet("leaflet", rows, 0.5);
    const values = render(0.1, 41, solids, QUIET);
    // A column along z cuts the sheet over thickness times the length of (slopes, 1).
    const column = Array.from({ length: 41 }, (_, z) => values[(z * 41 + 20) * 41 + 20]!).reduce((a, b) => a + b, 0);
    const expected = 0.5 * Math.hypot(0.5, 0.25, 1);
    expect(Math.abs((column / 6000) * 0.1 - expected)).toBeLessThan(0.035);
  });

  it("cover each other without adding up: string before muscle before leaflet", () => {
    const solids = new Solids();
    for (const material of ["leaflet", "muscle", "string"] as const)
      solids.addTube(
        material,
        [
          [2, 2, 1],
          [2, 2, 3],
        ],
        [0.5, 0.5],
      );
    const values = render(0.1, 41, solids, QUIET);
    expect(Math.max(...values)).toBe(10000);
    expect(values[(20 * 41 + 20) * 41 + 20]).toBe(10000);
  });

  it("are blurred to the published height of a blurred cylinder", () => {
    // Peak of a cylinder of diameter D under a Gaussian of FWHM 1: 1 - 2^(-(D/FWHM)^2) (derivation; Hoffmann et al. 2002 agrees).
    for (const [ratio, peak] of [
      [0.75, 0.3229],
      [1, 0.5],
      [1.5, 0.7898],
      [2, 0.9375],
    ] as const) {
      const blurFwhmMm = 0.5;
      const solids = new Solids();
      const radius = (ratio * blurFwhmMm) / 2;
      solids.addTube(
        "string",
        [
          [2.003, 2.004, -3],
          [2.003, 2.004, 7],
        ],
        [radius, radius],
      );
      const values = render(0.1, 41, solids, { ...QUIET, blurFwhmMm });
      expect(Math.abs(values[(20 * 41 + 20) * 41 + 20]! / 10000 - peak)).toBeLessThan(0.012);
    }
  });

  it("are the same however the slabs are cut, with noise and rings", () => {
    const solids = new Solids();
    solids.addTube(
      "muscle",
      [
        [0, 0, 0],
        [3, 3, 3],
      ],
      [0.5, 0.2],
    );
    const look = { ...QUIET, background: 3000, noise: 500, blurFwhmMm: 0.25, ring: 300, fibre: 0.1 };
    const whole = render(0.1, 31, solids, look);
    expect(render(0.1, 31, solids, look, [1, 2, 9, 20])).toEqual(whole);
    expect(render(0.1, 31, solids, { ...look, seed: 2 })).not.toEqual(whole);
    const slab = scanOfSolids(plainGrid([31, 31, 31], [0.1, 0.1, 0.1]), solids.lists(), look);
    const late = new Uint16Array(31 * 31);
    slab(25, 26, late);
    slab(4, 5, late);
    expect(late).toEqual(whole.subarray(4 * 31 * 31, 5 * 31 * 31));
  });

  it("of one grain for all slices differ from those of fresh noise by their noise alone", () => {
    const solids = new Solids();
    solids.addTube(
      "muscle",
      [
        [0, 0, 0],
        [3, 3, 3],
      ],
      [0.5, 0.2],
    );
    const look = { ...QUIET, background: 3000, blurFwhmMm: 0.25, fibre: 0.1, oneGrain: true };
    // Without noise the even background is rounded before the solids are added: at most one grey value.
    const clean = render(0.1, 31, solids, { ...look, oneGrain: false });
    const once = render(0.1, 31, solids, look);
    expect(Math.max(...once.map((value, k) => Math.abs(value - clean[k]!)))).toBeLessThanOrEqual(1);
    const noisy = { ...look, noise: 500 };
    const whole = render(0.1, 31, solids, noisy);
    expect(render(0.1, 31, solids, noisy, [1, 2, 9, 20])).toEqual(whole);
    const parts = Float64Array.from(whole, (value, k) => value - clean[k]!);
    const deviation = Math.sqrt(parts.reduce((a, b) => a + b * b, 0) / parts.length);
    expect(deviation).toBeGreaterThan(480);
    expect(deviation).toBeLessThan(520);
    expect(whole.subarray(0, 961)).not.toEqual(whole.subarray(961, 1922));
  });

  it("have noise of the asked standard deviation", () => {
    const values = render(0.1, 64, new Solids(), { ...QUIET, background: 20000, noise: 700 });
    const mean = sum(values) / values.length;
    const deviation = Math.sqrt(values.reduce((total, value) => total + (value - mean) ** 2, 0) / values.length);
    // Standard errors over 64^3 voxels: 1.4 and 1.0 grey values.
    expect(Math.abs(mean - 20000)).toBeLessThan(7);
    expect(Math.abs(deviation - 700)).toBeLessThan(5);
  });

  it("need cubic voxels along the axes", () => {
    expect(() => scanOfSolids(plainGrid([4, 4, 4], [0.1, 0.1, 0.2]), [], QUIET)).toThrow(RangeError);
  });
});
