import { describe, expect, it } from "vitest";
import { polylineLength } from "#shared/geometry/polyline.ts";
import { endStrand } from "#shared/trees/edits/end-strand.ts";
import { extendStrand } from "#shared/trees/edits/extend-strand.ts";
import { reRoot } from "#shared/trees/edits/re-root.ts";
import { setLabels } from "#shared/trees/edits/set-labels.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";
import { takeBackPin } from "#shared/trees/edits/take-back-pin.ts";
import { polylineOf } from "#shared/trees/geometry.ts";
import { countersOf, IdSource } from "#shared/trees/ids.ts";
import { canonicalFaults } from "../canonical-faults.ts";
import { at, edited, fork, origin, string } from "../drawn-tree.ts";

const idsOf = (d: Parameters<typeof countersOf>[0]) => new IdSource(countersOf(d));

describe("starting a tree", () => {
  it("makes an origin, named by its muscle", () => {
    const document = origin();
    expect(document.trees.get("t1")).toEqual({ id: "t1", name: "ALPM-01", root: "n1" });
    expect(document.nodes.get("n1")).toEqual({
      id: "n1",
      tree: "t1",
      kind: "origin",
      position: [0, 0, 0],
      site: "head",
      muscle: "antero-lateral",
      head: 1,
    });
  });
  it("rounds the place to 1e-6 mm", () => {
    const document = edited(origin(), (d, ids) => startTree(d, ids, { at: at(1 / 3, 0, -1e-9), site: "unseen" }));
    expect(document.nodes.get("n2")!.position).toEqual([0.333333, 0, 0]);
    expect(document.trees.get("t2")!.name).toBe("TREE-01");
  });
  it("refuses a name in use", () => {
    const d = origin();
    expect(() => startTree(d, idsOf(d), { at: at(1, 1, 1), site: "head", name: " ALPM-01 " })).toThrowError(
      /Another tree is named ALPM-01/,
    );
  });
});

describe("setting pins", () => {
  it("moves the open end on and leaves a pin where it was", () => {
    const document = string();
    expect([...document.nodes.keys()]).toEqual(["n1", "n2"]);
    expect(document.strands.get("s1")).toMatchObject({ from: "n1", to: "n2", via: [at(4, 0, 0), at(8, 0, 0)] });
    expect(document.nodes.get("n2")).toMatchObject({ kind: "open", position: [12, 0, 0] });
  });
  it("keeps how each stretch is made", () => {
    expect(string().strands.get("s1")!.legs).toEqual(["guide", "straight", "guide"]);
  });
  it("asks for the strand's curve from node to node", () => {
    const d = string();
    const plan = extendStrand(d, idsOf(d), { node: "n2", to: at(12, 3, 0) });
    expect(plan.operation.code).toBe("extend-strand");
    expect(plan.solves).toEqual([
      {
        line: "s1",
        request: {
          from: [0, 0, 0],
          via: [
            [4, 0, 0],
            [8, 0, 0],
            [12, 0, 0],
          ],
          to: [12, 3, 0],
          legs: ["guide", "straight", "guide", "guide"],
        },
      },
    ]);
    const change = plan.operation.changes.find((c) => c.table === "strand")!;
    expect(change.to).toMatchObject({ curve: null });
  });
  it("refuses a pin on the one before it", () => {
    const d = string();
    expect(() => extendStrand(d, idsOf(d), { node: "n2", to: at(12, 0.0005, 0) })).toThrowError(/lies on the one before/);
  });
  it("takes a whole proposal with its pins", () => {
    const document = edited(origin(), (d, ids) =>
      extendStrand(d, ids, { node: "n1", to: at(9, 0, 0), through: [at(3, 1, 0), at(6, 1, 0)] }),
    );
    expect(document.strands.get("s1")!.via).toEqual([at(3, 1, 0), at(6, 1, 0)]);
  });
});

describe("a branch", () => {
  it("makes a fork at the nearest place on the curve, divides the pins and has both halves solved", () => {
    const d = string();
    const plan = startBranch(d, idsOf(d), { on: { strand: "s1", near: at(6, 1, 0) }, to: at(6, 5, 0) });
    expect(plan.solves.map(({ line }) => line).sort()).toEqual(["s1", "s2", "s3"]);
    const document = fork();
    expect(document.nodes.get("n3")).toEqual({ id: "n3", tree: "t1", kind: "fork", position: [6, 0, 0] });
    expect(document.strands.get("s1")).toMatchObject({ from: "n1", to: "n3", via: [at(4, 0, 0)], legs: ["guide", "straight"] });
    expect(document.strands.get("s2")).toMatchObject({ from: "n3", to: "n2", via: [at(8, 0, 0)], legs: ["straight", "guide"] });
    expect(document.strands.get("s3")).toMatchObject({ from: "n3", to: "n4", via: [] });
    expect(canonicalFaults(document)).toEqual([]);
  });
  it("near a pin leaves no pin on the fork", () => {
    const document = edited(string(), (d, ids) =>
      startBranch(d, ids, { on: { strand: "s1", near: at(4, 0, 0) }, to: at(4, 5, 0) }),
    );
    expect(document.strands.get("s1")!.via).toEqual([]);
    expect(document.strands.get("s2")!.via).toEqual([at(8, 0, 0)]);
  });
  it("on a strand that runs towards the root divides it as well", () => {
    const rooted = edited(fork(), (d, ids) => reRoot(d, ids, { node: "n2", site: "wall" }));
    const document = edited(rooted, (d, ids) =>
      startBranch(d, ids, { on: { strand: "s2", near: at(10, 0, 0) }, to: at(10, 5, 0) }),
    );
    expect(document.strands.get("s2")).toMatchObject({ from: "n3", to: "n5", via: [at(8, 0, 0)] });
    expect(document.strands.get("s4")).toMatchObject({ from: "n5", to: "n2", via: [] });
    expect(canonicalFaults(document)).toEqual([]);
  });
  it("from a fork makes a third branch there, not a second fork", () => {
    const document = edited(fork(), (d, ids) =>
      startBranch(d, ids, { on: { strand: "s2", near: at(6, 0.1, 0) }, to: at(6, -5, 0) }),
    );
    expect([...document.nodes.values()].filter((node) => node.kind === "fork")).toHaveLength(1);
    expect(document.strands.get("s4")).toMatchObject({ from: "n3" });
  });
  it("is refused at a loose end", () => {
    const d = fork();
    expect(() => startBranch(d, idsOf(d), { on: { node: "n4" } })).toThrowError(/ends here/);
  });
});

