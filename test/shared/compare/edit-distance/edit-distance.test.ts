import { describe, expect, it } from "vitest";
import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { type CostModel, geometryCosts, structureCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { editProblem, mapCost } from "#shared/compare/edit-distance/problem.ts";
import { randomTree, seededRandom, treeOf } from "#test/shared/compare/small-trees.ts";

const P = "r-1";
const Y = "r-b b-1 b-2";
const TRI = "r-b b-1 b-2 b-3";
const BB = "r-b b-1 b-c c-2 c-3";
const S = "r-m m-b b-1 b-2";
const BAL4 = "r-b b-c b-d c-1 c-2 d-3 d-4";
const CAT4 = "r-b b-1 b-c c-2 c-d d-3 d-4";

/** Distances of small trees under unit costs, recomputed by independent programs (project table of outside values). */
const TABLE: [string, string, string, number, number, number][] = [
  ["Y Y", Y, Y, 0, 0, 14],
  ["P Y", P, Y, 5, 5, 10],
  ["Y TRI", Y, TRI, 2, 2, 16],
  ["BB TRI", BB, TRI, 5, 5, 20],
  ["BB Y", BB, Y, 5, 5, 18],
  ["BAL4 CAT4", BAL4, CAT4, 2, 4, 30],
  ["Y S", Y, S, 3, 4, 16],
  ["BAL4 Y", BAL4, Y, 9, 10, 22],
];

const canonical = (text: string) => canonicalTree(treeOf(text), 0);

describe("edit distance of small trees", () => {
  it.each(TABLE)("%s has the tabulated distance under both origin rules, in both orders", (_, a, b, free, held, total) => {
    for (const [x, y] of [
      [a, b],
      [b, a],
    ] as const) {
      const freely = editDistance(canonical(x), canonical(y), structureCosts(), "free");
      const heldFast = editDistance(canonical(x), canonical(y), structureCosts(), "held");
      expect([freely.ged, freely.lower, freely.exact]).toEqual([free, free, true]);
      expect([heldFast.ged, heldFast.lower, heldFast.exact]).toEqual([held, held, true]);
      expect(freely.whole.a + freely.whole.b).toBe(total);
    }
  });

  it("tells BAL4 from CAT4 only by node types when the origin is free", () => {
    const untyped = (text: string): CanonicalTree => {
      const tree = canonical(text);
      return { ...tree, nodes: tree.nodes.map((node) => ({ ...node, type: "fork" as const })) };
    };
    expect(editDistance(untyped(BAL4), untyped(CAT4), structureCosts(), "free").ged).toBe(0);
  });

  // Unlabelled graphs: C6 against W7 = 7 stands in a general graph library's documentation (from memory); the others recomputed.
  it.each([
    [
      "cycle C6",
      "wheel W7",
      7,
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [3, 4],
        [4, 5],
        [5, 0],
      ],
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [3, 4],
        [4, 5],
        [5, 0],
        [6, 0],
        [6, 1],
        [6, 2],
        [6, 3],
        [6, 4],
        [6, 5],
      ],
    ],
    [
      "C4",
      "P4",
      1,
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [3, 0],
      ],
      [
        [0, 1],
        [1, 2],
        [2, 3],
      ],
    ],
    [
      "K4",
      "C4",
      2,
      [
        [0, 1],
        [0, 2],
        [0, 3],
        [1, 2],
        [1, 3],
        [2, 3],
      ],
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [3, 0],
      ],
    ],
    [
      "star K1,4",
      "path P5",
      4,
      [
        [0, 1],
        [0, 2],
        [0, 3],
        [0, 4],
      ],
      [
        [0, 1],
        [1, 2],
        [2, 3],
        [3, 4],
      ],
    ],
  ])("%s against %s costs %d", (_a, _b, expected, first, second) => {
    const graph = (edges: number[][]): CanonicalTree => ({
      nodes: [...new Set(edges.flat())].sort().map((k) => ({ id: `n${k}`, members: [`n${k}`], type: "fork", place: [0, 0, 0] })),
      strands: edges.map(([from, to], k) => ({ id: `s${k}`, members: [`s${k}`], from: from!, to: to!, length: 1 })),
      root: null,
    });
    const answer = editDistance(graph(first), graph(second), structureCosts(), "free");
    expect(answer.ged).toBe(expected);
    expect(answer.exact).toBe(true);
  });
});

/** Slow model: tries every node map. */
function byTryingAll(a: CanonicalTree, b: CanonicalTree, costs: CostModel, held: boolean): number {
  const problem = editProblem(a, b, costs);
  const map = new Int32Array(a.nodes.length).fill(-1);
  const used = new Set<number>();
  let best = Number.POSITIVE_INFINITY;
  const place = (i: number) => {
    if (i === a.nodes.length) {
      best = Math.min(best, mapCost(problem, map));
      return;
    }
    for (let j = -1; j < b.nodes.length; j++) {
      if (j >= 0 && used.has(j)) continue;
      if (held && (i === a.root) !== (j === b.root)) continue;
      map[i] = j;
      if (j >= 0) used.add(j);
      place(i + 1);
      used.delete(j);
    }
    map[i] = -1;
  };
  place(0);
  return best;
}

describe("edit distance of random trees", () => {
  const random = seededRandom(20261201);
  const pairs = Array.from({ length: 60 }, () => {
    const size = () => 1 + Math.floor(random() * 6);
    return [canonicalTree(randomTree(random, size()), 0), canonicalTree(randomTree(random, size()), 0)] as const;
  });

  it.each([
    ["geometry", geometryCosts(2)],
    ["structure", structureCosts()],
  ] as const)("equals the least over all maps, tried one by one, under %s costs", (_, costs) => {
    for (const [a, b] of pairs) {
      for (const origin of ["held", "free"] as const) {
        const answer = editDistance(a, b, costs, origin);
        expect(answer.exact).toBe(true);
        expect(answer.ged).toBeCloseTo(byTryingAll(a, b, costs, origin === "held"), 9);
        expect(answer.ged).toBeCloseTo(mapCost(editProblem(a, b, costs), answer.map), 9);
        expect(editDistance(b, a, costs, origin).ged).toBeCloseTo(answer.ged, 9);
      }
    }
  });

  it("keeps the true distance between its bounds when it is stopped at once", () => {
    for (let k = 0; k < 20; k++) {
      const a = canonicalTree(randomTree(random, 14), 0);
      const b = canonicalTree(randomTree(random, 14), 0);
      const proven = editDistance(a, b, geometryCosts(2), "held");
      const stopped = editDistance(a, b, geometryCosts(2), "held", () => true);
      expect(proven.exact).toBe(true);
      expect(stopped.lower).toBeLessThanOrEqual(proven.ged + 1e-9);
      expect(stopped.upper).toBeGreaterThanOrEqual(proven.ged - 1e-9);
    }
  });

  it("takes an empty side as all inserted or all deleted", () => {
    const empty: CanonicalTree = { nodes: [], strands: [], root: null };
    const tree = canonicalTree(randomTree(random, 9), 0);
    expect(editDistance(empty, tree, geometryCosts(2), "held").ged).toBe(17);
    expect(editDistance(tree, empty, geometryCosts(2), "held").ged).toBe(17);
    expect(editDistance(empty, empty, geometryCosts(2), "held").ged).toBe(0);
  });
});
