import { createHash } from "node:crypto";
import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import FileSystemStore from "@zarrita/storage/fs";
import { describe, expect, it } from "vitest";
import * as zarr from "zarrita";
import { makeSpecimen, type SpecimenOptions } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import { bytesOf, scratchFolder, seeded, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const options = (library: string): SpecimenOptions => ({
  library,
  id: "hbzero7aaaaaaaaaaaaa",
  name: "HB-07",
  created: 0,
  spacing: [0.04, 0.04, 0.04],
  handedness: "confirmed",
  facts: {},
  synthetic: true,
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
  ] as const)("has in zarrita, level by level, what a naive pyramid of %s gives", async (dtype, type, sizes, value) => {
    const folder = await scratchFolder();
    const random = seeded(7);
    const values = Array.from({ length: sizes[0] * sizes[1] * sizes[2] }, () => value(random()));
    const path = await writeNrrd(folder, "a.nrrd", { sizes, type, dtype, values });
    const source = await openScan(path);
    const { record } = await makeSpecimen(source, options(folder));
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
    let spacing = [1, 1, 1];
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
});
