import { existsSync } from "node:fs";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { runVerb } from "#test/main/cli/run-verb.ts";

// Source of exit codes and keys: the command line's contract. The scan and its true trees: `tautline phantom`.
interface Tree {
  id: string;
  root: string | null;
  nodes: { id: string; kind: string; position: number[] }[];
  strands: { id: string; points: number[][]; radii: (number | null)[]; madeBy: [number, number, string][]; via: number[][] }[];
}

let folder = "";
const at = (name: string) => join(folder, name);
let truth: { trees: Tree[]; volume: { sha256: string } };
let click = "";
const scan = () => at("volume.nrrd");

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-follow-"));
  await runVerb(["phantom", "--out", folder, "--seed", "31", "--size", "128,128,128", "--trees", "1"]);
  truth = JSON.parse(await readFile(at("true.chordae.json"), "utf8"));
  const { points } = truth.trees[0]!.strands[1]!;
  click = points[points.length >> 1]!.join(",");
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe("tautline follow", () => {
  it("proposes a tree, writes it as a valid file, and gives the same again", { timeout: 120_000 }, async () => {
    const out = at("proposed.chordae.json");
    const first = await runVerb(["follow", scan(), "--at", click, "--polarity", "bright", "--out", out, "--json"]);
    expect(first.code).toBe(0);
    const { tree } = JSON.parse(first.stdout) as { tree: Tree };
    expect(tree.nodes.some(({ id }) => id === tree.root)).toBe(true);
    for (const strand of tree.strands) {
      expect(strand.radii).toHaveLength(strand.points.length);
      expect(strand.madeBy).toEqual([[0, strand.points.length - 1, "follow"]]);
    }
    const file = JSON.parse(await readFile(out, "utf8"));
    expect(file.trees).toEqual([tree]);
    expect(file.volume.sha256).toBe(truth.volume.sha256);
    expect((await runVerb(["check", out, "--json"])).code).toBeLessThanOrEqual(1);
    const compared = JSON.parse((await runVerb(["compare", at("true.chordae.json"), out, "--json"])).stdout);
    expect(compared.whole.detection.length.recall).toBeGreaterThan(0.85);
    expect(compared.whole.detection.length.precision).toBeGreaterThan(0.9);
    const second = await runVerb(["follow", scan(), "--at", click, "--polarity", "bright", "--json"]);
    expect(second.stdout).toBe(first.stdout);
  });

  it("says that there is no string: null with a reason, exit 1, no file", async () => {
    const out = at("none.chordae.json");
    const { code, stdout } = await runVerb([
      "follow",
      scan(),
      "--at",
      "0.3,0.3,2.6",
      "--polarity",
      "bright",
      "--out",
      out,
      "--json",
    ]);
    expect(code).toBe(1);
    const { tree, reasons } = JSON.parse(stdout);
    expect(tree).toBeNull();
    expect(reasons.tree).toMatch(/No bright string is near/);
    expect(existsSync(out)).toBe(false);
  });

  it.each([
    [["--at", "-4,1,1"], /inside the scan/],
    [["--at=-4,1,1"], /inside the scan/],
    [["--at", "1,2"], /three numbers/],
    [["--at", "1,2,x"], /three numbers/],
    [[], /three numbers/],
    [["--at", "1,1,1", "--polarity", "grey"], /--polarity must be/],
    [["--at", "1,1,1", "--out", "/nowhere/at/all.chordae.json"], /there is no folder/],
  ])("refuses %j with exit 2 and nothing on standard output", async (options, words) => {
    const { code, stdout, stderr } = await runVerb(["follow", scan(), ...options]);
    expect(code).toBe(2);
    expect(stdout).toBe("");
    expect(stderr).toMatch(words);
  });

  it("ends with 130 when it is interrupted", async () => {
    const { code, stdout } = await runVerb(["follow", scan(), "--at", click], AbortSignal.abort());
    expect(code).toBe(130);
    expect(stdout).toBe("");
  });
});

describe("tautline overlooked", () => {
  it("lists a strand that is missing in the trees, and nothing when none is", { timeout: 120_000 }, async () => {
    const whole = await runVerb(["overlooked", scan(), "--trees", at("true.chordae.json"), "--json"]);
    expect(whole.code).toBe(0);
    expect(JSON.parse(whole.stdout)).toEqual({ stretches: [] });
    const longest = [...truth.trees[0]!.strands].sort((a, b) => b.points.length - a.points.length)[0]!;
    const strands = truth.trees[0]!.strands.filter(({ id }) => id !== longest.id);
    await writeFile(at("less.chordae.json"), JSON.stringify({ ...truth, trees: [{ ...truth.trees[0]!, strands }] }));
    const { code, stdout } = await runVerb(["overlooked", scan(), "--trees", at("less.chordae.json"), "--json"]);
    expect(code).toBe(0);
    const { stretches } = JSON.parse(stdout) as { stretches: { length: number; from: number[]; to: number[] }[] };
    expect(stretches).toHaveLength(1);
    expect(stretches[0]!.length).toBeGreaterThan(1);
    const ends = [longest.points[0]!, longest.points.at(-1)!];
    for (const place of [stretches[0]!.from, stretches[0]!.to]) {
      const away = ends.map((end) => Math.hypot(...end.map((mm, c) => mm - place[c]!)));
      expect(Math.min(...away)).toBeLessThan(0.6);
    }
    const sorted = stretches.map(({ length }) => length);
    expect(sorted).toEqual([...sorted].sort((a, b) => b - a));
  });

  it("refuses trees of another scan unless told otherwise", async () => {
    const other = { ...truth, trees: [], volume: { ...truth.volume, sha256: "0".repeat(64) } };
    await writeFile(at("other.chordae.json"), JSON.stringify(other));
    const refused = await runVerb(["overlooked", scan(), "--trees", at("other.chordae.json"), "--json"]);
    expect(refused.code).toBe(2);
    expect(refused.stdout).toBe("");
    expect(refused.stderr).toMatch(/--other-scan/);
    const { code, stdout } = await runVerb(["overlooked", scan(), "--trees", at("other.chordae.json"), "--other-scan", "--json"]);
    expect(code).toBe(0);
    expect(JSON.parse(stdout).stretches.length).toBeGreaterThan(0);
  });

  it("refuses a call without trees, and a minimum that is no length", async () => {
    expect((await runVerb(["overlooked", scan()])).code).toBe(2);
    expect((await runVerb(["overlooked", scan(), "--trees", at("true.chordae.json"), "--minimum", "0"])).code).toBe(2);
  });
});
