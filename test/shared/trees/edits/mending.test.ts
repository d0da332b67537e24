import { describe, expect, it } from "vitest";
import type { TreeDocument } from "#shared/trees/document.ts";
import { addCrossLink, deleteCrossLink } from "#shared/trees/edits/add-cross-link.ts";
import { cutStrand } from "#shared/trees/edits/cut-strand.ts";
import { deleteStrand, deleteTree } from "#shared/trees/edits/delete-strand.ts";
import { exchangeTails } from "#shared/trees/edits/exchange-tails.ts";
import { dissolve, joinStrands } from "#shared/trees/edits/join-strands.ts";
import { moveBranch } from "#shared/trees/edits/move-branch.ts";
import { moveNode } from "#shared/trees/edits/move-node.ts";
import { insertPin, movePin, removePin, setLeg } from "#shared/trees/edits/move-pin.ts";
import { reRoot } from "#shared/trees/edits/re-root.ts";
import { reRoute } from "#shared/trees/edits/re-route.ts";
import { setLabels } from "#shared/trees/edits/set-labels.ts";
import { splitFork } from "#shared/trees/edits/split-fork.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";
import { countersOf, IdSource } from "#shared/trees/ids.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import { canonicalFaults } from "../canonical-faults.ts";
import { at, edited, fork, string, twoTrees } from "../drawn-tree.ts";

const idsOf = (document: TreeDocument) => new IdSource(countersOf(document));

/** Fails when an edit left anything unsound or a curve unsolved. */
function sound(document: TreeDocument): TreeDocument {
  expect([...brokenInvariants(document), ...canonicalFaults(document)]).toEqual([]);
  return document;
}

describe("moving a node", () => {
  it("has every strand that meets there solved, and no other", () => {
    const d = twoTrees();
    const plan = moveNode(d, idsOf(d), { node: "n3", to: at(6, 0, 1) });
    expect(plan.solves.map(({ line }) => line)).toEqual(["s1", "s2", "s3"]);
    sound(edited(d, (doc, ids) => moveNode(doc, ids, { node: "n3", to: at(6, 0, 1) })));
  });
  it("to where it is changes nothing", () => {
    const d = fork();
    expect(moveNode(d, idsOf(d), { node: "n3", to: at(6, 0, 0) })).toMatchObject({ operation: { changes: [] }, solves: [] });
  });
});

describe("pins", () => {
  it("are moved, put in between their neighbours, and taken out", () => {
    let d = edited(string(), (doc, ids) => movePin(doc, ids, { line: "s1", index: 1, to: at(8, 1, 0) }));
    expect(d.strands.get("s1")!.via).toEqual([at(4, 0, 0), at(8, 1, 0)]);
    d = edited(d, (doc, ids) => insertPin(doc, ids, { line: "s1", at: at(6, -1, 0) }));
    expect(d.strands.get("s1")).toMatchObject({
      via: [at(4, 0, 0), at(6, -1, 0), at(8, 1, 0)],
      legs: ["guide", "straight", "straight", "guide"],
    });
    d = sound(edited(d, (doc, ids) => removePin(doc, ids, { line: "s1", index: 0 })));
    expect(d.strands.get("s1")).toMatchObject({ via: [at(6, -1, 0), at(8, 1, 0)], legs: ["guide", "straight", "guide"] });
  });
  it("go where the line was taken hold of, however far they are dragged", () => {
    const d = edited(string(), (doc, ids) => insertPin(doc, ids, { line: "s1", at: at(1, 30, 0), near: at(10, 0, 0.2) }));
    expect(d.strands.get("s1")!.via).toEqual([at(4, 0, 0), at(8, 0, 0), at(1, 30, 0)]);
  });
  it("that are not there are refused", () => {
    const d = string();
    expect(() => movePin(d, idsOf(d), { line: "s1", index: 2, to: at(0, 0, 0) })).toThrowError(/no pin 2/);
    expect(() => removePin(d, idsOf(d), { line: "s1", index: -1 })).toThrowError(/no pin -1/);
    expect(() => removePin(d, idsOf(d), { line: "s9", index: 0 })).toThrowError(expect.objectContaining({ tag: "not-found" }));
  });
  it("a stretch can be made straight and back", () => {
    let d = edited(string(), (doc, ids) => setLeg(doc, ids, { strand: "s1", leg: 0, kind: "straight" }));
    expect(d.strands.get("s1")!.legs).toEqual(["straight", "straight", "guide"]);
    for (const leg of [0, 1]) d = edited(d, (doc, ids) => setLeg(doc, ids, { strand: "s1", leg, kind: "guide" }));
    expect(d.strands.get("s1")).not.toHaveProperty("legs");
    sound(d);
  });
});

