import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { Agreement } from "#shared/agreement/study/agree.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { humanPasses } from "#shared/phantom/human-passes.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";

let folder: string;
const files: string[] = [];
let missed = 0;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-agree-"));
  for (const seed of [21, 22]) {
    const specimen = blockPhantom({ name: `HB-${seed}`, seed, size: [128, 128, 128], spacingMm: 0.1, trees: 3, noise: 0.05 });
    const { passes, errors } = humanPasses(specimen, seed);
    missed += errors.filter(({ event }) => event === "missed-branch").length;
    for (const { annotator, file } of passes) {
      const path = join(folder, `hb-${seed}-${annotator.toLowerCase()}.chordae.json`);
      await writeFile(path, JSON.stringify(file));
      files.push(path);
    }
  }
});

afterAll(() => rm(folder, { recursive: true, force: true }));

const agreed = async (args: readonly string[]) => {
  const { code, stdout } = await runVerb(["agree", ...args, "--json"]);
  expect(code).toBe(0);
  return JSON.parse(stdout) as Agreement;
};

describe("tautline agree", () => {
  it("finds what the generator left out, from files alone", async () => {
    const found = await agreed(files);
    expect(found.annotators).toEqual(["AN-1", "AN-2", "AN-3"]);
    expect(found.pairwise).toHaveLength(6);
    expect(missed).toBeGreaterThan(0);
    expect(found.detection.ends.pairs.find(({ a, b }) => a === "AN-1" && b === "AN-2")!.onlyOne).toBe(missed);
    // two specimens: values and range, no interval
    expect(found.detection.strands.overSpecimens).toMatchObject({
      jackknife: null,
      perSpecimen: [expect.any(Number), expect.any(Number)],
    });
  });

  it("says the same whatever the order of the files", async () => {
    expect(await agreed([...files].reverse())).toEqual(await agreed(files));
  });

  it("says the same in shares that gather joins", async () => {
    const shares = await Promise.all(
      [1, 2, 3].map(async (index) => {
        const { code, stdout } = await runVerb(["agree", ...files, "--shard", `${index}/3`]);
        expect(code).toBe(0);
        const path = join(folder, `share-${index}.jsonl`);
        await writeFile(path, stdout);
        return path;
      }),
    );
    const { code, stdout } = await runVerb(["gather", ...shares, "--json"]);
    expect(code).toBe(0);
    expect(JSON.parse(stdout)).toEqual(await agreed(files));
  });

  it("writes the item table, and tells a person the totals first", async () => {
    const table = join(folder, "items.csv");
    const { code, stdout } = await runVerb(["agree", ...files, "--items", table]);
    expect(code).toBe(0);
    expect(stdout.indexOf("Totals of each specimen")).toBeLessThan(stdout.indexOf("Positive agreement"));
    expect(stdout).toContain("there are 2");
    expect(await readFile(table, "utf8")).toMatch(/^specimen,kind,item,annotator,pass,marked,id,/);
  });

  it("refuses a doubled pass, another frame, a method that no file is by, and a file that is none, each in one sentence", async () => {
    const one = JSON.parse(await readFile(files[0]!, "utf8"));
    const doubled = join(folder, "doubled.chordae.json");
    await writeFile(doubled, JSON.stringify(one));
    const turned = join(folder, "turned.chordae.json");
    await writeFile(turned, JSON.stringify({ ...one, annotator: "AN-9", frame: one.frame === "LPS" ? "scan" : "LPS" }));
    const none = join(folder, "none.chordae.json");
    await writeFile(none, "nothing");
    for (const [args, words] of [
      [[files[0]!, doubled], /both claim to be pass 1 of AN-1/],
      [[files[0]!, turned], /different frames/],
      [[...files, "--method", "AN-7"], /no file is by that annotator/],
      [[files[0]!, none], /none\.chordae\.json/],
    ] as const) {
      const { code, stdout, stderr } = await runVerb(["agree", ...args, "--json"]);
      expect(code).toBe(2);
      expect(stdout).toBe("");
      expect(stderr).toMatch(words);
    }
  });
});
