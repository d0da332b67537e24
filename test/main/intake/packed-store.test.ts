// A packed store as others read it: zarrita unpacks it level by level; the pyramid is that of the plain store, whose own tests
// hold it against a naive one.
import { mkdir, readdir, readFile, stat, writeFile } from "node:fs/promises";
import { join } from "node:path";
import FileSystemStore from "@zarrita/storage/fs";
import { describe, expect, it } from "vitest";
import * as zarr from "zarrita";
import { openStorePyramid } from "#main/engine/store-reader.ts";
import { CRASH_POINTS, type CrashPoint } from "#main/intake/crash-points.ts";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen, removeUnfinished, type SpecimenOptions } from "#main/intake/make-specimen.ts";
import { createStored, type StoredDtype } from "#shared/volume/dtype.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { ForgetfulDisk, Stopped } from "#test/main/intake/forgetful-disk.ts";
import { breachesOfOmeZarr } from "#test/main/intake/ome-zarr/check-ome-zarr.ts";
import { scratchFolder, seeded } from "#test/main/intake/written-by-hand.ts";

const GRID = plainGrid([70, 37, 67], [0.04, 0.04, 0.04]);
const PLANE = 70 * 37;

function scanOf(dtype: StoredDtype) {
  const random = seeded(11);
  const voxels = createStored(dtype, PLANE * 67);
  for (let n = 0; n < voxels.length; n++) voxels[n] = dtype === "float32" ? random() - 0.5 : Math.floor(random() * 200);
  return {
    voxels,
    source: () => sourceFromSlabs("valve", GRID, dtype, (z0, z1, out) => out.set(voxels.subarray(z0 * PLANE, z1 * PLANE))),
  };
}

const options = (library: string, id: string, more: Partial<SpecimenOptions> = {}): SpecimenOptions => ({
  library,
  id,
  name: "HB-07",
  created: 0,
  spacing: GRID.spacing,
  handedness: "confirmed",
  facts: {},
  synthetic: true,
  blurFwhmMm: null,
  isPacked: true,
  ...more,
});

async function inZarrita(store: string, path: string) {
  const array = await zarr.open.v3(zarr.root(new FileSystemStore(store)).resolve(path), { kind: "array" });
  return (await zarr.get(array)).data as Float32Array;
}

async function filesUnder(folder: string): Promise<string[]> {
  const found = await readdir(folder, { withFileTypes: true, recursive: true });
  return found.filter((entry) => entry.isFile()).map((entry) => join(entry.parentPath, entry.name));
}

const same = (a: ArrayLike<number>, b: ArrayLike<number>) =>
  a.length === b.length && Array.from(a).every((value, n) => value === b[n]);