describe("re-routing a stretch", () => {
  it("keeps the rest: both places become pins, pins between go, either order of the places", () => {
    const forwards = edited(string(), (doc, ids) =>
      reRoute(doc, ids, { strand: "s1", between: [at(2, 0, 0.2), at(10, 0, 0.2)], through: [at(5, 3, 0), at(7, 3, 0)] }),
    );
    expect(forwards.strands.get("s1")!.via).toEqual([at(2, 0, 0.2), at(5, 3, 0), at(7, 3, 0), at(10, 0, 0.2)]);
    const backwards = edited(string(), (doc, ids) =>
      reRoute(doc, ids, { strand: "s1", between: [at(10, 0, 0.2), at(2, 0, 0.2)], through: [at(7, 3, 0), at(5, 3, 0)] }),
    );
    expect(backwards.strands.get("s1")!.via).toEqual(forwards.strands.get("s1")!.via);
    sound(forwards);
  });
  it("up to a node puts no pin on the node", () => {
    const d = edited(string(), (doc, ids) =>
      reRoute(doc, ids, { strand: "s1", between: [at(6, 0, 0), at(12, 0, 0)], through: [at(9, 4, 0)] }),
    );
    expect(d.strands.get("s1")).toMatchObject({
      via: [at(4, 0, 0), at(6, 0, 0), at(9, 4, 0)],
      legs: ["guide", "straight", "guide", "guide"],
    });
  });
});

describe("cutting and joining", () => {
  it("a cut leaves two open ends at one place and a tree without origin", () => {
    const d = sound(edited(string(), (doc, ids) => cutStrand(doc, ids, { strand: "s1", near: at(6, 0, 0) })));
    expect(d.trees.get("t2")).toEqual({ id: "t2", name: "ALPM-02", root: null });
    expect([...d.nodes.values()].map(({ id, tree, kind, position }) => [id, tree, kind, position[0]])).toEqual([
      ["n1", "t1", "origin", 0],
      ["n2", "t2", "open", 12],
      ["n3", "t1", "open", 6],
      ["n4", "t2", "open", 6],
    ]);
  });
  it("joining the two ends again gives one strand over the same pins, and one tree", () => {
    const cut = edited(string(), (doc, ids) => cutStrand(doc, ids, { strand: "s1", near: at(6, 0, 0) }));
    const d = sound(edited(cut, (doc, ids) => joinStrands(doc, ids, { a: "n4", b: "n3" })));
    expect([...d.trees.keys()]).toEqual(["t1"]);
    expect([...d.strands.values()]).toHaveLength(1);
    const [strand] = [...d.strands.values()];
    expect([strand!.from, strand!.to].sort()).toEqual(["n1", "n2"]);
    expect([...strand!.via].sort((a, b) => a[0] - b[0])).toEqual([at(4, 0, 0), at(6, 0, 0), at(8, 0, 0)]);
  });
  it("ends apart from each other both stay as pins", () => {
    const cut = edited(twoTrees(), (doc, ids) => cutStrand(doc, ids, { strand: "s4", near: at(6, 20, 0.2) }));
    const loose = [...cut.nodes.values()].find((node) => node.kind === "open" && node.tree === "t3" && node.position[0] < 7)!;
    const d = sound(edited(cut, (doc, ids) => joinStrands(doc, ids, { a: "n4", b: loose.id })));
    const joined = [...d.strands.values()].find(
      (strand) => strand.via.length === 2 && strand.tree === "t1" && strand.via.some((p) => p[1] === 5),
    )!;
    // The guided strand s4 bulges: its middle lies at z = 0.2.
    expect(joined.via.map((p) => [...p]).sort()).toEqual([
      [6, 20, 0.2],
      [6, 5, 0],
    ]);
    expect(d.trees.has("t3")).toBe(false);
  });
  it("a cut at a fork takes the branch off, and the fork dissolves", () => {
    const d = sound(edited(fork(), (doc, ids) => cutStrand(doc, ids, { strand: "s3", near: at(6, 0, 0) })));
    expect(d.nodes.has("n3")).toBe(false);
    expect(d.strands.get("s1")).toMatchObject({ from: "n1", to: "n2" });
    expect(d.strands.get("s3")).toMatchObject({ tree: "t2" });
  });
  it("an end joined to a fork becomes a branch of it", () => {
    const cut = edited(fork(), (doc, ids) => cutStrand(doc, ids, { strand: "s3", near: at(6, 2.5, 0) }));
    const loose = [...cut.nodes.values()].find((node) => node.tree === "t2" && node.position[1] < 4)!;
    const d = sound(edited(cut, (doc, ids) => joinStrands(doc, ids, { a: loose.id, b: "n3" })));
    expect([...d.strands.values()].filter((s) => s.from === "n3" || s.to === "n3")).toHaveLength(4);
  });
  it("two origins, a loop and a cut at an end are refused", () => {
    const d = twoTrees();
    expect(() => joinStrands(d, idsOf(d), { a: "n2", b: "n6" })).toThrowError(/each have an origin/);
    expect(() => joinStrands(d, idsOf(d), { a: "n2", b: "n4" })).toThrowError(/loop/);
    expect(() => joinStrands(d, idsOf(d), { a: "n1", b: "n3" })).toThrowError(/Neither place is a loose end/);
    expect(() => cutStrand(d, idsOf(d), { strand: "s3", near: at(6, 9, 0) })).toThrowError(/ends here already/);
  });
  it("a two-strand fork dissolves, its place stays a pin; a real fork does not", () => {
    const idle = edited(string(), (doc, ids) => startBranch(doc, ids, { on: { strand: "s1", near: at(6, 0, 0) } }));
    const d = sound(edited(idle, (doc, ids) => dissolve(doc, ids, { node: "n3" })));
    expect(d.strands.get("s1")).toMatchObject({
      via: [at(4, 0, 0), at(6, 0, 0), at(8, 0, 0)],
      legs: ["guide", "straight", "straight", "guide"],
    });
    const real = fork();
    expect(() => dissolve(real, idsOf(real), { node: "n3" })).toThrowError(/cannot be taken out/);
  });
});

