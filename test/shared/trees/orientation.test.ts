import { describe, expect, it } from "vitest";
import { adjacencyOf, crossLinksAt, nodesOf, strandsAt, strandsOf } from "#shared/trees/adjacency.ts";
import type { NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import { addCrossLink } from "#shared/trees/edits/add-cross-link.ts";
import { reRoot } from "#shared/trees/edits/re-root.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";
import { lengthOf, pathLength } from "#shared/trees/geometry.ts";
import { branchOrders, hangingOn, orientTree, strandsFromRoot } from "#shared/trees/orientation.ts";
import { at, edited, fork, twoTrees } from "./drawn-tree.ts";

const oriented = (d: TreeDocument, tree: `t${number}` = "t1") => orientTree(d, d.trees.get(tree)!);

/** n1 - s1 - fork n3 - s2 - fork n5 - s4 - n2, with s3 from n3 to n4 and s5 from n5 to n6. */
const twoForks = () =>
  edited(fork(), (d, ids) => startBranch(d, ids, { on: { strand: "s2", near: at(9, 0, 0) }, to: at(9, -4, 0) }));

describe("adjacency", () => {
  it("lists strands, cross-links, nodes and trees in the order of their ids", () => {
    const d = edited(twoTrees(), (doc, ids) => addCrossLink(doc, ids, { from: { node: "n4" }, to: { node: "n6" } }));
    expect(strandsAt(d, "n3").map((s) => s.id)).toEqual(["s1", "s2", "s3"]);
    expect(crossLinksAt(d, "n6").map((x) => x.id)).toEqual(["x1"]);
    expect(nodesOf(d, "t2")).toEqual(["n5", "n6"]);
    expect(strandsOf(d, "t1")).toEqual(["s1", "s2", "s3"]);
    expect(strandsAt(d, "n99")).toEqual([]);
    expect(adjacencyOf(d)).toBe(adjacencyOf(d));
  });
});

describe("a tree seen from its root", () => {
  it("knows the way to the root and away from it, whichever way strands run", () => {
    const d = edited(twoForks(), (doc, ids) => reRoot(doc, ids, { node: "n2", site: "wall" }));
    const o = oriented(d);
    expect(o.order[0]).toBe("n2");
    expect(strandsFromRoot(o, "n1")!.map((s) => s.id)).toEqual(["s4", "s2", "s1"]);
    expect(o.rootSide.get("s2")).toBe("n5");
    expect(o.towardsRoot.get("n2")).toBeNull();
    expect(o.closing).toEqual([]);
  });
  it("gives branch order 1 at the origin's strand, one more beyond each fork", () => {
    const orders = branchOrders(twoForks(), oriented(twoForks()));
    expect(Object.fromEntries(orders)).toEqual({ s1: 1, s2: 2, s3: 2, s4: 3, s5: 3 });
  });
  it("adds nothing to branch order at a waypoint", () => {
    const d = edited(twoTrees(), (doc, ids) =>
      addCrossLink(doc, ids, { from: { strand: "s4", near: at(6, 20, 0) }, to: { node: "n4" } }),
    );
    expect([...branchOrders(d, oriented(d, "t2")).values()]).toEqual([1, 1]);
  });
  it("knows what hangs on a strand", () => {
    const d = twoForks();
    const below = hangingOn(d, oriented(d), d.strands.get("s2")!);
    expect([...below.nodes].sort()).toEqual(["n2", "n5", "n6"]);
    expect([...below.strands].sort()).toEqual(["s2", "s4", "s5"]);
  });
  it("says which strands close a loop, and ends", () => {
    const d = fork();
    const loop = { ...d.strands.get("s2")!, id: "s9" as StrandId, from: "n2" as NodeId, to: "n4" as NodeId };
    const looped = { ...d, strands: new Map([...d.strands, ["s9", loop]]) } as TreeDocument;
    const o = oriented(looped);
    expect(o.closing).toEqual(["s9"]);
    expect(o.order).toHaveLength(4);
    expect(hangingOn(looped, o, looped.strands.get("s2")!).nodes).not.toContain("n1");
  });
  it("does not reach another piece, and starts at the lowest node without a root", () => {
    const d = twoTrees();
    const together = {
      ...d,
      nodes: new Map([...d.nodes].map(([id, node]) => [id, { ...node, tree: "t1" as const }])),
    } as TreeDocument;
    expect(strandsFromRoot(oriented(together), "n6")).toBeNull();
    expect(orientTree(d, { ...d.trees.get("t2")!, root: null }).order[0]).toBe("n5");
  });
});

describe("lengths", () => {
  it("path length is the sum of the strands from the root; null where the root does not reach", () => {
    const d = twoForks();
    const expected = ["s1", "s2", "s5"].reduce((sum, id) => sum + lengthOf(d, d.strands.get(id as StrandId)!), 0);
    expect(pathLength(d, oriented(d), "n6")).toBeCloseTo(expected, 12);
    expect(pathLength(d, oriented(d), "n1")).toBe(0);
    expect(pathLength(twoTrees(), oriented(twoTrees()), "n6")).toBeNull();
  });
});
