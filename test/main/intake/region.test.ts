// Crop and bin against arrays cut and averaged here, straight from the definition: crop in source voxels, x0 in, x1 out; each
// kept voxel the mean of its existing 2 x 2 x 2 voxels, integers rounded half up; position = origin + direction * (index * spacing).
import { createHash } from "node:crypto";
import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openStorePyramid } from "#main/engine/store-reader.ts";
import { makeSpecimen, type SpecimenOptions } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { Region } from "#shared/volume/region/region.ts";
import { bytesOf, scratchFolder, seeded, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const SPACING: Vec3 = [0.03, 0.04, 0.05];
const ORIGIN: Vec3 = [-3, 7.5, 12];
// An oblique, right-handed set of unit columns: a rotation about z by 30 degrees, then about x by 20.
const [C, S, D, T] = [Math.cos(Math.PI / 6), Math.sin(Math.PI / 6), Math.cos(Math.PI / 9), Math.sin(Math.PI / 9)];
const DIRECTION = [C, -S, 0, D * S, D * C, -T, T * S, T * C, D];
const axis = (k: number) => `(${[0, 1, 2].map((row) => DIRECTION[row * 3 + k]! * SPACING[k]!).join(",")})`;
const LINES = [
  "space: left-posterior-superior",
  `space origin: (${ORIGIN.join(",")})`,
  `space directions: ${axis(0)} ${axis(1)} ${axis(2)}`,
  'space units: "mm" "mm" "mm"',
];

const place = (origin: Vec3, spacing: Vec3, direction: readonly number[], i: Vec3): number[] =>
  [0, 1, 2].map((row) => origin[row]! + [0, 1, 2].reduce((sum, k) => sum + direction[row * 3 + k]! * i[k]! * spacing[k]!, 0));

/** Crop, then mean of existing children, one output voxel at a time. */
function slowRegion(values: readonly number[], size: Vec3, { crop, bin }: Region, integer: boolean) {
  const out = [0, 1, 2].map((k) => Math.ceil((crop[k + 3]! - crop[k]!) / bin));
  const kept: number[] = [];
  for (let z = 0; z < out[2]!; z++)
    for (let y = 0; y < out[1]!; y++)
      for (let x = 0; x < out[0]!; x++) {
        let [sum, count] = [0, 0];
        for (let cz = crop[2] + z * bin; cz < Math.min(crop[2] + (z + 1) * bin, crop[5]); cz++)
          for (let cy = crop[1] + y * bin; cy < Math.min(crop[1] + (y + 1) * bin, crop[4]); cy++)
            for (let cx = crop[0] + x * bin; cx < Math.min(crop[0] + (x + 1) * bin, crop[3]); cx++) {
              sum += values[(cz * size[1] + cy) * size[0] + cx]!;
              count++;
            }
        kept.push(integer ? Math.floor(sum / count + 0.5) : Math.fround(sum / count));
      }
  return { kept, size: out };
}

const options = (library: string): SpecimenOptions => ({
  library,
  id: "hbzero7aaaaaaaaaaaaa",
  name: "HB-07",
  created: 0,
  spacing: SPACING,
  handedness: "unknown",
  facts: {},
  synthetic: false,
  blurFwhmMm: null,
});

const sha = (values: readonly number[], dtype: string) =>
  createHash("sha256")
    .update(bytesOf(values, dtype, true))
    .digest("hex");

const CASES: { name: string; size: Vec3; region: Region; mirror?: boolean; dtype?: string; gzip?: boolean }[] = [
  { name: "a crop", size: [41, 37, 29], region: { crop: [5, 3, 2, 40, 37, 21], bin: 1 } },
  { name: "a bin of the whole, odd sides", size: [41, 37, 29], region: { crop: [0, 0, 0, 41, 37, 29], bin: 2 } },
  { name: "a crop and a bin", size: [41, 37, 29], region: { crop: [5, 4, 3, 36, 20, 28], bin: 2 } },
  { name: "one slice, binned", size: [20, 18, 9], region: { crop: [1, 1, 8, 20, 17, 9], bin: 2 } },
  { name: "a box of a mirrored scan", size: [24, 22, 31], region: { crop: [2, 0, 4, 23, 20, 18], bin: 2 }, mirror: true },
  {
    name: "a box of a packed mirrored scan",
    size: [24, 22, 31],
    region: { crop: [2, 0, 4, 23, 20, 18], bin: 1 },
    mirror: true,
    gzip: true,
  },
  { name: "a box of signed voxels", size: [24, 22, 31], region: { crop: [2, 1, 4, 23, 20, 19], bin: 2 }, dtype: "int16" },
  { name: "a box of float voxels", size: [24, 22, 31], region: { crop: [2, 1, 4, 23, 20, 19], bin: 2 }, dtype: "float32" },
];
const TYPES: Record<string, string> = { uint16: "ushort", int16: "short", float32: "float" };

describe("a part of a scan", () => {
  it.each(CASES)("$name holds the voxels of its definition, each where it lay", async ({ size, region, mirror, dtype, gzip }) => {
    const type = dtype ?? "uint16";
    const folder = await scratchFolder();
    const random = seeded(size[0] * 7 + region.bin);
    const values = Array.from({ length: size[0] * size[1] * size[2] }, () => {
      if (type === "float32") return Math.fround(random() * 10 - 5);
      return Math.floor(random() * 4000) - (type === "int16" ? 2000 : 0);
    });
    const path = await writeNrrd(folder, "a.nrrd", {
      sizes: size,
      type: TYPES[type]!,
      dtype: type,
      values,
      lines: LINES,
      ...(gzip ? { gzip } : {}),
    });
    const source = await openScan(path);
    const { record } = await makeSpecimen(source, { ...options(folder), region, ...(mirror ? { mirror } : {}) });
    await source.close();

    // The whole as it would be stored, and the box counted in it.
    const plane = size[0] * size[1];
    const whole = mirror
      ? Array.from({ length: size[2] }, (_, z) => values.slice((size[2] - 1 - z) * plane, (size[2] - z) * plane)).flat()
      : values;
    const [x0, y0, z0, x1, y1, z1] = region.crop;
    const crop = mirror ? ([x0, y0, size[2] - z1, x1, y1, size[2] - z0] as const) : region.crop;
    expect(record.volume.derivedFrom).toEqual({ sha256: sha(whole, type), crop, bin: region.bin });

    const slow = slowRegion(whole, size, { crop, bin: region.bin }, type !== "float32");
    expect(record.volume.size).toEqual(slow.size);
    expect(record.volume.sha256).toBe(sha(slow.kept, type));
    const home = join(folder, "specimens", record.id);
    const store = openStorePyramid(home);
    const [nx, ny, nz] = record.volume.size;
    const read = new Float32Array(nx * ny * nz);
    store.readBoxInto(0, [0, 0, 0], [nx, ny, nz], read);
    store.close();
    expect(Array.from(read)).toEqual(slow.kept);

    // Where a kept voxel lies: the mean of the places of its own voxels (of the two of a pair, also at an odd far edge).
    const { origin, spacing, direction } = record.volume;
    for (const i of [
      [0, 0, 0],
      [1, 0, 0],
      [nx - 1, ny - 1, nz - 1],
    ] as Vec3[]) {
      const first: Vec3 = [crop[0] + i[0] * region.bin, crop[1] + i[1] * region.bin, crop[2] + i[2] * region.bin];
      const a = place(ORIGIN, SPACING, DIRECTION, first);
      const last = first.map((v) => v + region.bin - 1) as unknown as Vec3;
      const b = place(ORIGIN, SPACING, DIRECTION, last);
      const found = place(origin, spacing, direction, i);
      for (const k of [0, 1, 2]) expect(found[k]).toBeCloseTo((a[k]! + b[k]!) / 2, 9);
    }
    const written = JSON.parse(await readFile(join(home, "specimen.json"), "utf8"));
    expect(parseSpecimenRecord(written, "specimen.json")).toEqual(record);
    expect(record.conversions.at(-1)).toMatch(/^Kept are the voxels x /);
  });

  it("keeps the brightest voxel at the place in millimetres that it has in the whole", async () => {
    const folder = await scratchFolder();
    const size: Vec3 = [30, 26, 22];
    const values = new Array(size[0] * size[1] * size[2]).fill(100);
    const bright: Vec3 = [17, 11, 9];
    values[(bright[2] * size[1] + bright[1]) * size[0] + bright[0]] = 4000;
    const path = await writeNrrd(folder, "a.nrrd", { sizes: size, type: "ushort", dtype: "uint16", values, lines: LINES });
    const brightest = async (id: string, region?: Region) => {
      const source = await openScan(path);
      const { record } = await makeSpecimen(source, { ...options(folder), id, ...(region ? { region } : {}) });
      await source.close();
      const store = openStorePyramid(join(folder, "specimens", id));
      const [nx, ny, nz] = record.volume.size;
      const read = new Float32Array(nx * ny * nz);
      store.readBoxInto(0, [0, 0, 0], [nx, ny, nz], read);
      store.close();
      const at = read.indexOf(read.reduce((a, b) => Math.max(a, b)));
      const index: Vec3 = [at % nx, Math.floor(at / nx) % ny, Math.floor(at / (nx * ny))];
      return { at: place(record.volume.origin, record.volume.spacing, record.volume.direction, index), record };
    };
    const whole = await brightest("wholeaaaaaaaaaaaaaaa");
    expect(whole.record.volume.derivedFrom).toBeUndefined();
    const crop = await brightest("cropaaaaaaaaaaaaaaaa", { crop: [10, 6, 4, 28, 20, 21], bin: 1 });
    for (const k of [0, 1, 2]) expect(crop.at[k]).toBeCloseTo(whole.at[k]!, 9);
    expect(crop.record.volume.derivedFrom!.sha256).toBe(whole.record.volume.sha256);
    // A mean of two along each axis moves the place by half a voxel at most, along the scan's own axes.
    const bin = await brightest("binaaaaaaaaaaaaaaaaa", { crop: [10, 6, 4, 28, 20, 21], bin: 2 });
    const away = Math.hypot(...bin.at.map((v, k) => v - whole.at[k]!));
    expect(away).toBeCloseTo(Math.hypot(...SPACING) / 2, 9);
  });

  it("of a part is a part of the same whole, also when it is used in place", async () => {
    const folder = await scratchFolder();
    const size: Vec3 = [40, 36, 32];
    const values = Array.from({ length: size[0] * size[1] * size[2] }, (_, k) => (k * 7919) % 3000);
    const path = await writeNrrd(folder, "a.nrrd", { sizes: size, type: "ushort", dtype: "uint16", values, lines: LINES });
    const take = async (from: string, id: string, more: Partial<SpecimenOptions>) => {
      const source = await openScan(from);
      const { record } = await makeSpecimen(source, { ...options(folder), spacing: source.header.headerSpacing!, id, ...more });
      await source.close();
      return record.volume;
    };
    const home = (id: string) => join(folder, "specimens", id);
    const first = await take(path, "firstaaaaaaaaaaaaaaa", { region: { crop: [3, 2, 1, 38, 33, 32], bin: 2 } });
    // Sides of 35, 31 and 31 voxels halved: 18 x 16 x 16. Two of those along x, from the third on, are four of the whole from 7 on.
    const second = await take(home("firstaaaaaaaaaaaaaaa"), "secondaaaaaaaaaaaaaa", {
      region: { crop: [2, 0, 0, 18, 16, 16], bin: 2 },
    });
    expect(second.derivedFrom).toEqual({ sha256: sha(values, "uint16"), crop: [7, 2, 1, 38, 33, 32], bin: 4 });
    const places = [second, first].map(({ origin, spacing, direction }) => place(origin, spacing, direction, [0, 0, 0]));
    const whole = (i: Vec3) => place(ORIGIN, SPACING, DIRECTION, i);
    // The middle of voxels 7 to 10, 2 to 5 and 1 to 4 of the whole.
    for (const k of [0, 1, 2]) expect(places[0]![k]).toBeCloseTo(whole([8.5, 3.5, 2.5])[k]!, 9);
    for (const k of [0, 1, 2]) expect(places[1]![k]).toBeCloseTo(whole([3.5, 2.5, 1.5])[k]!, 9);
    const copied = await take(home("firstaaaaaaaaaaaaaaa"), "copiedaaaaaaaaaaaaaa", {});
    expect(copied).toEqual(first);
    const mirrored = await take(home("firstaaaaaaaaaaaaaaa"), "mirroraaaaaaaaaaaaaa", { mirror: true });
    expect(mirrored.derivedFrom).toBeUndefined();
  });

  it("is the whole scan, without a word, when the box is all of it", async () => {
    const folder = await scratchFolder();
    const values = Array.from({ length: 60 }, (_, k) => k);
    const path = await writeNrrd(folder, "a.nrrd", { sizes: [5, 4, 3], type: "ushort", dtype: "uint16", values, lines: LINES });
    const source = await openScan(path);
    const { record } = await makeSpecimen(source, { ...options(folder), region: { crop: [0, 0, 0, 5, 4, 3], bin: 1 } });
    await source.close();
    expect(record.volume.derivedFrom).toBeUndefined();
    expect(record.volume.sha256).toBe(sha(values, "uint16"));
    expect(record.conversions).toEqual([]);
  });

  it.each([
    ["beyond the scan", [0, 0, 0, 6, 4, 3], "edges from 0 to 5 along x, found 0 to 6"],
    ["below 0", [0, -1, 0, 5, 4, 3], "edges from 0 to 4 along y, found -1 to 4"],
    ["empty", [0, 0, 2, 5, 4, 2], "an end after the beginning along z"],
    ["turned round", [4, 0, 0, 1, 4, 3], "an end after the beginning along x"],
    ["not whole", [0, 0.5, 0, 5, 4, 3], "whole numbers along y, found 0.5 to 4"],
  ])("with a box that is %s is refused before anything is written", async (_, crop, sentence) => {
    const folder = await scratchFolder();
    const values = Array.from({ length: 60 }, (_, k) => k);
    const path = await writeNrrd(folder, "a.nrrd", { sizes: [5, 4, 3], type: "ushort", dtype: "uint16", values, lines: LINES });
    const source = await openScan(path);
    const region = { crop, bin: 1 } as unknown as Region;
    await expect(makeSpecimen(source, { ...options(join(folder, "library")), region })).rejects.toMatchObject({
      tag: "misuse",
      message: expect.stringContaining(sentence),
    });
    await source.close();
    await expect(readFile(join(folder, "library"))).rejects.toMatchObject({ code: "ENOENT" });
  });
});