describe("deleting", () => {
  it("a strand takes what hangs on it along and dissolves the fork it leaves", () => {
    const d = sound(edited(fork(), (doc, ids) => deleteStrand(doc, ids, { strand: "s3" })));
    expect([...d.nodes.keys()]).toEqual(["n1", "n2"]);
    const all = sound(edited(fork(), (doc, ids) => deleteStrand(doc, ids, { strand: "s1" })));
    expect([...all.nodes.keys()]).toEqual(["n1"]);
    expect(all.trees.get("t1")!.root).toBe("n1");
  });
  it("hangs together with the root, not with the direction of strands", () => {
    const rooted = edited(fork(), (doc, ids) => reRoot(doc, ids, { node: "n2", site: "wall" }));
    const d = sound(edited(rooted, (doc, ids) => deleteStrand(doc, ids, { strand: "s1" })));
    expect(d.nodes.has("n1")).toBe(false);
    expect(d.nodes.has("n2")).toBe(true);
  });
  it("a tree goes whole, with its cross-links", () => {
    const linked = edited(twoTrees(), (doc, ids) => addCrossLink(doc, ids, { from: { node: "n4" }, to: { node: "n6" } }));
    const d = edited(linked, (doc, ids) => deleteTree(doc, ids, { tree: "t1" }));
    expect([[...d.trees.keys()], [...d.nodes.keys()], [...d.strands.keys()], d.crossLinks.size]).toEqual([
      ["t2"],
      ["n5", "n6"],
      ["s4"],
      0,
    ]);
  });
});