describe("a packed store", () => {
  it.each(["uint8", "uint16", "float32"] as const)(
    "of %s is read by zarrita and by the engine, level by level, like a plain one",
    async (dtype) => {
      const { voxels, source } = scanOf(dtype);
      const library = await scratchFolder();
      const plain = await makeSpecimen(source(), options(library, "plain", { isPacked: false }));
      // Slabs of two slices: bricks come in sixteen parts each.
      const made = await makeSpecimen(source(), options(library, "packed", { slabPlanes: 2 }));
      expect(made.record.volume.sha256).toBe(plain.record.volume.sha256);
      expect([made.record.volume.packing, plain.record.volume.packing]).toEqual(["gzip", undefined]);
      expect(made.plainBytes).toBe(plain.storeBytes);
      const store = (id: string) => join(library, "specimens", id, "scan.ome.zarr");
      expect(await breachesOfOmeZarr(store("packed"))).toEqual([]);
      const engine = openStorePyramid(join(library, "specimens", "packed"), 16 * 65536);
      for (const path of ["0", "1"]) {
        const found = await inZarrita(store("packed"), path);
        expect(same(found, await inZarrita(store("plain"), path))).toBe(true);
        if (path === "0") expect(same(found, voxels)).toBe(true);
        const read = new Float32Array(found.length);
        engine.readBoxInto(Number(path), [0, 0, 0], engine.levels[Number(path)]!.size, read);
        expect(same(read, found)).toBe(true);
      }
      engine.close();
      // What is told of its size is what stands on the disk, and nothing plain is left beside it.
      const shards = (await filesUnder(store("packed"))).filter((file) => !file.endsWith("zarr.json"));
      expect(shards.map((file) => file.slice(store("packed").length)).sort()).toEqual(["/0/c/0/0/0", "/0/c/1/0/0", "/1/c/0/0/0"]);
      const sizes = await Promise.all(shards.map(async (file) => (await stat(file)).size));
      expect(made.storeBytes).toBe(sizes.reduce((a, b) => a + b));
      expect(made.storeBytes).toBeLessThan(plain.storeBytes);
    },
  );

  it("names a damaged file, whatever is wrong with it", async () => {
    const library = await scratchFolder();
    await makeSpecimen(scanOf("uint16").source(), options(library, "packed"));
    const home = join(library, "specimens", "packed");
    const file = join(home, "scan.ome.zarr", "0", "c", "0", "0", "0");
    const whole = await readFile(file);
    const read = () => {
      const engine = openStorePyramid(home);
      try {
        engine.readBoxInto(0, [0, 0, 0], [8, 8, 8], new Float32Array(512));
      } finally {
        engine.close();
      }
    };
    const flipped = Buffer.from(whole);
    for (let n = 40; n < 80; n++) flipped[n] = (flipped[n]! + 77) & 0xff;
    await writeFile(file, flipped);
    expect(read).toThrow(/0\/c\/0\/0\/0.*take the scan in again/);
    // The first brick's entry says more bytes than a brick can take: refused before they are fetched.
    const long = Buffer.from(whole);
    long.writeBigUInt64LE(1n << 40n, whole.length - 8196 + 8);
    await writeFile(file, long);
    expect(read).toThrow(/checksum/);
    await writeFile(file, whole);
    read();
  });

  it("stopped at any named moment leaves the library as it was, or with the specimen whole", async () => {
    const { source } = scanOf("uint8");
    const whole = new ForgetfulDisk();
    const reached = new Map<CrashPoint, number>();
    const at = (point: CrashPoint) => void reached.set(point, (reached.get(point) ?? 0) + 1);
    await whole.makeFolder("library");
    await whole.syncFolder("");
    await makeSpecimen(source(), options("library", "packed"), { files: whole, at });
    expect(CRASH_POINTS.filter((point) => !reached.get(point))).toEqual([]);
    const complete = [...whole.files(true).keys()];
    expect(complete).toHaveLength(7);
    for (const point of CRASH_POINTS)
      for (const n of new Set([1, reached.get(point)!])) {
        const disk = new ForgetfulDisk();
        await disk.makeFolder("library");
        await disk.syncFolder("");
        let count = 0;
        const stop = (here: CrashPoint) => {
          if (here === point && ++count === n) disk.stop();
        };
        await expect(makeSpecimen(source(), options("library", "packed"), { files: disk, at: stop })).rejects.toThrow(Stopped);
        for (const powerCut of [true, false]) {
          const folder = await scratchFolder();
          await mkdir(join(folder, "library"));
          await disk.copyTo(folder, powerCut);
          await removeUnfinished(join(folder, "library"));
          const left = (await filesUnder(folder)).map((file) => file.slice(folder.length + 1)).sort();
          expect([[], [...complete].sort()]).toContainEqual(left);
        }
      }
  });

  it("on a disk that becomes full leaves nothing behind and says so", async () => {
    const { source } = scanOf("uint8");
    const disk = new ForgetfulDisk();
    disk.room = 400_000;
    await disk.makeFolder("library");
    await expect(makeSpecimen(source(), options("library", "packed"), { files: disk })).rejects.toMatchObject({
      tag: "disk-full",
    });
    expect([...disk.files(false).keys()]).toEqual([]);
  });
});
