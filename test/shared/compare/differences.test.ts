import { describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { CompareOptions, CompareProgress } from "#shared/compare/comparison.ts";
import { DIFFERENCE_WORDS, differenceSentence, distanceWords, wholeNumbers } from "#shared/compare/comparison-words.ts";
import { differenceGroups } from "#shared/compare/differences.ts";
import { DIFFERENCE_GLYPHS } from "#shared/marks/difference-glyph.ts";
import { NODE_GLYPHS } from "#shared/marks/node-glyph.ts";
import type { PlainSet, PlainTree } from "#shared/trees/plain-trees.ts";

const OPTIONS: CompareOptions = {
  preset: "geometry",
  origin: "held",
  positionScale: 2,
  merge: 0.3,
  tolerance: 0.5,
  minimumDiameter: null,
  step: 0.05,
};

/** A tree of one trunk of 5 mm up from (x, 0, 0) and two branches; without `right`, only the left one. */
function tree(id: string, x: number, right = true): PlainTree {
  const nodes = [
    { id: `${id}r`, kind: "origin", position: [x, 0, 0] },
    { id: `${id}f`, kind: "fork", position: [x, 0, 5] },
    { id: `${id}1`, kind: "insertion", position: [x - 3, 0, 9] },
    { id: `${id}2`, kind: "insertion", position: [x + 3, 0, 9] },
  ];
  const strands = [
    { id: `${id}s1`, from: `${id}r`, to: `${id}f` },
    { id: `${id}s2`, from: `${id}f`, to: `${id}1` },
    { id: `${id}s3`, from: `${id}f`, to: `${id}2` },
  ];
  if (right) return { id, name: id.toUpperCase(), root: `${id}r`, nodes, strands };
  const fork = { id: `${id}f`, kind: "waypoint", position: [x, 0, 5] };
  return { id, name: id.toUpperCase(), root: `${id}r`, nodes: [nodes[0]!, fork, nodes[2]!], strands: strands.slice(0, 2) };
}

const groupsOf = (a: PlainSet, b: PlainSet) =>
  differenceGroups(
    compareSets(a, b, OPTIONS, () => 10_000),
    a,
    b,
  );

describe("differences of two sets", () => {
  it("are none between a set and itself", () => {
    const set = { trees: [tree("t1", 0), tree("t2", 20)] };
    expect(groupsOf(set, set)).toEqual([]);
  });

  it("name a branch that one side lacks from both points of view, at the fork", () => {
    const [whole, less] = [{ trees: [tree("t1", 0)] }, { trees: [tree("t1", 0, false)] }];
    const [missed] = groupsOf(whole, less).flatMap((group) => group.differences);
    expect(missed).toMatchObject({ kind: "missed-branch", a: "t1s3", b: null, treeA: "t1", treeB: "t1" });
    // The branch is 5 mm long and leaves the tolerance of 0.5 mm a little after its fork.
    expect(missed!.length).toBeGreaterThan(4);
    expect(missed!.length).toBeLessThan(5.1);
    expect(Math.hypot(missed!.at[0], missed!.at[1], missed!.at[2] - 5)).toBeLessThan(1);
    const extra = groupsOf(less, whole).flatMap((group) => group.differences);
    expect(extra.map((one) => one.kind)).toEqual(["extra-branch"]);
  });

  it("end with trees and cross-links of one side, at the tree's origin and at the link's middle", () => {
    const link = { id: "x1", from: "t1f", to: "t2f" };
    const a = { trees: [tree("t1", 0), tree("t2", 20), tree("t3", 60)], crossLinks: [link] };
    const b = { trees: [tree("t1", 0), tree("t2", 20), tree("t9", 90)] };
    const groups = groupsOf(a, b);
    expect(groups.map((group) => group.of)).toEqual(["only-a", "only-b", "links"]);
    const [onlyA, onlyB, links] = groups.map((group) => group.differences[0]!);
    expect(onlyA).toMatchObject({ kind: "tree-only-a", a: "t3", b: null, at: [60, 0, 0] });
    // A trunk of 5 mm and two branches of hypot(3, 4) = 5 mm.
    expect(onlyA!.length).toBeCloseTo(15, 9);
    expect(onlyB).toMatchObject({ kind: "tree-only-b", a: null, b: "t9", at: [90, 0, 0] });
    expect(links).toMatchObject({ kind: "link-only-a", a: "x1", at: [10, 0, 5] });
    expect(links!.length).toBeCloseTo(20, 9);
  });

  it("have keys of their own, words, a sentence and a glyph that no node and no other kind has", () => {
    const a = { trees: [tree("t1", 0), tree("t2", 20, false), tree("t3", 60)] };
    const b = { trees: [tree("t1", 0, false), tree("t2", 20), tree("t9", 90)] };
    const all = groupsOf(a, b).flatMap((group) => group.differences);
    expect(new Set(all.map((one) => one.key)).size).toBe(all.length);
    for (const one of all) expect(differenceSentence(one, a, b)).toMatch(/^[A-Z].*\d+\.\d\d mm.*\.$/);
    const glyphs = [...Object.values(DIFFERENCE_GLYPHS), ...Object.values(NODE_GLYPHS)].map(
      ({ fill, stroke }) => `${fill}|${stroke}`,
    );
    expect(new Set(glyphs).size).toBe(glyphs.length);
    expect(new Set(Object.values(DIFFERENCE_WORDS)).size).toBe(Object.keys(DIFFERENCE_GLYPHS).length);
  });
});

describe("the numbers on two whole sets", () => {
  it("say that a distance is proven, or between which two it lies", () => {
    expect(distanceWords({ ged: 3, lower: 3, upper: 3, exact: true })).toBe("3.00, proven");
    expect(distanceWords({ ged: 4, lower: 2.5, upper: 4, exact: false })).toBe("between 2.50 and 4.00");
  });

  it("are 0 and 1 between a set and itself, each with a definition of one sentence", () => {
    const set = { trees: [tree("t1", 0)] };
    const numbers = wholeNumbers(compareSets(set, set, OPTIONS, () => 10_000).whole, 0.5);
    expect(numbers.map(({ text }) => text)).toEqual(["0.00, proven", "0.000", "0.000", "1.000", "1.000", "0.000 mm"]);
    for (const { definition } of numbers) expect(definition).toMatch(/^[A-Z][^.]*(\.\d[^.]*)*\.$/);
  });

  it("are said to be none where a side is empty", () => {
    const numbers = wholeNumbers(compareSets({ trees: [] }, { trees: [tree("t1", 0)] }, OPTIONS, () => 10_000).whole, 0.5);
    const text = Object.fromEntries(numbers.map((one) => [one.name, one.text]));
    // Nothing to delete, all to insert: the pair-normalised distance is 1 by its definition.
    expect(text).toMatchObject({ reference: "none", pair: "1.000", recall: "none", precision: "0.000", mean: "none" });
  });
});

describe("a comparison under way", () => {
  it("tells its stages in order and every pair that begins", () => {
    const set = { trees: [tree("t1", 0), tree("t2", 20)] };
    const heard: CompareProgress[] = [];
    compareSets(
      set,
      set,
      OPTIONS,
      () => 10_000,
      (progress) => heard.push(progress),
    );
    expect(heard.map(({ stage, begun, of }) => `${stage} ${begun}/${of}`)).toEqual([
      "matching 0/0",
      "pairs 1/2",
      "pairs 2/2",
      "events 0/0",
      "whole 0/0",
    ]);
  });
});
