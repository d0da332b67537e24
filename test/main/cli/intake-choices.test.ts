// The built command line, as a shell runs it; voxels are cut and averaged here from the definition.
import { execFile } from "node:child_process";
import { createHash } from "node:crypto";
import { existsSync } from "node:fs";
import { readdir, rename } from "node:fs/promises";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { beforeAll, describe, expect, it } from "vitest";
import { bytesOf, SETTLED, scratchFolder, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const CLI = join(process.env.TAUTLINE_DIST ?? fileURLToPath(new URL("../../../dist", import.meta.url)), "main", "cli.mjs");
const SIZE = [72, 30, 40] as const;
const VALUES = Array.from({ length: SIZE[0] * SIZE[1] * SIZE[2] }, (_, k) => ((k * 7919) % 500) + 3000);
const sha = (values: readonly number[]) =>
  createHash("sha256")
    .update(bytesOf(values, "uint16", true))
    .digest("hex");

function cli(...args: string[]): Promise<{ code: number; stdout: string; stderr: string }> {
  return new Promise((resolve) => {
    execFile(process.execPath, [CLI, ...args], (error, stdout, stderr) =>
      resolve({ code: error ? Number(error.code) : 0, stdout, stderr }),
    );
  });
}

describe("tautline intake", () => {
  let folder: string;
  let scan: string;
  const library = (name: string) => join(folder, name);
  const intake = (name: string, ...more: string[]) =>
    cli("intake", scan, "--library", library(name), "--spacing", "0.08", "--json", ...more);

  beforeAll(async () => {
    folder = await scratchFolder();
    scan = await writeNrrd(folder, "a.nrrd", { sizes: SIZE, type: "ushort", dtype: "uint16", values: VALUES, lines: SETTLED });
  });

  it("keeps a box, halved, and says what it is a part of", async () => {
    const done = await intake("part", "--crop", "10,4,6,70,30,40", "--bin", "2");
    expect(done.code).toBe(0);
    const kept: number[] = [];
    for (let z = 6; z < 40; z += 2)
      for (let y = 4; y < 30; y += 2)
        for (let x = 10; x < 70; x += 2) {
          let sum = 0;
          for (const [dx, dy, dz] of [
            [0, 0, 0],
            [1, 0, 0],
            [0, 1, 0],
            [1, 1, 0],
            [0, 0, 1],
            [1, 0, 1],
            [0, 1, 1],
            [1, 1, 1],
          ] as const)
            sum += VALUES[((z + dz) * SIZE[1] + y + dy) * SIZE[0] + x + dx]!;
          kept.push(Math.floor(sum / 8 + 0.5));
        }
    expect(JSON.parse(done.stdout)).toMatchObject({
      sha256: sha(kept),
      size: [30, 13, 17],
      kept: "plain",
      derivedFrom: { sha256: sha(VALUES), crop: [10, 4, 6, 70, 30, 40], bin: 2 },
      bytesRead: VALUES.length * 2,
    });
    expect(done.stderr).toContain("Kept are the voxels x 10 to 70, y 4 to 30, z 6 to 40");
  });

  it.each([
    [["--crop", "0,0,0,73,30,40"], "edges from 0 to 72 along x, found 0 to 73"],
    [["--crop", "0,9,0,72,9,40"], "an end after the beginning along y"],
    [["--crop", "0,0,0,72,30"], "--crop must be six whole numbers"],
    [["--crop", "0,0,0,72,30,-4"], "--crop must be six whole numbers"],
    [["--bin", "3"], "--bin must be 2"],
    [["--in-place"], "cannot be used where it lies: only an OME-Zarr can be"],
    [["--in-place", "--compress"], "cannot go with --compress"],
    [["--in-place", "--bin", "2"], "cannot go with --crop or --bin"],
    [["--in-place", "--mirror"], "cannot go with --mirror"],
  ])("refuses %j with its reason, and leaves no specimen", async (more, sentence) => {
    const done = await intake("refused", ...more);
    expect([done.code, done.stdout]).toEqual([2, ""]);
    expect(done.stderr).toContain(sentence);
    const specimens = join(library("refused"), "specimens");
    expect(existsSync(specimens) ? await readdir(specimens) : []).toEqual([]);
  });

  it("packs the store, with what that gains and costs told before and after", async () => {
    const done = await intake("packed", "--compress");
    const made = JSON.parse(done.stdout);
    expect([done.code, made.kept, made.sha256]).toEqual([0, "packed", sha(VALUES)]);
    expect(done.stderr).toMatch(
      /--compress: \d+ % of a plain store, measured on \d+ bricks of the whole scan; .* a brick opens \d+\.\d\d ms later/,
    );
    expect(done.stderr).toMatch(new RegExp(`packed store: ${made.storeBytes} bytes, \\d+ % of a plain one`));
    const folderOf = join(library("packed"), "specimens", made.specimen);
    const info = JSON.parse((await cli("info", folderOf, "--json")).stdout);
    expect([info.size, info.spacing, info.range.max]).toEqual([[...SIZE], [0.08, 0.08, 0.08], 3499]);
  });

  it("uses a store where it lies, misses it when it moved, and gives the specimen its new place", async () => {
    const first = JSON.parse((await intake("first")).stdout);
    const store = join(folder, "valve.ome.zarr");
    await rename(join(library("first"), "specimens", first.specimen, "scan.ome.zarr"), store);
    const placed = async (path: string) =>
      cli("intake", path, "--library", library("placed"), "--spacing", "0.08", "--in-place", "--json");
    const made = JSON.parse((await placed(store)).stdout);
    expect([made.kept, made.sha256]).toEqual(["in-place", sha(VALUES)]);
    expect(made.storeBytes).toBeLessThan(first.storeBytes / 2);
    const home = join(library("placed"), "specimens", made.specimen);
    expect(JSON.parse((await cli("info", home, "--json")).stdout)).toMatchObject({
      size: [...SIZE],
      spacing: [0.08, 0.08, 0.08],
    });
    const moved = join(folder, "moved.ome.zarr");
    await rename(store, moved);
    const missed = await cli("info", home, "--json");
    expect([missed.code, missed.stdout]).toEqual([2, ""]);
    expect(missed.stderr).toContain("Put it back where it was");
    const again = await placed(moved);
    expect(JSON.parse(again.stdout).specimen).toBe(made.specimen);
    expect(again.stderr).toContain("was given its new place");
    expect((await cli("info", home)).code).toBe(0);
    expect(await readdir(join(library("placed"), "specimens"))).toEqual([made.specimen]);
  });
});
