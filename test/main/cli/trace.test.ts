import { createHash } from "node:crypto";
import { existsSync } from "node:fs";
import { mkdir, mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { takeIn } from "#main/intake/take-in.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { curve, distanceToPolyline, drawTubes, lengthOf, line } from "#test/shared/tracing/tube-phantom.ts";

// The scan is written by hand here, header and bytes, from a phantom that shares no code with the tracer.
const S = 0.04;
const SIZE = [80, 48, 44] as const;
const FORK: Vec3 = [1.5, 0.92, 0.84];
const trunk = line([0.3, 0.92, 0.84], FORK);
const bow = curve((t): Vec3 => [FORK[0] + 1.4 * t, FORK[1] + 0.45 * Math.sin(1.5 * t), FORK[2] + 0.2 * t]);
const twig = line(FORK, [2.8, 0.3, 0.7]);

let folder = "";
let sha256 = "";
const at = (name: string) => join(folder, name);
const round = (p: Vec3): Vec3 => [Math.round(p[0] * 1e6) / 1e6, Math.round(p[1] * 1e6) / 1e6, Math.round(p[2] * 1e6) / 1e6];

interface Line {
  id: string;
  points?: Vec3[];
  radii?: (number | null)[];
  madeBy?: [number, number, string][];
  imageFit?: number | null;
  note?: string;
}
interface TreeFile {
  trees: { strands: Line[]; nodes: unknown[]; colourOfTheDay?: string }[];
  crossLinks: Line[];
  laboratory?: string;
  radii?: string;
}

function pins(more: object = {}, strands?: object[]) {
  return {
    format: "chordae-trees",
    version: 1,
    unit: "mm",
    frame: "LPS",
    laboratory: "kept",
    volume: { sha256, blurFwhm: 0.07 },
    trees: [
      {
        id: "t1",
        root: "n1",
        colourOfTheDay: "kept too",
        nodes: [
          { id: "n1", kind: "origin", position: round(trunk[0]!) },
          { id: "n2", kind: "fork", position: round(FORK) },
          { id: "n3", kind: "insertion", position: round(bow[bow.length - 1]!) },
          { id: "n4", kind: "insertion", position: round(twig[twig.length - 1]!) },
        ],
        strands: strands ?? [
          { id: "s1", from: "n1", to: "n2" },
          { id: "s2", from: "n2", to: "n3", via: [round(bow[300]!)], note: "kept" },
          { id: "s3", from: "n4", to: "n2", points: [round(twig[twig.length - 1]!), round(FORK)], radii: [0.1, null] },
        ],
      },
    ],
    crossLinks: [],
    ...more,
  };
}

async function write(name: string, value: object): Promise<string> {
  await writeFile(at(name), JSON.stringify(value));
  return at(name);
}

const trace = (pinsPath: string, out: string, ...more: string[]) =>
  runVerb(["trace", at("scan.nrrd"), "--pins", pinsPath, "--out", at(out), ...more]);
const read = async (name: string): Promise<TreeFile> => JSON.parse(await readFile(at(name), "utf8"));

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "trace-"));
  const phantom = drawTubes(
    SIZE,
    [S, S, S],
    [
      { points: trunk, radius: () => 0.14 },
      { points: bow, radius: () => 0.1 },
      { points: twig, radius: () => 0.1 },
    ],
    { fwhmMm: 0.07, noise: 0.1, seed: 9 },
  );
  const voxels = Uint16Array.from(phantom.voxels, Math.round);
  const bytes = new Uint8Array(voxels.buffer);
  sha256 = createHash("sha256").update(bytes).digest("hex");
  const header = [
    "NRRD0005",
    "type: uint16",
    "dimension: 3",
    "space: left-posterior-superior",
    `sizes: ${SIZE.join(" ")}`,
    `space directions: (${S},0,0) (0,${S},0) (0,0,${S})`,
    'space units: "mm" "mm" "mm"',
    "space origin: (0,0,0)",
    "endian: little",
    "encoding: raw",
    "",
    "",
  ].join("\n");
  await writeFile(at("scan.nrrd"), Buffer.concat([Buffer.from(header), bytes]));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe("tautline trace", () => {
  it("fills in what is missing, along the strings, and changes nothing else", async () => {
    const given = pins();
    const done = await trace(await write("pins.json", given), "out.chordae.json", "--json");
    expect(done.code).toBe(0);
    const answer = JSON.parse(done.stdout);
    expect(answer.strands.map((strand: { id: string }) => strand.id)).toEqual(["s1", "s2"]);
    expect(answer.failed).toEqual([]);
    expect(answer.seconds).toBeGreaterThan(0);
    const found = await read("out.chordae.json");
    const [s1, s2, s3] = found.trees[0]!.strands as [Line, Line, Line];
    expect(s3).toEqual(given.trees[0]!.strands[2]);
    expect(found.trees[0]!.nodes).toEqual(given.trees[0]!.nodes);
    expect([found.laboratory, found.trees[0]!.colourOfTheDay, s2.note]).toEqual(["kept", "kept too", "kept"]);
    expect(s2.points![0]).toEqual(round(FORK));
    expect(s2.points![s2.points!.length - 1]).toEqual(round(bow[bow.length - 1]!));
    expect(s2.madeBy).toEqual([[0, s2.points!.length - 1, "guide"]]);
    expect(s2.radii!.length).toBe(s2.points!.length);
    // Accuracy asked for: 0.25 voxel in the median, radius 5 % (diameter of about three blur widths), length 2 %.
    const errors = s2.points!.map((p) => distanceToPolyline(p, bow)).sort((a, b) => a - b);
    expect(errors[errors.length >> 1]! / S).toBeLessThan(0.25);
    const radii = s2.radii!.filter((radius) => radius !== null).sort((a, b) => a - b);
    expect(Math.abs(radii[radii.length >> 1]! / 0.1 - 1)).toBeLessThan(0.05);
    expect(Math.abs(lengthOf(s2.points!) / lengthOf(bow) - 1)).toBeLessThan(0.02);
    expect(s1.imageFit).toBeGreaterThan(0.7);
    expect(answer.strands[1].length).toBeCloseTo(lengthOf(s2.points!), 5);
  });

  it("gives the same bytes again, the same places from a specimen of a library, and leaves a finished file as it is", async () => {
    const path = await write("pins.json", pins());
    expect((await trace(path, "again.chordae.json")).code).toBe(0);
    expect(await readFile(at("again.chordae.json"))).toEqual(await readFile(at("out.chordae.json")));
    await mkdir(at("library"), { recursive: true });
    const made = await takeIn({
      path: at("scan.nrrd"),
      library: at("library"),
      id: "specimenforthetrace",
      name: "made for this test",
      created: 0,
      spacing: [S, S, S],
      handedness: "unknown",
      facts: {},
    });
    expect(made.record.volume.sha256).toBe(sha256);
    const specimen = at("library/specimens/specimenforthetrace");
    const done = await runVerb(["trace", specimen, "--pins", path, "--out", at("stored.chordae.json")]);
    expect(done.code).toBe(0);
    // The specimen's blur is not known, so radii are raw there; the geometry is the same to the last digit.
    const [a, b] = [await read("out.chordae.json"), await read("stored.chordae.json")];
    expect(b.trees[0]!.strands.map((strand) => strand.points)).toEqual(a.trees[0]!.strands.map((strand) => strand.points));
    const twice = await runVerb(["trace", at("scan.nrrd"), "--pins", at("out.chordae.json"), "--out", at("twice.chordae.json")]);
    expect(twice.code).toBe(0);
    expect(await read("twice.chordae.json")).toEqual(a);
  });

  it("measures radii only where only these are missing", async () => {
    const before = await read("out.chordae.json");
    const { radii: _gone, ...bare } = before.trees[0]!.strands[1]!;
    const path = await write("bare.json", pins({}, [{ ...bare, from: "n2", to: "n3" }]));
    expect((await trace(path, "radii.chordae.json")).code).toBe(0);
    const strand = (await read("radii.chordae.json")).trees[0]!.strands[0]!;
    expect({ ...strand, radii: undefined }).toEqual({ ...bare, radii: undefined });
    const radii = strand.radii!.filter((radius) => radius !== null).sort((a, b) => a - b);
    expect(Math.abs(radii[radii.length >> 1]! / 0.1 - 1)).toBeLessThan(0.05);
  });

  it("writes a strand straight that the image does not show, says so and exits 1", async () => {
    const nodes = [
      { id: "n1", kind: "origin", position: [0.2, 1.7, 1.6] },
      { id: "n2", kind: "open", position: [2.2, 1.75, 0.15] },
    ];
    const tree = { id: "t1", root: "n1", nodes, strands: [{ id: "s1", from: "n1", to: "n2" }] };
    const done = await trace(await write("nothing.json", pins({ trees: [tree] })), "straight.chordae.json", "--json");
    expect(done.code).toBe(1);
    expect(JSON.parse(done.stdout).failed).toEqual(["s1"]);
    expect(done.stderr).toContain("s1: no string could be followed");
    const [strand] = (await read("straight.chordae.json")).trees[0]!.strands as [Line];
    expect(strand.imageFit).toBeNull();
    expect(strand.madeBy).toEqual([[0, strand.points!.length - 1, "straight"]]);
  });

  it("refuses trees of another scan unless told to go on, and warns when a file names none", async () => {
    const other = await write("other.json", pins({ volume: { sha256: "0".repeat(64), blurFwhm: 0.07 } }));
    const refused = await trace(other, "never.chordae.json");
    expect([refused.code, refused.stdout]).toEqual([2, ""]);
    expect(refused.stderr).toContain("--other-scan");
    expect(existsSync(at("never.chordae.json"))).toBe(false);
    expect((await trace(other, "other.chordae.json", "--other-scan")).code).toBe(0);
    const derived = pins({ volume: { sha256: "1".repeat(64), blurFwhm: 0.07, derivedFrom: { sha256, bin: 2 } } });
    const related = await trace(await write("derived.json", derived), "derived.chordae.json");
    expect([related.code, related.stderr.includes("another scan")]).toEqual([0, false]);
    const none = await trace(await write("none.json", pins({ volume: null })), "none.chordae.json");
    expect([none.code, none.stderr.includes("does not say which scan")]).toEqual([0, true]);
  });

  it("refuses nodes and pins outside the scan, naming them, and leaves nothing behind", async () => {
    const before = await readdir(folder);
    const far = pins();
    far.trees[0]!.nodes[2]!.position = [9, 9, 9];
    const node = await trace(await write("pins.json", far), "outside.chordae.json");
    expect([node.code, node.stdout]).toEqual([2, ""]);
    expect(node.stderr).toContain("node n3");
    const off = pins({}, [{ id: "s1", from: "n1", to: "n2", via: [[0.5, -1, 0.5]] }]);
    const pin = await trace(await write("pins.json", off), "outside.chordae.json");
    expect(pin.code).toBe(2);
    expect(pin.stderr).toContain("s1.via[0]");
    expect(await readdir(folder)).toEqual(before);
  });

  it("refuses what it cannot use: missing options, odd polarity, folders that are not there", async () => {
    const path = await write("pins.json", pins());
    for (const args of [
      ["trace", at("scan.nrrd"), "--out", at("x.json")],
      ["trace", at("scan.nrrd"), "--pins", path],
      ["trace", at("scan.nrrd"), "--pins", path, "--out", at("no/such/x.json")],
      ["trace", at("scan.nrrd"), "--pins", path, "--out", at("x.json"), "--polarity", "grey"],
      ["trace", at("missing.nrrd"), "--pins", path, "--out", at("x.json")],
      ["trace", at("scan.nrrd"), "--pins", at("missing.json"), "--out", at("x.json")],
    ]) {
      const done = await runVerb(args);
      expect([done.code, done.stdout]).toEqual([2, ""]);
    }
    expect(existsSync(at("x.json"))).toBe(false);
    const stopped = new AbortController();
    stopped.abort();
    const done = await runVerb(["trace", at("scan.nrrd"), "--pins", path, "--out", at("x.json")], stopped.signal);
    expect([done.code, existsSync(at("x.json"))]).toEqual([130, false]);
  });
});
