import { createHash } from "node:crypto";
import { mkdtemp, readdir, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "phantom-"));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

const make = (name: string, ...more: string[]) =>
  runVerb(["phantom", "--out", join(folder, name), "--seed", "3", "--size", "80,72,64", "--trees", "2", "--json", ...more]);

describe("tautline phantom", () => {
  it("writes a scan, its trees and passes, which name the scan's own hash", async () => {
    const { code, stdout } = await make("a");
    expect(code).toBe(0);
    const { files } = JSON.parse(stdout);
    expect(await readdir(join(folder, "a"))).toEqual(
      [
        "an-1.chordae.json",
        "an-2.chordae.json",
        "an-3.chordae.json",
        "errors.json",
        "pins.chordae.json",
        "true.chordae.json",
        "volume.nrrd",
      ].sort(),
    );
    const bytes = await readFile(files.volume);
    const voxels = bytes.subarray(bytes.length - 80 * 72 * 64 * 2);
    const sha256 = createHash("sha256").update(voxels).digest("hex");
    for (const path of [files.true, files.pins, ...files.passes]) {
      const file = parseChordaeBytes(await readFile(path), path);
      expect(file.volume?.sha256).toBe(sha256);
      expect(file.frame).toBe("LPS");
    }
    const source = await openScan(files.volume);
    expect(source.header).toMatchObject({ dtype: "uint16", size: [80, 72, 64], unit: "mm", frame: "LPS" });
    for (const [axis, spacing] of [0.04, 0.04, 0.04].entries())
      expect(source.header.headerSpacing![axis]).toBeCloseTo(spacing, 12);
    await source.close();
    expect(JSON.parse(await readFile(files.errors, "utf8"))).toMatchObject({ synthetic: true, seed: 3 });
  });

  it("writes the same bytes for the same options", async () => {
    await make("b");
    for (const name of await readdir(join(folder, "a")))
      expect((await readFile(join(folder, "b", name))).equals(await readFile(join(folder, "a", name)))).toBe(true);
  });

  it("refuses sizes and trees that do not fit, without leaving a folder", async () => {
    for (const [option, value, says] of [
      ["--size", "80,72", /three whole numbers/],
      ["--size", "8,8,8", /from 64/],
      ["--trees", "500", /has room for/],
      ["--noise", "-1", /--noise/],
    ] as const) {
      const args = ["phantom", "--out", join(folder, "no"), "--seed", "1", option, value];
      const { code, stdout, stderr } = await runVerb(args);
      expect([code, stdout]).toEqual([2, ""]);
      expect(stderr).toMatch(says);
    }
    expect((await runVerb(["phantom", "--out", join(folder, "no")])).code).toBe(2);
    expect(await readdir(folder)).not.toContain("no");
  });

  it("leaves nothing when it is interrupted", async () => {
    const stop = new AbortController();
    stop.abort();
    const { code, stdout } = await runVerb(["phantom", "--out", join(folder, "stopped"), "--seed", "1"], stop.signal);
    expect([code, stdout]).toEqual([130, ""]);
    expect(await readdir(folder)).not.toContain("stopped");
  });
});
