import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { runVerb } from "#test/main/cli/run-verb.ts";

let folder = "";
const at = (name: string) => join(folder, name);

/** Keys that the exchange contract promises of `compare --json`. */
const PAIR_KEYS = [
  "a",
  "affinity",
  "b",
  "distances",
  "events",
  "exact",
  "ged",
  "lower",
  "normalised",
  "overlap",
  "script",
  "sizes",
  "upper",
];

function file(ends: number[][], more: object = {}) {
  const nodes = [
    { id: "n1", kind: "origin", position: [0, 0, 0], site: "head" },
    { id: "n2", kind: "fork", position: [0, 0, 6] },
    ...ends.map((position, k) => ({ id: `n${k + 3}`, kind: "insertion", position })),
  ];
  const strands = [
    {
      id: "s1",
      from: "n1",
      to: "n2",
      points: [
        [0, 0, 0],
        [0, 0, 3],
        [0, 0, 6],
      ],
      radii: [0.3, 0.3, 0.3],
    },
    ...ends.map((position, k) => ({
      id: `s${k + 2}`,
      from: "n2",
      to: `n${k + 3}`,
      points: [[0, 0, 6], position],
      radii: [0.2, null],
    })),
  ];
  return {
    format: "chordae-trees",
    version: 1,
    unit: "mm",
    frame: "LPS",
    trees: [{ id: "t1", name: "ALPM-01", root: "n1", nodes, strands }],
    ...more,
  };
}

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-verbs-"));
  const write = (name: string, value: unknown) => writeFile(at(name), typeof value === "string" ? value : JSON.stringify(value));
  await write(
    "a.chordae.json",
    file([
      [-3, 0, 12],
      [3, 0, 12],
      [0, 3, 12],
    ]),
  );
  await write(
    "b.chordae.json",
    file([
      [-3, 0, 12],
      [3, 0, 12],
    ]),
  );
  await write(
    "scan-frame.chordae.json",
    file(
      [
        [-3, 0, 12],
        [3, 0, 12],
      ],
      { frame: "scan" },
    ),
  );
  await write("newer.chordae.json", file([[-3, 0, 12]], { version: 2 }));
  await write("empty.chordae.json", "");
  await write("cut.chordae.json", JSON.stringify(file([[-3, 0, 12]])).slice(0, 200));
  const open = file([
    [-3, 0, 12],
    [3, 0, 12],
  ]);
  open.trees[0]!.nodes[3]!.kind = "open";
  await write("open.chordae.json", open);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe("tautline compare", () => {
  it("prints one JSON value with the keys of the contract, and finds the missed branch", async () => {
    const { code, stdout } = await runVerb(["compare", at("a.chordae.json"), at("b.chordae.json"), "--json"]);
    expect(code).toBe(0);
    const answer = JSON.parse(stdout);
    expect(Object.keys(answer).sort()).toEqual(["costs", "crossLinks", "onlyA", "onlyB", "pairs", "warnings", "whole"]);
    expect(Object.keys(answer.pairs[0]).sort()).toEqual(PAIR_KEYS);
    expect(Object.keys(answer.whole).sort()).toEqual([
      "detection",
      "distances",
      "exact",
      "ged",
      "lower",
      "normalised",
      "overlap",
      "upper",
    ]);
    expect(answer.costs).toEqual({ preset: "geometry", origin: "held", positionScale: 2, merge: 0.3 });
    expect(answer.pairs[0]).toMatchObject({
      a: "t1",
      b: "t1",
      ged: 2,
      exact: true,
      sizes: { a: { nodes: 5, strands: 4 }, b: { nodes: 4, strands: 3 } },
    });
    expect(answer.pairs[0].events).toMatchObject([{ event: "missed-branch", a: "s4", b: null }]);
    expect(answer.pairs[0].overlap.ot).toBeNull();
    expect(answer.pairs[0].overlap.reasons.ot).toContain("minimum diameter");
  });

  it("gives null for the position scale under structure costs", async () => {
    const { stdout } = await runVerb(["compare", at("a.chordae.json"), at("a.chordae.json"), "--costs", "structure", "--json"]);
    expect(JSON.parse(stdout)).toMatchObject({
      costs: { preset: "structure", positionScale: null },
      whole: { ged: 0, exact: true },
    });
  });

  it("refuses trees in another frame with one sentence and an empty standard output", async () => {
    const { code, stdout, stderr } = await runVerb(["compare", at("a.chordae.json"), at("scan-frame.chordae.json"), "--json"]);
    expect([code, stdout]).toEqual([2, ""]);
    expect(stderr).toContain("scan-frame.chordae.json");
    expect(stderr.trim().split("\n")).toHaveLength(1);
  });

  it.each(["newer", "empty", "cut", "absent"])("refuses a file that is %s, naming it", async (name) => {
    const { code, stdout, stderr } = await runVerb(["compare", at("a.chordae.json"), at(`${name}.chordae.json`)]);
    expect([code, stdout]).toEqual([2, ""]);
    expect(stderr).toContain(`${name}.chordae.json`);
    expect(stderr).not.toMatch(/ at .*:\d+:\d+/);
  });

  it("reports all faults of a command line together", async () => {
    const { code, stderr } = await runVerb(["compare", at("a.chordae.json"), "--csts=x", "--merge"]);
    expect(code).toBe(2);
    expect(stderr).toContain("--csts");
    expect(stderr).toContain("--merge needs a value");
    expect(stderr).toContain("needs 2 file");
    expect((await runVerb(["compare", at("a.chordae.json"), at("b.chordae.json"), "--merge=-1"])).code).toBe(2);
    expect((await runVerb(["compare", at("a.chordae.json"), at("b.chordae.json"), "--costs", "cheap"])).code).toBe(2);
  });

  it("exits 130 with nothing printed when it is interrupted", async () => {
    const interrupted = new AbortController();
    interrupted.abort();
    const { code, stdout } = await runVerb(["compare", at("a.chordae.json"), at("b.chordae.json")], interrupted.signal);
    expect([code, stdout]).toEqual([130, ""]);
  });
});