describe("ending a strand", () => {
  it("says how, in place or at a last pin", () => {
    const here = edited(fork(), (d, ids) => endStrand(d, ids, { node: "n4", kind: "ruptured" }));
    expect(here.nodes.get("n4")).toMatchObject({ kind: "ruptured", position: [6, 5, 0] });
    const there = edited(fork(), (d, ids) =>
      endStrand(d, ids, { node: "n4", kind: "insertion", to: at(6, 9, 0), labels: { leaflet: "posterior" } }),
    );
    expect(there.nodes.get("n4")).toMatchObject({ kind: "insertion", leaflet: "posterior", position: [6, 9, 0] });
    expect(there.strands.get("s3")!.via).toEqual([at(6, 5, 0)]);
  });
  it("in place needs no curve", () => {
    const d = fork();
    expect(endStrand(d, idsOf(d), { node: "n4", kind: "cut" }).solves).toEqual([]);
  });
  it("gives an insertion the labels of the nearest node above that has them", () => {
    let document = edited(fork(), (d, ids) => setLabels(d, ids, { nodes: ["n3"], node: { leaflet: "anterior", segment: "A2" } }));
    document = edited(document, (d, ids) => endStrand(d, ids, { node: "n4", kind: "insertion", labels: { segment: "A3" } }));
    expect(document.nodes.get("n4")).toMatchObject({ leaflet: "anterior", segment: "A3" });
    document = edited(document, (d, ids) => endStrand(d, ids, { node: "n2", kind: "lost-end" }));
    expect(document.nodes.get("n2")).not.toHaveProperty("leaflet");
  });
  it("drops labels that another kind of end cannot carry", () => {
    let document = edited(fork(), (d, ids) =>
      endStrand(d, ids, { node: "n4", kind: "insertion", labels: { leaflet: "anterior", zone: "rough", cleft: false } }),
    );
    document = edited(document, (d, ids) => endStrand(d, ids, { node: "n4", kind: "ruptured" }));
    expect(document.nodes.get("n4")).toEqual({ id: "n4", tree: "t1", kind: "ruptured", position: [6, 5, 0] });
  });
  it("is refused at the origin", () => {
    const d = fork();
    expect(() => endStrand(d, idsOf(d), { node: "n1", kind: "insertion" })).toThrowError(/not the end of a strand/);
  });
});

describe("taking pins back", () => {
  const back = (document: ReturnType<typeof string>, node: `n${number}`) =>
    edited(document, (d, ids) => takeBackPin(d, ids, { node }));

  it("undoes a string pin by pin down to nothing", () => {
    const steps = [string()];
    for (let k = 0; k < 3; k++) steps.push(back(steps[k]!, "n2"));
    expect(steps[1]!.nodes.get("n2")!.position).toEqual([8, 0, 0]);
    expect(steps[1]!.strands.get("s1")).toMatchObject({ via: [at(4, 0, 0)], legs: ["guide", "straight"] });
    expect(steps[2]!.strands.get("s1")).toMatchObject({ via: [] });
    expect(steps[2]!.strands.get("s1")).not.toHaveProperty("legs");
    expect([...steps[3]!.nodes.keys()]).toEqual(["n1"]);
    const last = back(steps[3]!, "n1");
    expect(last.trees.size + last.nodes.size + last.strands.size).toBe(0);
  });
  it("of a branch's only pin dissolves the fork; its place stays a pin", () => {
    const document = back(fork(), "n4");
    expect([...document.strands.keys()]).toEqual(["s1"]);
    expect(document.strands.get("s1")).toMatchObject({ from: "n1", to: "n2", via: [at(4, 0, 0), at(6, 0, 0), at(8, 0, 0)] });
    expect(canonicalFaults(document)).toEqual([]);
  });
  it("makes a closed end open again", () => {
    const ended = edited(string(), (d, ids) =>
      endStrand(d, ids, { node: "n2", kind: "insertion", labels: { leaflet: "anterior" } }),
    );
    expect(back(ended, "n2").nodes.get("n2")!.kind).toBe("open");
  });
});

describe("lengths after edits", () => {
  it("are those of the curves, which pass the pins", () => {
    const document = string();
    const points = polylineOf(document, document.strands.get("s1")!);
    expect(polylineLength(points)).toBeGreaterThan(12);
    expect(points[0]).toEqual([0, 0, 0]);
    expect(points[points.length - 1]).toEqual([12, 0, 0]);
  });
});
