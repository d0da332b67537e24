import { createHash } from "node:crypto";
import { appendFile, readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { beforeAll, describe, expect, it } from "vitest";
import { CRASH_POINTS, type CrashPoint } from "#main/intake/crash-points.ts";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import { makeSpecimen, removeUnfinished, type SpecimenOptions } from "#main/intake/make-specimen.ts";
import { openScan } from "#main/intake/open-scan.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { ForgetfulDisk, Stopped } from "#test/main/intake/forgetful-disk.ts";
import { SETTLED, scratchFolder, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const GRID = plainGrid([40, 33, 70], [0.1, 0.1, 0.1]);
const PLANE = 40 * 33;
const VOXELS = Uint8Array.from({ length: PLANE * 70 }, (_, k) => (k * 31) % 251);
const HASH = createHash("sha256").update(VOXELS).digest("hex");

const source = () => sourceFromSlabs("valve", GRID, "uint8", (z0, z1, out) => out.set(VOXELS.subarray(z0 * PLANE, z1 * PLANE)));

const options = (id: string): SpecimenOptions => ({
  library: "library",
  id,
  name: "HB-07",
  created: 5,
  spacing: GRID.spacing,
  handedness: "confirmed",
  facts: {},
  synthetic: true,
  blurFwhmMm: null, // an estimate would only cost time here
});

/** A library with one specimen in it, all of it safe. */
async function libraryWithOne(): Promise<ForgetfulDisk> {
  const disk = new ForgetfulDisk();
  await disk.makeFolder("library");
  await disk.syncFolder("");
  await makeSpecimen(source(), options("first"), { files: disk });
  return disk;
}

/** Intakes a second specimen, stopping when `point` is reached for the n-th time; gives how often it was reached. */
async function intakeUntil(disk: ForgetfulDisk, point: CrashPoint | null, n: number): Promise<number> {
  let reached = 0;
  const at = (here: CrashPoint) => {
    if (here === point && ++reached === n) disk.stop();
  };
  await makeSpecimen(source(), options("second"), { files: disk, at });
  return reached;
}

function asText(files: Map<string, Uint8Array>): Map<string, string> {
  return new Map([...files].map(([path, bytes]) => [path, createHash("sha256").update(bytes).digest("hex")]));
}

/** How often an undisturbed intake passes each point. */
const reached = new Map<CrashPoint, number>();
await makeSpecimen(source(), options("counted"), {
  files: await libraryWithOne(),
  at: (point) => void reached.set(point, (reached.get(point) ?? 0) + 1),
});

describe("an intake that is stopped", () => {
  let before: Map<string, string>;
  let whole: Map<string, string>;

  beforeAll(async () => {
    const disk = await libraryWithOne();
    before = asText(disk.files(true));
    await intakeUntil(disk, null, 0);
    whole = asText(disk.files(true));
    expect(whole).toEqual(asText(disk.files(false)));
    expect(whole.size).toBe(2 * before.size);
  });

  const stops = CRASH_POINTS.flatMap((point) => {
    const count = reached.get(point) ?? 0;
    const times = [...new Set([1, Math.ceil(count / 2), count])];
    return times.map((n) => ({ point, n }));
  });

  it("passes every named point", () => {
    expect(CRASH_POINTS.filter((point) => !reached.get(point))).toEqual([]);
  });

  it.each(stops)("at '$point' number $n leaves the library as it was, or with the specimen whole", async ({ point, n }) => {
    const disk = await libraryWithOne();
    await expect(intakeUntil(disk, point, n)).rejects.toThrow(Stopped);
    for (const powerCut of [true, false]) {
      const folder = await scratchFolder();
      await disk.copyTo(folder, powerCut);
      await removeUnfinished(join(folder, "library"));
      const names = await readdir(join(folder, "library", "specimens"));
      const found = new Map<string, string>();
      for (const path of [...before.keys(), ...whole.keys()])
        await readFile(join(folder, path)).then(
          (bytes) => found.set(path, createHash("sha256").update(bytes).digest("hex")),
          () => {},
        );
      expect(await readdir(join(folder, "library"))).toEqual(["specimens"]);
      expect(names).toEqual(found.size > before.size ? ["first", "second"] : ["first"]);
      expect(found).toEqual(found.size > before.size ? whole : before);
      if (point === "name-synced") expect(found).toEqual(whole);
    }
  });

  it("by a disk that becomes full at any moment leaves nothing behind and says so", async () => {
    const disk = await libraryWithOne();
    const unlimited = 1e9;
    disk.room = unlimited;
    await intakeUntil(disk, null, 0);
    const used = unlimited - disk.room;
    for (const share of [0, 0.1, 0.5, 0.9, 0.999]) {
      const full = await libraryWithOne();
      full.room = Math.floor(used * share);
      await expect(intakeUntil(full, null, 0)).rejects.toMatchObject({ tag: "disk-full" });
      expect(asText(full.files(false))).toEqual(before);
    }
  });

  it("before it begins, by a disk without room, writes nothing and says how much is needed", async () => {
    const disk = await libraryWithOne();
    disk.free = 210_000;
    const wrong = { tag: "disk-full", fields: { free: 210000 } };
    await expect(intakeUntil(disk, null, 0)).rejects.toMatchObject(wrong);
    await expect(intakeUntil(disk, null, 0)).rejects.toThrow(/needs \d+ MB .* 1 MB are free\. Nothing was written/);
    expect(asText(disk.files(false))).toEqual(before);
  });

  it("by the person, at any slice, leaves nothing behind", async () => {
    for (const slice of [0, 1, 40, 69]) {
      const disk = await libraryWithOne();
      const stop = new AbortController();
      const stopping = sourceFromSlabs("valve", GRID, "uint8", (z0, z1, out) => {
        if (z0 <= slice && slice < z1) stop.abort();
        out.set(VOXELS.subarray(z0 * PLANE, z1 * PLANE));
      });
      await expect(makeSpecimen(stopping, options("second"), { files: disk, signal: stop.signal })).rejects.toMatchObject({
        tag: "cancelled",
      });
      expect(asText(disk.files(false))).toEqual(before);
    }
  });

  it("by a source that changes meanwhile keeps nothing and says so", async () => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "a.nrrd", {
      sizes: [40, 33, 70],
      type: "uint8",
      dtype: "uint8",
      values: [...VOXELS],
      lines: SETTLED,
    });
    const disk = await libraryWithOne();
    const file = await openScan(path);
    let touched = false;
    const at = async (point: CrashPoint) => {
      if (point !== "bricks-written" || touched) return;
      touched = true;
      await appendFile(path, "x");
    };
    await expect(makeSpecimen(file, options("second"), { files: disk, at })).rejects.toThrow(/changed meanwhile/);
    await file.close();
    expect(asText(disk.files(false))).toEqual(before);
  });

  it("can be done again afterwards", async () => {
    const disk = await libraryWithOne();
    await expect(intakeUntil(disk, "shard-written", 2)).rejects.toThrow(Stopped);
    const folder = await scratchFolder();
    await disk.copyTo(folder, false);
    const library = join(folder, "library");
    await removeUnfinished(library);
    const { record } = await makeSpecimen(source(), { ...options("second"), library });
    expect(record.volume.sha256).toBe(HASH);
    expect(await readdir(join(library, "specimens"))).toEqual(["first", "second"]);
  });
});
