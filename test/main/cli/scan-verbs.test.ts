import { spawn } from "node:child_process";
import { createHash } from "node:crypto";
import { chmod, mkdir, readdir, readFile, stat, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import { run } from "#main/cli/run.ts";
import { VERBS } from "#main/cli/verbs.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { tiffBytes } from "#test/main/intake/tiff-by-hand.ts";
import { bytesOf, type HandNrrd, nrrdBytes, SETTLED, scratchFolder, writeNrrd } from "#test/main/intake/written-by-hand.ts";

const CLI = fileURLToPath(new URL("../../../dist/main/cli.mjs", import.meta.url));
const VALUES = Array.from({ length: 130 * 126 * 125 }, (_, k) => (k * 7919) % 60000);
/** 5.2 x 5.04 x 5 mm of 40 um voxels: nothing to doubt. */
const order = (more: Partial<HandNrrd> = {}): HandNrrd => ({
  sizes: [130, 126, 125],
  type: "ushort",
  dtype: "uint16",
  values: VALUES,
  ...more,
});
const SMALL = Array.from({ length: 60 }, (_, k) => k * 100);
const small = (lines: readonly string[]): HandNrrd => ({
  sizes: [4, 3, 5],
  type: "ushort",
  dtype: "uint16",
  values: SMALL,
  lines,
});

describe("tautline info", () => {
  it("prints one JSON value with the agreed keys and nothing else", async () => {
    const path = await writeNrrd(await scratchFolder(), "valve.nrrd", order());
    const { code, stdout, stderr } = await runVerb(["info", path, "--json"]);
    expect(code).toBe(0);
    expect(stderr).toBe("");
    expect(JSON.parse(stdout)).toEqual({
      family: "NRRD",
      name: "valve.nrrd",
      bytes: (await stat(path)).size,
      size: [130, 126, 125],
      spacing: [0.04, 0.04, 0.04],
      headerSpacing: [0.04, 0.04, 0.04],
      unit: "mm",
      dtype: "uint16",
      range: { min: Math.min(...VALUES.slice(0, 60000)), max: 59999, sampled: false },
      frame: "LPS",
      warnings: [],
    });
  });

  it("warns of a missing unit and still ends with 0", async () => {
    const lines = ["space: LPS", "space directions: (40,0,0) (0,40,0) (0,0,40)"];
    const { code, stdout, stderr } = await runVerb([
      "info",
      await writeNrrd(await scratchFolder(), "a.nrrd", small(lines)),
      "--json",
    ]);
    expect(code).toBe(0);
    expect(JSON.parse(stdout)).toMatchObject({
      spacing: null,
      headerSpacing: [40, 40, 40],
      unit: null,
      warnings: [{ code: "no-unit" }],
    });
    expect(stderr).toBe("a.nrrd: The header names no unit of length.\n");
  });

  it.each([
    ["empty", Buffer.alloc(0), /empty\.nrrd: expected an NRRD file.*found an empty file/],
    ["text", Buffer.from("hello, this is no scan at all"), /text\.nrrd: expected an NRRD file.*begins with 'hello, this is n'/],
    [
      "dicom",
      Buffer.concat([Buffer.alloc(128), Buffer.from("DICM"), Buffer.alloc(300)]),
      /expected a transfer syntax in the file meta information, found none/,
    ],
    [
      "meta",
      Buffer.from("ObjectType = Image\nNDims = 3\n"),
      /expected a line 'ElementDataFile = \.\.\.' that ends the header, found none/,
    ],
    ["truncated", nrrdBytes(small(SETTLED)).subarray(0, 100), /truncated\.nrrd/],
    ["short", nrrdBytes(small(SETTLED)).subarray(0, -10), /expected 120 bytes of voxels as the header says, found 110 bytes/],
    ["magic", Buffer.from("NRRD0009\ntype: short\n\n"), /expected NRRD version 1 to 5, found version 9/],
    ["bare", Buffer.from("NRRD0004\n\n"), /expected a line 'type: \.\.\.' in the header, found none/],
  ])("says in one sentence what is wrong with a file that is %s, and ends with 2", async (name, bytes, sentence) => {
    const path = join(await scratchFolder(), `${name}.nrrd`);
    await writeFile(path, bytes);
    const { code, stdout, stderr } = await runVerb(["info", path, "--json"]);
    expect(code).toBe(2);
    expect(stdout).toBe("");
    expect(stderr).toMatch(sentence);
    expect(stderr.trim().split("\n")).toHaveLength(1);
  });

  it("says so where there is nothing, a folder without a scan, or no name at all", async () => {
    const folder = await scratchFolder();
    expect(await runVerb(["info", join(folder, "nowhere.nrrd")])).toMatchObject({ code: 2, stdout: "" });
    expect((await runVerb(["info", folder])).stderr).toMatch(/found a folder without Zarr metadata/);
    expect(await runVerb(["info"])).toMatchObject({ code: 2, stdout: "" });
  });

  it("goes by a file's first bytes, not by its name", async () => {
    const path = join(await scratchFolder(), "really-a-tiff.nrrd");
    const pages = [SMALL.slice(0, 12), SMALL.slice(12, 24)];
    await writeFile(path, tiffBytes({ width: 4, height: 3, pages, dtype: "uint16" }));
    expect(JSON.parse((await runVerb(["info", path, "--json"])).stdout)).toMatchObject({ family: "TIFF", size: [4, 3, 2] });
  });
});

describe("tautline intake", () => {
  it("makes a specimen that holds the scan, and says what it did", async () => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "valve.nrrd", order());
    const before = await readFile(path);
    const library = join(folder, "a new library");
    const { code, stdout } = await runVerb([
      "intake",
      path,
      "--library",
      library,
      "--species",
      "porcine",
      "--pressure",
      "100",
      "--json",
    ]);
    expect(code).toBe(0);
    const answer = JSON.parse(stdout);
    for (const key of ["seconds", "bytesRead", "bytesWritten", "peakMemoryBytes"]) expect(answer[key]).toBeGreaterThan(0);
    expect(answer.bytesRead).toBe(VALUES.length * 2);
    expect(answer.sha256).toBe(
      createHash("sha256")
        .update(bytesOf(VALUES, "uint16", true))
        .digest("hex"),
    );
    const text = await readFile(join(library, "specimens", answer.specimen, "specimen.json"), "utf8");
    const record = parseSpecimenRecord(JSON.parse(text), "specimen.json");
    expect(record).toMatchObject({
      name: "valve",
      facts: { species: "porcine", pressure: 100 },
      volume: { handedness: "unknown" },
    });
    expect(before.equals(await readFile(path))).toBe(true);
    expect((await readdir(library)).sort()).toEqual(["specimens", "unfinished"]);
    const info = JSON.parse((await runVerb(["info", join(library, "specimens", answer.specimen), "--json"])).stdout);
    expect(info).toMatchObject({
      family: "OME-Zarr",
      size: [130, 126, 125],
      spacing: [0.04, 0.04, 0.04],
      frame: "LPS",
      warnings: [],
    });
  });

  it.each([
    ["no unit", ["space: LPS", "space directions: (40,0,0) (0,40,0) (0,0,40)"], /names no unit/],
    ["a small side", SETTLED, /A side of 0\.16 mm lies outside 5-200 mm/],
    ["a spacing of 1", ["spacings: 1 1 1", 'units: "mm" "mm" "mm"'], /exactly 1 mm/],
  ])(
    "asks for the spacing where the header has %s, with exit 2, and takes it from the command line",
    async (_, lines, sentence) => {
      const folder = await scratchFolder();
      const path = await writeNrrd(folder, "a.nrrd", small(lines));
      const library = join(folder, "library");
      const refused = await runVerb(["intake", path, "--library", library, "--json"]);
      expect(refused).toMatchObject({ code: 2, stdout: "" });
      expect(refused.stderr).toMatch(sentence);
      expect(refused.stderr).toMatch(/--spacing/);
      await expect(readdir(library)).rejects.toThrow();
      const taken = await runVerb(["intake", path, "--library", library, "--spacing", "40,40,50", "--unit", "um", "--json"]);
      expect(taken.code).toBe(0);
      const { specimen } = JSON.parse(taken.stdout);
      const record = JSON.parse(await readFile(join(library, "specimens", specimen, "specimen.json"), "utf8"));
      expect(record.volume.spacing).toEqual([0.04, 0.04, 0.05]);
    },
  );

  it.each([
    [["--spacing", "0.04,0.04"], /three positive numbers/],
    [["--spacing", "0,1,1"], /three positive numbers/],
    [["--spacing", "1,1,1", "--unit", "pixel"], /--unit must be/],
    [["--unit", "um"], /needs it/],
    [["--handedness", "left"], /confirmed or unknown/],
    [["--pressure", "high"], /number of mmHg/],
    [["--channel", "-1"], /--channel/],
  ])("refuses %j", async (more, sentence) => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "a.nrrd", small(SETTLED));
    const { code, stdout, stderr } = await runVerb(["intake", path, "--library", join(folder, "library"), ...more]);
    expect([code, stdout]).toEqual([2, ""]);
    expect(stderr).toMatch(sentence);
  });

  it("keeps what a person says of handedness, mirror and polarity", async () => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "a.nrrd", small(SETTLED));
    const library = join(folder, "library");
    const said = ["--handedness", "confirmed", "--mirror", "--polarity", "dark", "--name", "HB-07", "--spacing", "0.04"];
    const { stdout } = await runVerb(["intake", path, "--library", library, ...said, "--json"]);
    const { specimen, sha256 } = JSON.parse(stdout);
    const record = JSON.parse(await readFile(join(library, "specimens", specimen, "specimen.json"), "utf8"));
    expect(record).toMatchObject({ name: "HB-07", polarity: "dark", volume: { handedness: "confirmed" } });
    const reversed = [4, 3, 2, 1, 0].flatMap((z) => SMALL.slice(z * 12, z * 12 + 12));
    expect(sha256).toBe(
      createHash("sha256")
        .update(bytesOf(reversed, "uint16", true))
        .digest("hex"),
    );
  });

  it("needs a library", async () => {
    const path = await writeNrrd(await scratchFolder(), "a.nrrd", small(SETTLED));
    expect((await runVerb(["intake", path])).stderr).toMatch(/--library/);
  });

  it("reads a scan that may not be written to, and ends with 3 where the library may not", async () => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "a.nrrd", small(SETTLED));
    await chmod(path, 0o444);
    // A file where the library's folder should be refuses writing for every user, the administrator included.
    await writeFile(join(folder, "library"), "no folder");
    const { code, stdout } = await runVerb(["intake", path, "--library", join(folder, "library"), "--spacing", "0.04"]);
    expect([code, stdout]).toEqual([3, ""]);
    await mkdir(join(folder, "good"));
    expect((await runVerb(["intake", path, "--library", join(folder, "good"), "--spacing", "0.04"])).code).toBe(0);
  });

  it("that is interrupted ends with 130, prints nothing and leaves no specimen", async () => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "valve.nrrd", order());
    const stop = new AbortController();
    let stdout = "";
    const code = await run(["intake", path, "--library", join(folder, "library")], VERBS, {
      stdout: (text) => {
        stdout += text;
      },
      stderr: (text) => {
        if (text.startsWith("Taking in the scan: 0 %")) stop.abort();
      },
      signal: stop.signal,
    });
    expect(stop.signal.aborted).toBe(true);
    expect([code, stdout]).toEqual([130, ""]);
    const left = await readdir(join(folder, "library"), { recursive: true }).catch(() => []);
    expect(left.map(String).filter((name) => name !== "specimens" && name !== "unfinished")).toEqual([]);
  });

  it("killed by kill -9 at five different moments leaves nothing half-made; the next intake is whole", async () => {
    const folder = await scratchFolder();
    const path = await writeNrrd(folder, "valve.nrrd", order());
    const library = join(folder, "library");
    const args = [CLI, "intake", path, "--library", library, "--json"];
    const whole: string[] = [];
    for (const delay of [150, 250, 350, 500, 700]) {
      const child = spawn(process.execPath, args, { stdio: "ignore" });
      await new Promise((resolve) => setTimeout(resolve, delay));
      child.kill("SIGKILL");
      await new Promise((resolve) =>
        child.exitCode === null && child.signalCode === null ? child.once("exit", resolve) : resolve(null),
      );
      for (const id of await readdir(join(library, "specimens")).catch(() => [])) {
        const text = await readFile(join(library, "specimens", id, "specimen.json"), "utf8");
        expect(parseSpecimenRecord(JSON.parse(text), id).volume.sha256).toHaveLength(64);
        if (!whole.includes(id)) whole.push(id);
      }
    }
    const last = await runVerb(["intake", path, "--library", library, "--json"]);
    expect(last.code).toBe(0);
    const specimens = await readdir(join(library, "specimens"));
    expect(specimens.sort()).toEqual([...whole, JSON.parse(last.stdout).specimen].sort());
    expect(await readdir(join(library, "unfinished"))).toEqual([]);
  });
});
