import { mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";
import { runVerb } from "#test/main/cli/run-verb.ts";
import { sampleFile } from "#test/shared/formats/chordae/sample-file.ts";

let folder: string;
const at = (name: string) => join(folder, name);
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "convert-"));
  await writeFile(at("in.chordae.json"), JSON.stringify(sampleFile()));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

const convert = async (...args: string[]) => {
  const { code, stdout, stderr } = await runVerb(["convert", ...args, "--json"]);
  return { code, stderr, stdout, json: stdout === "" ? null : JSON.parse(stdout) };
};

describe("tautline convert", () => {
  it("takes the format from the ending, writes it, and says what is lost", async () => {
    for (const [name, lost] of [
      ["out.chordae.json", /^$/],
      ["out.graphml", /grid.*specimen.*Landmarks.*does not know/],
      ["out.vtp", /Kinds of nodes.*not traced.*Pins.*NaN.*scan/],
    ] as const) {
      const { code, json } = await convert(at("in.chordae.json"), at(name));
      expect(code).toBe(0);
      expect(json.written).toEqual([at(name)]);
      expect(json.lost.join(" ")).toMatch(lost);
      expect((await readFile(at(name))).length).toBeGreaterThan(500);
    }
    expect(parseChordaeBytes(await readFile(at("out.chordae.json")), "f")).toEqual(sampleFile());
  });

  it("goes to GraphML and PolyData and back with every centreline", async () => {
    for (const name of ["there.graphml", "there.vtp"]) {
      await convert(at("in.chordae.json"), at(name));
      const { code } = await convert(at(name), at("back.chordae.json"));
      expect(code).toBe(0);
      const back = parseChordaeBytes(await readFile(at("back.chordae.json")), "f");
      const strand = back.trees[0]!.strands.find(({ id }) => id === "s1")!;
      expect(strand.points).toEqual(sampleFile().trees[0].strands[0].points);
      expect(strand.radii).toEqual([0.5, null, 0.4]);
    }
  });

  it("writes tables into a folder and reads them again", async () => {
    const { code, json } = await convert(at("in.chordae.json"), at("tables"), "--to", "tables");
    expect([code, json.written.length]).toEqual([0, 4]);
    expect((await readdir(at("tables"))).sort()).toEqual(["columns.csv", "nodes.csv", "strands.csv", "trees.csv"]);
    expect((await convert(at("tables"), at("from-tables.chordae.json"))).code).toBe(0);
  });

  it("writes a label volume when the file knows its scan, and refuses it when not", async () => {
    const { code, json } = await convert(at("in.chordae.json"), at("labels.nrrd"), "--labels", "strands");
    expect([code, json.written]).toEqual([0, [at("labels.nrrd")]]);
    expect((await readFile(at("labels.nrrd"), "latin1")).split("\n")).toContain("sizes: 10 20 30");
    await writeFile(at("bare.chordae.json"), JSON.stringify({ ...sampleFile(), volume: null }));
    const refused = await convert(at("bare.chordae.json"), at("none.nrrd"));
    expect([refused.code, refused.stdout]).toEqual([2, ""]);
    expect(refused.stderr).toMatch(/size and voxel size/);
    expect(await readdir(folder)).not.toContain("none.nrrd");
  });

  it("refuses formats it does not write, unknown endings, missing and malformed files, and leaves nothing", async () => {
    await writeFile(at("bad.graphml"), "<graphml><graph/>");
    await writeFile(at("trees.txt"), "hello");
    const before = await readdir(folder);
    for (const [args, says] of [
      [["in.chordae.json", "x", "--to", "lines"], /chordae or graphml or vtp or tables or labels, found 'lines'/],
      [["in.chordae.json", "x", "--to", "package"], /found 'package'/],
      [["in.chordae.json", "x.obj"], /--to must name one of/],
      [["missing.vtp", "x.graphml"], /nothing there/],
      [["trees.txt", "x.graphml"], /another ending/],
      [["bad.graphml", "x.vtp"], /bad.graphml/],
      [["in.chordae.json", "no/folder/x.vtp"], /no folder/],
      [["in.chordae.json", "bad.graphml", "--to", "tables"], /is a file/],
    ] as const) {
      const { code, stdout, stderr } = await convert(...args.map((arg, i) => (i < 2 ? at(arg) : arg)));
      expect([code, stdout]).toEqual([2, ""]);
      expect(stderr).toMatch(says);
    }
    expect(await readdir(folder)).toEqual(before);
  });
});
