import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { nearTree } from "#test/shared/compare/populations.ts";
import { randomTree, seededRandom } from "#test/shared/compare/small-trees.ts";

let folder = "";
const at = (name: string) => join(folder, name);

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-shares-"));
  const random = seededRandom(12);
  const trees = Array.from({ length: 5 }, (_, k) => {
    const tree = randomTree(random, 6 + k, `t${k}`);
    const name = (id: string) => `t${k}${id}`;
    return {
      ...tree,
      root: name(tree.root!),
      nodes: tree.nodes.map((node) => ({
        ...node,
        id: name(node.id),
        position: [node.position[0]! + 30 * k, node.position[1]!, node.position[2]!],
      })),
      strands: tree.strands.map((strand) => ({ ...strand, id: name(strand.id), from: name(strand.from), to: name(strand.to) })),
    };
  });
  const write = (name: string, list: object[]) =>
    writeFile(at(name), JSON.stringify({ format: "chordae-trees", version: 1, unit: "mm", frame: "LPS", trees: list }));
  await write("r.chordae.json", trees);
  for (const k of [1, 2, 3])
    await write(
      `c${k}.chordae.json`,
      trees.map((tree) => nearTree(tree, random)),
    );
});
afterAll(() => rm(folder, { recursive: true, force: true }));

/** Runs a command in n shares, gathers them from files in another order, and gives what both ways print. */
async function spread(args: string[], n: number) {
  const files: string[] = [];
  for (let i = n; i >= 1; i--) {
    const { code, stdout } = await runVerb([...args, "--shard", `${i}/${n}`]);
    expect(code).toBe(0);
    files.push(at(`share-${n}-${i}.jsonl`));
    await writeFile(files[files.length - 1]!, stdout);
  }
  return runVerb(["gather", ...files, "--json"]);
}

describe("work spread in shares", () => {
  it.each([1, 2, 3, 7])("compare in %d shares says what it says in one piece", async (n) => {
    const args = ["compare", at("r.chordae.json"), at("c1.chordae.json")];
    const whole = await runVerb([...args, "--json"]);
    const gathered = await spread(args, n);
    expect(gathered.stdout).toBe(whole.stdout);
    expect(gathered.code).toBe(whole.code);
    expect((await runVerb([...args, "--json", "--jobs", `${n}`])).stdout).toBe(whole.stdout);
  });

  it.each([2, 3])("score in %d shares says what it says in one piece, with the same exit code", async (n) => {
    const args = [
      "score",
      ...[1, 2, 3].map((k) => at(`c${k}.chordae.json`)),
      "--reference",
      at("r.chordae.json"),
      "--least-accepted",
      "0.9",
    ];
    const whole = await runVerb([...args, "--json"]);
    const gathered = await spread(args, n);
    expect(gathered.stdout).toBe(whole.stdout);
    expect(gathered.code).toBe(whole.code);
  });

  it("refuses shares that are missing, doubled, cut short or of another work", async () => {
    const args = ["compare", at("r.chordae.json"), at("c2.chordae.json")];
    const share = async (i: number, name: string, more: string[] = []) => {
      const { stdout } = await runVerb([...args, ...more, "--shard", `${i}/2`]);
      await writeFile(at(name), stdout);
      return stdout;
    };
    const first = await share(1, "p1");
    await share(2, "p2");
    await share(2, "other", ["--merge", "0.5"]);
    await writeFile(at("cut"), first.split("\n").slice(0, -2).join("\n"));
    await writeFile(at("prose"), "not a share\n");
    const sentence = async (...names: string[]) => {
      const { code, stdout, stderr } = await runVerb(["gather", ...names.map(at)]);
      expect([code, stdout]).toEqual([2, ""]);
      return stderr;
    };
    expect(await sentence("p1")).toContain("share 2 missing");
    expect(await sentence("p1", "p1", "p2")).toContain("share 1 twice");
    expect(await sentence("p1", "other")).toContain("another work");
    expect(await sentence("cut", "p2")).toContain("cut short");
    expect(await sentence("prose")).toContain("prose, line 1");
    expect(await sentence("absent")).toContain("absent");
  });

  it("refuses a share that does not exist", async () => {
    for (const shard of ["0/2", "3/2", "1", "a/b"]) {
      expect((await runVerb(["compare", at("r.chordae.json"), at("c1.chordae.json"), "--shard", shard])).code).toBe(2);
    }
  });
});
