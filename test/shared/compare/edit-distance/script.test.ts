import { describe, expect, it } from "vitest";
import { type CanonicalTree, canonicalTree } from "#shared/compare/canonical.ts";
import { geometryCosts, structureCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { type EditStep, editScript, strandMap } from "#shared/compare/edit-distance/script.ts";
import type { PlainTree } from "#shared/trees/plain-trees.ts";
import { population } from "#test/shared/compare/populations.ts";
import { seededRandom } from "#test/shared/compare/small-trees.ts";

/** The tree that a script makes of A: kept nodes and strands take B's names where the map says so. */
function applied(
  a: CanonicalTree,
  b: CanonicalTree,
  map: Int32Array,
  steps: readonly EditStep[],
): { nodes: string[]; strands: string[] } {
  const gone = new Set(steps.filter((step) => step.op.startsWith("delete")).map((step) => step.a));
  const image = new Map(a.nodes.map((_node, i) => [i, map[i]! < 0 ? null : b.nodes[map[i]!]!]));
  const nodes = a.nodes.flatMap((node, i) => (gone.has(node.id) ? [] : [`${image.get(i)!.id} ${image.get(i)!.type}`]));
  const { imageOf } = strandMap(a, b, map, geometryCosts(2));
  const ends = (tree: CanonicalTree, k: number) => [tree.strands[k]!.from, tree.strands[k]!.to];
  const strands = a.strands.flatMap((strand, k) => {
    if (gone.has(strand.id)) return [];
    const names = ends(a, k).map((i) => image.get(i)!.id);
    return [`${b.strands[imageOf[k]!]!.id} ${names.sort().join("-")}`];
  });
  for (const step of steps) {
    if (step.op === "insert-node") {
      const node = b.nodes.find((one) => one.id === step.b)!;
      nodes.push(`${node.id} ${node.type}`);
    }
    if (step.op === "insert-strand") {
      const k = b.strands.findIndex((one) => one.id === step.b);
      strands.push(
        `${step.b} ${ends(b, k)
          .map((j) => b.nodes[j]!.id)
          .sort()
          .join("-")}`,
      );
    }
  }
  return { nodes: nodes.sort(), strands: strands.sort() };
}

const listed = (tree: CanonicalTree) => ({
  nodes: tree.nodes.map((node) => `${node.id} ${node.type}`).sort(),
  strands: tree.strands
    .map((strand) => `${strand.id} ${[tree.nodes[strand.from]!.id, tree.nodes[strand.to]!.id].sort().join("-")}`)
    .sort(),
});

function renamed(tree: PlainTree, random: () => number): PlainTree {
  const names = new Map(tree.nodes.map((node) => [node.id, `q${Math.floor(random() * 1e9)}${node.id}`]));
  const shuffled = <T>(list: readonly T[]) =>
    [...list]
      .map((item) => [random(), item] as const)
      .sort((x, y) => x[0] - y[0])
      .map((entry) => entry[1]);
  return {
    ...tree,
    root: tree.root === null ? null : names.get(tree.root)!,
    nodes: shuffled(tree.nodes.map((node) => ({ ...node, id: names.get(node.id)! }))),
    strands: shuffled(
      tree.strands.map((strand, k) => ({
        ...strand,
        id: `z${k}`,
        from: names.get(k % 2 ? strand.to : strand.from)!,
        to: names.get(k % 2 ? strand.from : strand.to)!,
      })),
    ),
  };
}

describe("edit scripts", () => {
  const random = seededRandom(55);
  const pairs = [...population("near", 18, 12, random), ...population("unrelated", 9, 12, random)];

  it("turn A into B, and their costs add up to the distance", () => {
    for (const [a, b] of pairs) {
      for (const costs of [geometryCosts(2), structureCosts()]) {
        for (const origin of ["held", "free"] as const) {
          const [left, right] = [canonicalTree(a, 0.3), canonicalTree(b, 0.3)];
          const answer = editDistance(left, right, costs, origin);
          const steps = editScript(left, right, answer.map, costs);
          expect(steps.reduce((sum, step) => sum + step.cost, 0)).toBeCloseTo(answer.ged, 9);
          expect(applied(left, right, answer.map, steps)).toEqual(listed(right));
        }
      }
    }
  });

  it("do not depend on names, order or the direction strands are stored in", () => {
    for (const [a, b] of pairs) {
      const before = editDistance(canonicalTree(a, 0.3), canonicalTree(b, 0.3), geometryCosts(2), "held");
      const after = editDistance(
        canonicalTree(renamed(a, random), 0.3),
        canonicalTree(renamed(b, random), 0.3),
        geometryCosts(2),
        "held",
      );
      expect(after.ged).toBeCloseTo(before.ged, 9);
      expect(after.exact).toBe(before.exact);
    }
  });

  it("choose, among maps of equal cost, the one that moves nodes least", () => {
    // A star under structure costs: every way of pairing the ends costs nothing, only one moves nothing.
    const star = canonicalTree(starTree(), 0);
    const answer = editDistance(star, star, structureCosts(), "free");
    expect([...answer.map]).toEqual(star.nodes.map((_, i) => i));
  });
});

function starTree(): PlainTree {
  const ends = [1, 2, 3, 4, 5].map((k) => ({ id: `e${k}`, kind: "insertion", position: [k, k * k, 6] }));
  return {
    id: "t",
    root: "r",
    nodes: [{ id: "r", kind: "origin", position: [0, 0, 0] }, { id: "b", kind: "fork", position: [0, 0, 3] }, ...ends],
    strands: [{ id: "s0", from: "r", to: "b" }, ...ends.map((end, k) => ({ id: `s${k + 1}`, from: "b", to: end.id }))],
  };
}
