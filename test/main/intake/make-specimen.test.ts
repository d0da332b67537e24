import { createHash } from "node:crypto";
import { readdir, readFile, stat } from "node:fs/promises";
import { join } from "node:path";
import FileSystemStore from "@zarrita/storage/fs";
import { describe, expect, it } from "vitest";
import * as zarr from "zarrita";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen, type SpecimenOptions } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import type { IntakeProgress } from "#main/intake/progress.ts";
import { slabPlanesFor } from "#main/intake/store/store-writer.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import type { StoredArray } from "#shared/volume/dtype.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { storeBytes } from "#shared/volume/store/store-bytes.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { breachesOfOmeZarr } from "#test/main/intake/ome-zarr/check-ome-zarr.ts";
import { bytesOf, type HandNrrd, SETTLED, scratchFolder, seeded, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const options = (library: string): SpecimenOptions => ({
  library,
  id: "hbzero7aaaaaaaaaaaaa",
  name: "HB-07",
  created: 0,
  spacing: [0.04, 0.04, 0.04],
  handedness: "confirmed",
  facts: {},
  synthetic: true,
  blurFwhmMm: null,
});

/** Naive mean of the existing children, straight from the rule's words; values in z, y, x order. */
function naiveHalf(values: number[], size: number[], halve: boolean[], integer: boolean): { values: number[]; size: number[] } {
  const out = size.map((side, k) => (halve[k] ? Math.ceil(side / 2) : side));
  const result: number[] = [];
  for (let z = 0; z < out[0]!; z++)
    for (let y = 0; y < out[1]!; y++)
      for (let x = 0; x < out[2]!; x++) {
        const children: number[] = [];
        for (const dz of halve[0] ? [0, 1] : [0])
          for (const dy of halve[1] ? [0, 1] : [0])
            for (const dx of halve[2] ? [0, 1] : [0]) {
              const [cz, cy, cx] = [halve[0] ? 2 * z + dz : z, halve[1] ? 2 * y + dy : y, halve[2] ? 2 * x + dx : x];
              if (cz < size[0]! && cy < size[1]! && cx < size[2]!) children.push(values[(cz * size[1]! + cy) * size[2]! + cx]!);
            }
        const mean = children.reduce((a, b) => a + b, 0) / children.length;
        result.push(integer ? Math.floor(mean + 0.5) : Math.fround(mean));
      }
  return { values: result, size: out };
}

async function level(store: string, path: string): Promise<{ data: number[]; shape: number[] }> {
  const array = await zarr.open.v3(zarr.root(new FileSystemStore(store)).resolve(path), { kind: "array" });
  const all = await zarr.get(array);
  return { data: Array.from(all.data as Uint16Array), shape: all.shape };
}

describe("a specimen made of an NRRD", () => {
  it.each([
    ["uint16", "unsigned short", [70, 67, 65], (r: number) => Math.floor(r * 65536)],
    ["int16", "short", [131, 40, 33], (r: number) => Math.floor(r * 65536) - 32768],
    ["uint8", "uchar", [66, 130, 3], (r: number) => Math.floor(r * 256)],
    ["float32", "float", [65, 66, 67], (r: number) => Math.fround(r * 10 - 5)],
    // Slices 2.5 times as far apart as voxels: z is not halved until the others have caught up.
    ["uint16", "uint16", [200, 131, 70], (r: number) => Math.floor(r * 65536), [0.04, 0.04, 0.1]],
    ["uint16", "uint16", [70, 131, 140], (r: number) => Math.floor(r * 65536), [0.08, 0.04, 0.04]],
  ] as const)("has in zarrita, level by level, what a naive pyramid of %s gives", async (dtype, type, sizes, value, voxel?) => {
    const folder = await scratchFolder();
    const random = seeded(7);
    const values = Array.from({ length: sizes[0] * sizes[1] * sizes[2] }, () => value(random()));
    const path = await writeNrrd(folder, "a.nrrd", { sizes, type, dtype, values });
    const source = await openScan(path);
    const given: readonly [number, number, number] = voxel ?? [0.04, 0.04, 0.04];
    const { record } = await makeSpecimen(source, { ...options(folder), spacing: given });
    await source.close();
    const home = join(folder, "specimens", record.id);
    expect(parseSpecimenRecord(JSON.parse(await readFile(join(home, "specimen.json"), "utf8")), "specimen.json")).toEqual(record);
    expect(record.volume.sha256).toBe(
      createHash("sha256")
        .update(bytesOf(values, dtype, true))
        .digest("hex"),
    );
    expect(record.volume.range).toEqual({
      min: values.reduce((a, b) => Math.min(a, b)),
      max: values.reduce((a, b) => Math.max(a, b)),
    });
    const store = join(home, "scan.ome.zarr");
    const levels = (await readdir(store)).filter((name) => /^\d+$/.test(name)).length;
    let now = { values, size: [sizes[2], sizes[1], sizes[0]] as number[] };
    let spacing = [given[2], given[1], given[0]];
    for (let k = 0; ; k++) {
      const found = await level(store, String(k));
      expect(found.shape).toEqual(now.size);
      expect(found.data).toEqual(now.values);
      const finest = Math.min(...spacing);
      const halve = now.size.map((side, axis) => side > 64 && spacing[axis]! < 2 * finest);
      if (!halve.includes(true)) {
        expect(levels).toBe(k + 1);
        break;
      }
      now = naiveHalf(now.values, now.size, halve, dtype !== "float32");
      spacing = spacing.map((s, axis) => (halve[axis] ? 2 * s : s));
    }
  });

  const small = (more: Partial<HandNrrd>): HandNrrd => ({
    sizes: [4, 3, 5],
    type: "ushort",
    dtype: "uint16",
    values: ramp(60),
    ...more,
  });

  async function takeIn(folder: string, order: HandNrrd, more: Partial<SpecimenOptions> = {}) {
    const source = await openScan(await writeNrrd(folder, "a.nrrd", order));
    try {
      const made = await makeSpecimen(source, { ...options(folder), ...more });
      return { ...made, store: join(folder, "specimens", made.record.id, "scan.ome.zarr") };
    } finally {
      await source.close();
    }
  }

  it.each([
    ["one shard", [40, 30, 20], "uint8"],
    ["several shards and levels", [530, 70, 66], "uint16"],
  ] as const)("of %s keeps the published rules of OME-Zarr 0.5", async (_, sizes, dtype) => {
    const order = small({ sizes, dtype, type: dtype, values: ramp(sizes[0] * sizes[1] * sizes[2]) });
    const { store } = await takeIn(await scratchFolder(), order);
    expect(await breachesOfOmeZarr(store)).toEqual([]);
  });

  it("has each level's scale and translation where the voxels' centres are", async () => {
    const lines = [...SETTLED.filter((line) => !line.startsWith("space origin")), "space origin: (1,2,3)"];
    const { store } = await takeIn(await scratchFolder(), small({ sizes: [130, 65, 3], values: ramp(130 * 65 * 3), lines }));
    const group = JSON.parse(await readFile(join(store, "zarr.json"), "utf8"));
    const transforms = group.attributes.ome.multiscales[0].datasets.map(
      (d: { coordinateTransformations: unknown }) => d.coordinateTransformations,
    );
    // By hand: a halved axis has its first centre half a child voxel further in; z is never halved (3 slices).
    const expected = [
      [
        [0.04, 0.04, 0.04],
        [3, 2, 1],
      ],
      [
        [0.04, 0.08, 0.08],
        [3, 2.02, 1.02],
      ],
    ];
    expect(transforms.length).toBe(expected.length);
    for (const [k, [scale, translation]] of expected.entries()) {
      expect(transforms[k][0]).toMatchObject({ type: "scale" });
      for (const axis of [0, 1, 2]) {
        expect(transforms[k][0].scale[axis]).toBeCloseTo(scale![axis]!, 12);
        expect(transforms[k][1].translation[axis]).toBeCloseTo(translation![axis]!, 12);
      }
    }
  });

  it("is read back by the program with the same voxels, spacing and frame, oblique or not", async () => {
    for (const directions of ["(0.04,0,0) (0,0.04,0) (0,0,0.04)", "(0,0.04,0) (-0.04,0,0) (0,0,0.04)"]) {
      const folder = await scratchFolder();
      const lines = ["space: RAS", `space directions: ${directions}`, "space origin: (1,2,3)", 'space units: "mm" "mm" "mm"'];
      const { record } = await takeIn(folder, small({ lines }));
      const again = await openScan(join(folder, "specimens", record.id));
      expect(await gatherVoxels(again)).toEqual(ramp(60));
      const { header } = again;
      expect([header.headerSpacing, header.origin, header.direction, header.frame]).toEqual([
        record.volume.spacing,
        record.volume.origin,
        record.volume.direction,
        "LPS",
      ]);
      expect(record.volume.origin).toEqual([-1, -2, 3]);
    }
  });

  // The first of int16, uint16, float32 that holds every value exactly; else float32 with its greatest rounding; else refused.
  it.each([
    ["int8", "int8", [-128, 127], "int16", /int8 are kept as int16; no value changes/],
    ["int32", "int", [-5, 30000], "int16", /no value changes/],
    ["uint32", "uint", [0, 32768, 65535], "uint16", /no value changes/],
    ["uint32", "uint", [0, 65536, 16777216], "float32", /no value changes/],
    ["int32", "int", [-1, 40000], "float32", /no value changes/],
    ["uint32", "uint", [0, 16777217], "float32", /change by up to 1\./],
    ["int64", "int64", [-32768, 32767], "int16", /no value changes/],
    ["uint64", "uint64", [0, 60000], "uint16", /no value changes/],
    ["uint64", "uint64", [0, 2 ** 52 + 3], "float32", /change by up to 3\./],
    ["float64", "double", [-3, 5], "int16", /no value changes/],
    ["float64", "double", [0.5, 1.25], "float32", /no value changes/],
    ["float64", "double", [0.1, 7], "float32", /change by up to 1\.49e-9/],
  ] as const)("of %s voxels (%s %j) is kept as %s and says so", async (dtype, type, sample, stored, sentence) => {
    for (const gzip of [false, true]) {
      const values = Array.from({ length: 60 }, (_, k) => sample[k % sample.length]!);
      const { record, store } = await takeIn(await scratchFolder(), small({ dtype, type, values, gzip }));
      expect(record.volume.dtype).toBe(stored);
      expect(record.conversions.join(" ")).toMatch(sentence);
      const expected = stored === "float32" ? values.map(Math.fround) : values;
      expect((await level(store, "0")).data).toEqual(expected);
    }
  });

  it("of values beyond float32 is refused", async () => {
    const order = small({ dtype: "float64", type: "double", values: ramp(60).map((v) => (v === 7 ? 1e39 : v)) });
    await expect(takeIn(await scratchFolder(), order)).rejects.toThrow(/expected values that float32 can hold/);
  });

  it("reads the voxels of its source once, twice where the stored type depends on them", async () => {
    const kept = await takeIn(await scratchFolder(), small({}));
    expect(kept.bytesRead).toBe(120);
    const judged = await takeIn(await scratchFolder(), small({ dtype: "int32", type: "int" }));
    expect(judged.bytesRead).toBe(2 * 240);
  });

  it("of a mirrored scan has its slices in reverse order in the same frame, from a compressed file too", async () => {
    for (const gzip of [false, true]) {
      const folder = await scratchFolder();
      const { record, store } = await takeIn(folder, small({ gzip }), { mirror: true });
      const planes = [4, 3, 2, 1, 0].flatMap((z) => ramp(60).slice(z * 12, z * 12 + 12));
      expect((await level(store, "0")).data).toEqual(planes);
      expect(record.volume.sha256).toBe(
        createHash("sha256")
          .update(bytesOf(planes, "uint16", true))
          .digest("hex"),
      );
      expect(record.volume.direction).toEqual([1, 0, 0, 0, 1, 0, 0, 0, 1]);
      expect(record.conversions.join(" ")).toMatch(/reversed/);
      expect(await readdir(join(folder, "specimens", record.id))).toEqual(["scan.ome.zarr", "specimen.json"]);
      expect(await readdir(join(folder, "unfinished"))).toEqual([]);
    }
  });

  it("takes the person's spacing, and turns the origin by the same factor where the unit was missing", async () => {
    const lines = ["space: LPS", "space directions: (40,0,0) (0,40,0) (0,0,40)", "space origin: (400,0,-80)"];
    const { record } = await takeIn(await scratchFolder(), small({ lines }), { spacing: [0.04, 0.04, 0.04] });
    expect(record.volume.spacing).toEqual([0.04, 0.04, 0.04]);
    expect(record.volume.origin.map((v) => Number(v.toFixed(9)))).toEqual([0.4, 0, -0.08]);
  });

  it("of thick planes is written in thinner slabs with the same bytes", async () => {
    // Budgets are computed by hand: 32 planes up to 256 MiB, fewer above, never fewer than two.
    expect([2 ** 20, 2 ** 23, 2 ** 24, 2 ** 25, 2 ** 30].map(slabPlanesFor)).toEqual([32, 32, 16, 8, 2]);
    const random = seeded(3);
    const grid = plainGrid([70, 50, 90], [0.04, 0.04, 0.04]);
    const voxels = Uint16Array.from({ length: 70 * 50 * 90 }, () => Math.floor(random() * 65536));
    const stores: Record<string, string>[] = [];
    for (const slabPlanes of [32, 8, 2]) {
      const folder = await scratchFolder();
      const source = sourceFromSlabs("v", grid, "uint16", (z0, z1, out) => out.set(voxels.subarray(z0 * 3500, z1 * 3500)));
      await makeSpecimen(source, { ...options(folder), slabPlanes });
      const store = join(folder, "specimens", options(folder).id, "scan.ome.zarr");
      const files: Record<string, string> = {};
      for (const name of (await readdir(store, { recursive: true })).map(String).sort())
        if (/\/c\//.test(name) && !(await stat(join(store, name))).isDirectory())
          files[name] = createHash("sha256")
            .update(await readFile(join(store, name)))
            .digest("hex");
      stores.push(files);
    }
    expect(Object.keys(stores[0]!).length).toBeGreaterThan(2);
    expect(stores[1]).toEqual(stores[0]);
    expect(stores[2]).toEqual(stores[0]);
  });

  it("takes the disk room that was foretold, and at most 1.42 times its voxels when every side is 500 or more", async () => {
    const { bytesWritten } = await takeIn(await scratchFolder(), small({ sizes: [130, 65, 33], values: ramp(130 * 65 * 33) }));
    expect(storeBytes(plainGrid([130, 65, 33], [0.04, 0.04, 0.04]), "uint16")).toBe(bytesWritten);
    for (const [size, most] of [
      [[500, 500, 500], 1.42],
      [[1000, 1000, 1000], 1.3],
      [[2000, 2000, 1000], 1.2],
    ] as const)
      expect(storeBytes(plainGrid(size, [0.02, 0.02, 0.02]), "uint16") / (size[0] * size[1] * size[2] * 2)).toBeLessThan(most);
  });

  it("tells its progress from 0 to 1 with rate and time left by a given clock", async () => {
    const folder = await scratchFolder();
    const grid = plainGrid([8, 8, 10], [0.04, 0.04, 0.04]);
    const told: IntakeProgress[] = [];
    let clock = 0;
    const source = sourceFromSlabs("v", grid, "uint8", (_a, _b, out) => out.fill(1));
    await makeSpecimen(source, options(folder), { now: () => (clock += 500), onProgress: (p) => told.push(p) });
    expect(told[0]).toEqual({ progress: 0, step: "Taking in the scan", bytesPerSecond: null, secondsLeft: null });
    expect(told.at(-1)).toMatchObject({ progress: 1, secondsLeft: 0 });
    expect(told.map((p) => p.progress)).toEqual([...told.map((p) => p.progress)].sort((a, b) => a - b));
    expect(told.some((p) => p.bytesPerSecond !== null && p.bytesPerSecond > 0 && p.secondsLeft !== null)).toBe(true);
  });
});

function ramp(count: number): number[] {
  return Array.from({ length: count }, (_, k) => k % 50);
}

describe("the blur of a specimen", () => {
  it("is estimated where edges tell it, left open where not, and taken as given where it is known", async () => {
    const grid = plainGrid([64, 64, 40], [0.1, 0.1, 0.1]);
    // A cylinder along z with a linear rim of 3 voxels: about as wide as a Gaussian edge of sigma 3 / sqrt(12) (same variance).
    const draw = (z0: number, z1: number, out: StoredArray) => {
      for (let z = z0, k = 0; z < z1; z++)
        for (let y = 0; y < 64; y++)
          for (let x = 0; x < 64; x++, k++)
            out[k] = 1000 + 10000 * Math.min(1, Math.max(0, (20 - Math.hypot(x - 32, y - 32)) / 3));
    };
    const source = () => sourceFromSlabs("c", grid, "uint16", draw);
    const blurOf = async (more: Partial<SpecimenOptions>, from = source()) => {
      const folder = await scratchFolder();
      const { blurFwhmMm: _, ...open } = options(folder);
      return (await makeSpecimen(from, { ...open, spacing: grid.spacing, ...more })).record.volume.blurFwhmMm;
    };
    const expected = (3 / Math.sqrt(12)) * 2 * Math.sqrt(2 * Math.log(2)) * 0.1;
    const found = (await blurOf({}))!;
    expect(Math.abs(found / expected - 1)).toBeLessThan(0.15); // a linear rim is no Gaussian edge
    expect(found).toBe(Math.round(found * 1e6) / 1e6);
    expect(await blurOf({ blurFwhmMm: 0.2 })).toBe(0.2);
    expect(await blurOf({ blurFwhmMm: null })).toBeNull();
    expect(
      await blurOf(
        {},
        sourceFromSlabs("flat", grid, "uint16", (_a, _b, out) => out.fill(5)),
      ),
    ).toBeNull();
  });
});
