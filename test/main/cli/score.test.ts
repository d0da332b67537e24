import { mkdir, mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { nearTree } from "#test/shared/compare/populations.ts";
import { randomTree, seededRandom } from "#test/shared/compare/small-trees.ts";

let folder = "";
const at = (...names: string[]) => join(folder, ...names);

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-score-"));
  await mkdir(at("candidates"));
  const random = seededRandom(9);
  const spread = (id: string, shift: number) => {
    const tree = randomTree(random, 7, id);
    const name = (node: string) => `${id}${node}`;
    return {
      ...tree,
      root: name(tree.root!),
      nodes: tree.nodes.map((node) => ({
        ...node,
        id: name(node.id),
        position: [node.position[0]! + shift, node.position[1]!, node.position[2]!],
      })),
      strands: tree.strands.map((strand) => ({ ...strand, id: name(strand.id), from: name(strand.from), to: name(strand.to) })),
    };
  };
  const trees = ["t1", "t2", "t3"].map((id, k) => spread(id, 40 * k));
  const file = (list: object[]) => JSON.stringify({ format: "chordae-trees", version: 1, unit: "mm", frame: "LPS", trees: list });
  await writeFile(at("reference.chordae.json"), file(trees));
  await writeFile(at("candidates", "same.chordae.json"), file(trees));
  await writeFile(at("candidates", "one-missing.chordae.json"), file(trees.slice(0, 2)));
  await writeFile(at("candidates", "none.chordae.json"), file([]));
  await writeFile(at("an-1.chordae.json"), file(trees.map((tree) => nearTree(tree, random))));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

const scoreJson = async (...args: string[]) => {
  const { code, stdout } = await runVerb([
    "score",
    at("candidates"),
    "--reference",
    at("reference.chordae.json"),
    "--json",
    ...args,
  ]);
  return { code, answer: JSON.parse(stdout) };
};

describe("tautline score", () => {
  it("accepts the reference itself, fails an unmatched tree, and exits 1 while a gate fails", async () => {
    const { code, answer } = await scoreJson();
    expect(code).toBe(1);
    const shares = Object.fromEntries(
      answer.candidates.map((one: { candidate: string; acceptedShare: number }) => [one.candidate, one.acceptedShare]),
    );
    expect(shares).toEqual({ same: 1, "one-missing": 2 / 3, none: 0 });
    expect(answer.summary).toMatchObject({ candidates: 3, passed: 1, limit: 0.6 });
    expect(answer.summary.failedGates.map((gate: { candidate: string }) => gate.candidate)).toEqual(["none", "one-missing"]);
    const missing = answer.candidates.find((one: { candidate: string }) => one.candidate === "one-missing");
    expect(missing.trees[2]).toMatchObject({ tree: "t3", candidate: null, distance: null, accepted: false });
    expect(missing.acceptedAt).toEqual(new Array(10).fill(2 / 3));
    expect(missing.sensitivity.map((entry: { merge: number }) => entry.merge)).toEqual([0, 0.15, 0.3, 0.6]);
  });

  it("passes with gates that all candidates meet, and names the gate that one does not", async () => {
    expect((await scoreJson("--least-accepted", "0")).code).toBe(0);
    const { code, answer } = await scoreJson("--least-accepted", "0", "--least-recall", "0.5");
    expect(code).toBe(1);
    expect(answer.summary.failedGates).toMatchObject([{ candidate: "none", gate: "leastRecall", reached: 0 }]);
  });

  it("writes a self-contained report and a table, whole", async () => {
    const { code } = await scoreJson(
      "--out",
      at("report.html"),
      "--csv",
      at("table.csv"),
      "--annotator",
      at("an-1.chordae.json"),
    );
    expect(code).toBe(1);
    const report = await readFile(at("report.html"), "utf8");
    expect(report).toContain("Not a medical device");
    expect(report).toContain("straight strands");
    expect(report).toContain("an-1");
    expect(report).not.toMatch(/<script|https?:(?!\/\/www\.w3\.org\/2000\/svg)|gold standard|ground truth/i);
    const rows = (await readFile(at("table.csv"), "utf8")).trim().split("\r\n");
    expect(rows).toHaveLength(1 + 9);
    expect((await readdir(folder)).filter((name) => name.includes("unfinished"))).toEqual([]);
  });

  it("needs a reference, and a folder with tree files in it", async () => {
    expect(await runVerb(["score", at("candidates")])).toMatchObject({ code: 2, stdout: "" });
    await mkdir(at("bare"), { recursive: true });
    const { code, stderr } = await runVerb(["score", at("bare"), "--reference", at("reference.chordae.json")]);
    expect(code).toBe(2);
    expect(stderr).toContain("none in this folder");
  });
});