describe("tautline measure", () => {
  it("gives every strand, node and tree", async () => {
    const { code, stdout } = await runVerb(["measure", at("b.chordae.json"), "--json"]);
    const answer = JSON.parse(stdout);
    expect(code).toBe(0);
    expect(answer.totals).toMatchObject({ trees: 1, strands: 3, forks: 1, ends: 2 });
    expect(answer.totals.length).toBeCloseTo(6 + 2 * Math.hypot(3, 6), 9);
    expect(Object.keys(answer.strands[0]).sort()).toEqual(
      [
        "id",
        "length",
        "maxRadius",
        "meanArea",
        "meanRadius",
        "minRadius",
        "order",
        "slack",
        "straightLength",
        "tree",
        "trunk",
      ].sort(),
    );
    expect(Object.keys(answer.nodes[0]).sort()).toEqual([
      "branchingAngle",
      "id",
      "kind",
      "pathLength",
      "straightLength",
      "straightnessAngle",
      "tree",
    ]);
    expect(answer.nodes[1].branchingAngle).toBeCloseTo((2 * Math.atan2(3, 6) * 180) / Math.PI, 6);
  });
});

describe("tautline check", () => {
  it("exits 0 on a sound file and 1 when a finding is an error", async () => {
    expect(await runVerb(["check", at("b.chordae.json"), "--json"])).toMatchObject({ code: 0, stdout: '{"findings":[]}\n' });
    const { code, stdout } = await runVerb(["check", at("open.chordae.json"), "--json"]);
    expect(code).toBe(1);
    expect(JSON.parse(stdout).findings).toMatchObject([
      { code: "open-end", severity: "error", tree: "t1", at: { node: "n4", strand: null } },
    ]);
  });
});

describe("the command line as a whole", () => {
  it("lists its verbs, explains each, and refuses an unknown one", async () => {
    const overview = await runVerb([]);
    for (const verb of ["info", "intake", "measure", "check", "compare"]) {
      expect(overview.stdout).toContain(verb);
      expect((await runVerb(["help", verb])).stdout).toContain(`tautline ${verb}`);
    }
    expect(await runVerb(["frobnicate"])).toMatchObject({ code: 2, stdout: "" });
  });
});
