import { describe, expect, it } from "vitest";
import { commonPaths } from "#shared/agreement/common-paths.ts";
import { type AgreementPass, canonicalPass, nodeItems, strandItems } from "#shared/agreement/items.ts";
import { selectionOf, threeTolerances } from "#shared/agreement/selection.ts";
import type { PlainTree } from "#shared/trees/plain-trees.ts";

type Place = readonly [number, number, number];

/** A tree with one fork: a trunk of 6 mm along x and one branch to each end. */
function tree(id: string, ends: readonly Place[], shift = 0, fork = 6): PlainTree {
  const at = (p: Place) => [p[0], p[1] + shift, p[2]];
  return {
    id,
    root: `${id}-n0`,
    nodes: [
      { id: `${id}-n0`, kind: "origin", position: at([0, 0, 0]) },
      { id: `${id}-n1`, kind: "fork", position: at([fork, 0, 0]) },
      ...ends.map((end, k) => ({ id: `${id}-n${k + 2}`, kind: "insertion", position: at(end) })),
    ],
    strands: [
      { id: `${id}-s0`, from: `${id}-n0`, to: `${id}-n1` },
      ...ends.map((_, k) => ({ id: `${id}-s${k + 1}`, from: `${id}-n1`, to: `${id}-n${k + 2}` })),
    ],
  };
}

const UP: Place = [12, 5, 0];
const DOWN: Place = [12, -5, 0];
const FAR: Place = [12, 0, 6];
const pass = (annotator: string, ...trees: PlainTree[]): AgreementPass => ({ annotator, pass: 1, set: { trees } });
const idsOf = (passes: readonly AgreementPass[], members: readonly number[]) =>
  members.map((k, p) => (k < 0 ? "-" : canonicalPass(passes[p]!.set, 0.3).strands[k]!.id));

const THREE = [
  pass("AN-1", tree("a", [UP, DOWN])),
  pass("AN-2", tree("b", [DOWN, UP], 0.1)),
  pass("AN-3", tree("c", [FAR, UP], 0.2)),
];

describe("items", () => {
  it("are the strands of all passes, each with at most one of each pass; single ones are items too", () => {
    const table = strandItems(THREE, 0.5, 0.3);
    expect(table.items.map(({ members }) => idsOf(THREE, members))).toEqual([
      ["a-s0", "b-s0", "c-s0"],
      ["a-s1", "b-s2", "c-s2"],
      ["a-s2", "b-s1", "-"],
      ["-", "-", "c-s1"],
    ]);
    expect(table).toMatchObject({ exact: true, indirectPairs: 0 });
  });

  it("do not depend on the order of the files", () => {
    const reference = strandItems(THREE, 0.5, 0.3);
    for (const order of [
      [1, 2, 0],
      [2, 1, 0],
      [0, 2, 1],
    ]) {
      const turned = strandItems(
        order.map((p) => THREE[p]!),
        0.5,
        0.3,
      );
      const back = turned.items.map(({ members }) => THREE.map((_, p) => members[order.indexOf(p)]));
      expect(back).toEqual(reference.items.map(({ members }) => members));
      expect(turned.affinity).toBe(reference.affinity);
      expect([...turned.matchedGates].sort()).toEqual([...reference.matchedGates].sort());
    }
  });

  it("are not matched beyond the tolerance, and the share near the gate is told", () => {
    const near = [pass("AN-1", tree("a", [UP, DOWN])), pass("AN-2", tree("b", [UP, DOWN], 0.52))];
    // parallel trunks 0.52 apart, branches less (their distance across is 0.52 cos of their slope)
    const table = strandItems(near, 0.5, 0.3);
    const selection = selectionOf(table, [0, 1], 0.5);
    expect(selection).toMatchObject({ matched: 2, union: 4, share: 0.5, title: "given that both marked it" });
    expect(table.missedGates).toHaveLength(1);
    expect(table.missedGates[0]).toBeCloseTo(1.04, 6);
    expect(selection.nearGateShare).toBeCloseTo(1 / 3, 9);
    expect(strandItems(near, 1, 0.3).items).toHaveLength(3);
  });

  it("of nodes need one type and the tolerance", () => {
    const moved = [pass("AN-1", tree("a", [UP, DOWN])), pass("AN-2", tree("b", [UP, DOWN], 0, 6.6))];
    expect(selectionOf(nodeItems(moved, 0.5, 0.3), [0, 1], 0.5)).toMatchObject({ matched: 3, union: 5 });
    expect(selectionOf(nodeItems(moved, 1, 0.3), [0, 1], 1)).toMatchObject({ matched: 4, union: 4 });
  });

  it("count pairs that only a third pass holds together", () => {
    const chain = [0, 0.4, 0.8].map((shift, k) => pass(`AN-${k}`, tree(`t${k}`, [UP, DOWN], shift)));
    const table = strandItems(chain, 0.5, 0.3);
    expect(table.items).toHaveLength(3);
    expect(table.indirectPairs).toBe(3);
  });

  it("of nothing, of one pass and of empty passes are no fault", () => {
    expect(strandItems([], 0.5, 0.3).items).toEqual([]);
    expect(strandItems([THREE[0]!], 0.5, 0.3).items).toHaveLength(3);
    const none = strandItems([pass("AN-1"), pass("AN-2")], 0.5, 0.3);
    expect(selectionOf(none, [0, 1], 0.5)).toMatchObject({ matched: 0, union: 0, share: null, nearGateShare: null });
    expect(selectionOf(none, [0, 1], 0.5).reasons.share).toContain("None");
  });

  it("are repeated at half, once and twice the tolerance", () => {
    expect(threeTolerances(0.5)).toEqual([0.25, 0.5, 1]);
  });
});

describe("common paths", () => {
  it("join one annotator's strand with another's two where the fork between is not common", () => {
    const straight: PlainTree = {
      id: "b",
      root: "b-n0",
      nodes: [
        { id: "b-n0", kind: "origin", position: [0, 0, 0] },
        { id: "b-n1", kind: "insertion", position: [12, 5, 0] },
      ],
      strands: [
        {
          id: "b-s0",
          from: "b-n0",
          to: "b-n1",
          points: [
            [0, 0, 0],
            [6, 0, 0],
            [12, 5, 0],
          ],
        },
      ],
    };
    const passes = [pass("AN-1", tree("a", [UP, DOWN])), pass("AN-2", straight)];
    const canonical = passes.map(({ set }) => canonicalPass(set, 0.3));
    const { paths, coverage } = commonPaths(canonical, nodeItems(passes, 0.5, 0.3), [0, 1]);
    expect(paths).toHaveLength(1);
    expect(paths[0]!.strands.map((way, p) => way.map((k) => canonical[p]!.strands[k]!.id))).toEqual([["a-s0", "a-s1"], ["b-s0"]]);
    // 6 + sqrt 61 of 6 + 2 sqrt 61
    expect(coverage[0]).toBeCloseTo((6 + Math.sqrt(61)) / (6 + 2 * Math.sqrt(61)), 9);
    expect(coverage[1]).toBe(1);
  });

  it("are the strands themselves where all nodes are common", () => {
    const passes = THREE.slice(0, 2);
    const canonical = passes.map(({ set }) => canonicalPass(set, 0.3));
    const { paths, coverage } = commonPaths(canonical, nodeItems(passes, 0.5, 0.3), [0, 1]);
    expect(paths).toHaveLength(3);
    expect(coverage).toEqual([1, 1]);
  });
});