describe("cross-links", () => {
  it("make waypoints where they meet strands, and take them along when deleted", () => {
    const before = twoTrees();
    const linked = sound(
      edited(before, (doc, ids) =>
        addCrossLink(doc, ids, {
          from: { strand: "s3", near: at(6, 2, 0) },
          to: { strand: "s4", near: at(6, 20, 0.2) },
          via: [at(6, 10, 0)],
        }),
      ),
    );
    const link = linked.crossLinks.get("x1")!;
    expect([linked.nodes.get(link.from)!.kind, linked.nodes.get(link.to)!.kind]).toEqual(["waypoint", "waypoint"]);
    expect(link.via).toEqual([at(6, 10, 0)]);
    const d = sound(edited(linked, (doc, ids) => deleteCrossLink(doc, ids, { crossLink: "x1" })));
    expect([...d.nodes.keys()]).toEqual([...before.nodes.keys()]);
  });
  it("between two places of one strand divide it twice", () => {
    for (const [a, b] of [
      [2, 10],
      [10, 2],
    ] as const) {
      const d = sound(
        edited(string(), (doc, ids) =>
          addCrossLink(doc, ids, { from: { strand: "s1", near: at(a, 0, 0.2) }, to: { strand: "s1", near: at(b, 0, 0.2) } }),
        ),
      );
      const link = d.crossLinks.get("x1")!;
      expect([d.nodes.get(link.from)!.position[0], d.nodes.get(link.to)!.position[0]]).toEqual([a, b]);
      expect(d.strands.size).toBe(3);
      expect([...d.strands.values()].flatMap((s) => s.via.map((p) => p[0])).sort()).toEqual([4, 8]);
    }
  });
  it("from a place to itself are refused", () => {
    const d = string();
    const same = { strand: "s1", near: at(6, 0, 0) } as const;
    expect(() => addCrossLink(d, idsOf(d), { from: same, to: same })).toThrowError(/one place/);
    expect(() => addCrossLink(d, idsOf(d), { from: { node: "n2" }, to: { strand: "s1", near: at(99, 0, 0) } })).toThrowError(
      /one place/,
    );
  });
});

describe("another origin", () => {
  it("changes no curve; the former origin is an open end", () => {
    const d = fork();
    const plan = reRoot(d, idsOf(d), { node: "n4", site: "wall" });
    expect(plan.solves).toEqual([]);
    const e = sound(edited(d, (doc, ids) => reRoot(doc, ids, { node: "n4", site: "wall", formerOrigin: "lost-end" })));
    expect(e.nodes.get("n4")).toMatchObject({ kind: "origin", site: "wall", muscle: "antero-lateral", head: 1 });
    expect(e.nodes.get("n1")).toEqual({ id: "n1", tree: "t1", kind: "lost-end", position: [0, 0, 0] });
  });
});

describe("moving a branch", () => {
  it("to another tree takes all that hangs on it along", () => {
    const d = sound(
      edited(twoTrees(), (doc, ids) => moveBranch(doc, ids, { strand: "s3", to: { strand: "s4", near: at(6, 20, 0.2) } })),
    );
    expect(d.strands.get("s3")).toMatchObject({ tree: "t2", to: "n4" });
    expect(d.nodes.get("n4")!.tree).toBe("t2");
    expect(d.nodes.get(d.strands.get("s3")!.from)).toMatchObject({ kind: "fork", tree: "t2" });
    expect(d.nodes.has("n3")).toBe(false);
  });
  it("along its own trunk moves the fork", () => {
    const d = sound(
      edited(fork(), (doc, ids) => moveBranch(doc, ids, { strand: "s3", to: { strand: "s2", near: at(10, 0, 0.2) } })),
    );
    const start = d.nodes.get(d.strands.get("s3")!.from)!;
    expect(start.position[0]).toBe(10);
    expect(d.nodes.has("n3")).toBe(false);
  });
  it("onto itself or what hangs on it is refused", () => {
    const d = fork();
    expect(() => moveBranch(d, idsOf(d), { strand: "s1", to: { strand: "s3", near: at(6, 4, 0) } })).toThrowError(
      /hangs on the branch/,
    );
    expect(() => moveBranch(d, idsOf(d), { strand: "s3", to: { strand: "s3", near: at(6, 4, 0) } })).toThrowError(
      /hangs on the branch/,
    );
  });
});

