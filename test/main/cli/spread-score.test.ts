import { spawnSync } from "node:child_process";
import { mkdir, mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { nearTree } from "#test/shared/compare/populations.ts";
import { randomTree, seededRandom } from "#test/shared/compare/small-trees.ts";

const ROOT = join(import.meta.dirname, "../../..");
const CLI = join(process.env.TAUTLINE_DIST ?? join(ROOT, "dist"), "main/cli.mjs");
/** Debian's own program is asked for first: a Python from elsewhere does not see Debian's packages. */
const ENGINE = ["/usr/bin/snakemake", "snakemake"].find((program) => spawnSync(program, ["--version"]).status === 0);
if (ENGINE === undefined)
  console.log("skipped: scoring spread by a workflow engine: Snakemake is not installed (Debian: apt-get install snakemake)");

let folder = "";

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-spread-"));
  await mkdir(join(folder, "candidates"));
  const random = seededRandom(21);
  const tree = randomTree(random, 9);
  const write = (name: string, list: object[]) =>
    writeFile(join(folder, name), JSON.stringify({ format: "chordae-trees", version: 1, unit: "mm", frame: "LPS", trees: list }));
  await write("reference.chordae.json", [tree]);
  for (const k of [1, 2, 3]) await write(`candidates/c${k}.chordae.json`, [nearTree(tree, random)]);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe.skipIf(ENGINE === undefined)("scoring spread by a workflow engine (Snakemake)", () => {
  it("gives what one machine gives", async () => {
    const config = [
      "candidates=candidates",
      "reference=reference.chordae.json",
      "shares=2",
      "out=score",
      `tautline=${process.execPath} ${CLI}`,
    ];
    const workflow = join(ROOT, "assets/examples/spread-score.smk");
    const run = spawnSync(ENGINE!, ["--snakefile", workflow, "--cores", "2", "--config", ...config], {
      cwd: folder,
      encoding: "utf8",
    });
    expect(run.stderr).toContain("100%");
    const whole = spawnSync(process.execPath, [CLI, "score", "candidates", "--reference", "reference.chordae.json", "--json"], {
      cwd: folder,
      encoding: "utf8",
    });
    expect(await readFile(join(folder, "score/score.json"), "utf8")).toBe(whole.stdout);
  });
});
