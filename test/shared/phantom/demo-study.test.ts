import { describe, expect, it } from "vitest";
import { structureFindings } from "#shared/checks/structure.ts";
import { parseChordaeFile } from "#shared/formats/chordae/read-chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { DEMO_HABITS } from "#shared/phantom/annotator-habits.ts";
import { demoBlock, demoStudy, demoStudyFiles } from "#shared/phantom/demo-study.ts";
import { chancesOf, habitualPass } from "#shared/phantom/habitual-pass.ts";

const study = demoStudy();
const files = demoStudyFiles(study);

describe("the demo study", () => {
  it("is five specimens, three annotators, two passes, all said to be synthetic", () => {
    expect(files).toHaveLength(30);
    expect(new Set(files.map(({ name }) => name)).size).toBe(30);
    for (const { file } of files) expect(file.synthetic).toBe(true);
    expect(new Set(study.passes.map(({ specimen }) => specimen))).toEqual(new Set(["HB-07", "HB-08", "HB-09", "HB-10", "HB-11"]));
  });

  it("holds sound tree files without a structural error", () => {
    for (const { name, file } of files) {
      const read = parseChordaeFile(writeChordaeFile(file), name);
      expect(structureFindings(read).filter(({ severity }) => severity === "error")).toEqual([]);
    }
  });

  it("draws another study from another seed, and the same one from the same", () => {
    const block = demoBlock("HB-08")!;
    const made = (seed: number) => habitualPass(block, DEMO_HABITS[0]!, 1, 1, "2026-12-01T09:00:00Z", seed);
    expect(made(3)).toEqual(made(3));
    expect(made(3).file.trees).not.toEqual(made(4).file.trees);
  });

  it("leaves the truth as it is where an annotator has no habit at all", () => {
    const block = demoBlock("HB-08")!;
    const none = { own: 0, pass: 0 };
    const perfect = {
      ...DEMO_HABITS[0]!,
      missed: 0,
      wrongSegments: 0,
      forkLowMm: 0,
      placeMm: none,
      endMm: none,
      endShortMm: 0,
      radiusSpread: 0,
      radiusFactor: 1,
      swayMm: 0,
    };
    const { file, mistakes } = habitualPass(block, perfect, 1, 1, "2026-12-01T09:00:00Z", 3);
    expect(mistakes.filter(({ event }) => event !== "moved-fork")).toEqual([]);
    file.trees.forEach((tree, t) => {
      const truth = block.truth.trees[t]!;
      expect(tree.nodes.map(({ id, kind }) => [id, kind])).toEqual(truth.nodes.map(({ id, kind }) => [id, kind]));
      tree.nodes.forEach(({ position }, n) => {
        for (const axis of [0, 1, 2] as const) expect(position[axis]).toBeCloseTo(truth.nodes[n]!.position[axis], 2);
      });
    });
  });

  it("lists exactly the branches that a pass lacks", () => {
    for (const { specimen, annotator, pass, file } of study.passes) {
      const truth = study.specimens.find(({ name }) => name === specimen)!.truth;
      const ends = (trees: typeof file.trees) =>
        trees.flatMap(({ nodes }) => nodes).filter(({ kind }) => kind === "insertion").length;
      const missed = study.mistakes.filter(
        (one) => one.specimen === specimen && one.annotator === annotator && one.pass === pass && one.event === "missed-branch",
      );
      expect(ends(truth.trees) - ends(file.trees)).toBe(missed.length);
    }
  });

  it("never lets a fork be left with nothing: one branch at each stays", () => {
    for (const specimen of study.specimens) {
      const missable = new Set(chancesOf(specimen).missable);
      for (const { nodes, strands } of specimen.truth.trees)
        for (const { id } of nodes.filter(({ kind }) => kind === "fork"))
          expect(strands.filter(({ from, id: strand }) => from === id && !missable.has(strand)).length).toBeGreaterThan(0);
    }
  });
});