describe("exchanging tails", () => {
  it("gives each strand the other's way beyond the crossing, with what hangs on it", () => {
    const d = sound(
      edited(twoTrees(), (doc, ids) =>
        exchangeTails(doc, ids, { a: { strand: "s1", near: at(5, 0, 0) }, b: { strand: "s4", near: at(6, 20, 0.2) } }),
      ),
    );
    // s1 now leads from the first origin to the end of the second tree; s4 to the fork with all beyond.
    expect(d.strands.get("s1")).toMatchObject({ from: "n1", to: "n6", tree: "t1" });
    expect(d.strands.get("s4")).toMatchObject({ from: "n5", to: "n3", tree: "t2" });
    expect([...d.nodes.values()].filter((node) => node.tree === "t1").map((node) => node.id)).toEqual(["n1", "n6"]);
    expect(d.strands.get("s1")!.via).toEqual([at(4, 0, 0), at(5, 0, 0), at(6, 20, 0.2)]);
    expect(d.strands.get("s4")!.via).toEqual([at(6, 20, 0.2), at(5, 0, 0)]);
  });
  it("twice at the same places gives back the same tree structure", () => {
    const swap = (doc: TreeDocument) =>
      edited(doc, (now, ids) =>
        exchangeTails(now, ids, { a: { strand: "s1", near: at(5, 0, 0) }, b: { strand: "s4", near: at(6, 20, 0.2) } }),
      );
    const d = sound(swap(swap(twoTrees())));
    expect([...d.nodes.values()].map(({ id, tree }) => [id, tree])).toEqual(
      [...twoTrees().nodes.values()].map(({ id, tree }) => [id, tree]),
    );
    expect(d.strands.get("s1")).toMatchObject({ from: "n1", to: "n3" });
  });
  it("of a strand with one that hangs on it is refused", () => {
    const d = fork();
    expect(() =>
      exchangeTails(d, idsOf(d), { a: { strand: "s1", near: at(2, 0, 0) }, b: { strand: "s3", near: at(6, 2, 0) } }),
    ).toThrowError(/hangs on the other/);
  });
});

describe("splitting a fork", () => {
  const three = () => edited(fork(), (doc, ids) => startBranch(doc, ids, { on: { node: "n3" }, to: at(6, -5, 0) }));

  it("moves the chosen branches to a new fork on a strand of its own", () => {
    const d = sound(edited(three(), (doc, ids) => splitFork(doc, ids, { node: "n3", moved: ["s2", "s3"], to: at(7, 1, 0) })));
    expect(d.strands.get("s5")).toMatchObject({ from: "n3", to: "n6" });
    expect([d.strands.get("s2")!.from, d.strands.get("s3")!.from, d.strands.get("s4")!.from]).toEqual(["n6", "n6", "n3"]);
  });
  it("of a two-branch fork, or with the trunk, is refused", () => {
    const two = fork();
    expect(() => splitFork(two, idsOf(two), { node: "n3", moved: ["s2", "s3"], to: at(7, 1, 0) })).toThrowError(
      /at least one stays/,
    );
    const d = three();
    expect(() => splitFork(d, idsOf(d), { node: "n3", moved: ["s1", "s2"], to: at(7, 1, 0) })).toThrowError(/To split a fork/);
  });
});

describe("labels", () => {
  it("are set, taken away, and passed down to what carries them", () => {
    const d = edited(fork(), (doc, ids) =>
      setLabels(doc, ids, { nodes: ["n3"], node: { leaflet: "anterior", zone: "rough" }, downwards: true }),
    );
    expect([...d.nodes.values()].map((node) => [node.id, node.leaflet])).toEqual([
      ["n1", undefined],
      ["n2", "anterior"],
      ["n3", "anterior"],
      ["n4", "anterior"],
    ]);
    const e = edited(d, (doc, ids) => setLabels(doc, ids, { nodes: ["n4"], node: { leaflet: null } }));
    expect(e.nodes.get("n4")).not.toHaveProperty("leaflet");
    expect(e.nodes.get("n4")).toHaveProperty("zone", "rough");
  });
  it("on strands do not touch their curves", () => {
    const d = fork();
    const plan = setLabels(d, idsOf(d), { strands: ["s1"], strand: { strut: true, certainty: "doubtful" } });
    expect(plan.solves).toEqual([]);
    expect(edited(d, () => plan).strands.get("s1")).toMatchObject({
      strut: true,
      certainty: "doubtful",
      curve: d.strands.get("s1")!.curve,
    });
  });
  it("that a node cannot carry are refused when it is named", () => {
    const d = fork();
    expect(() => setLabels(d, idsOf(d), { nodes: ["n4"], node: { muscle: "antero-lateral" } })).toThrowError(/carries no muscle/);
  });
});
