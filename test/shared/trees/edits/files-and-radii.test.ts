import { describe, expect, it } from "vitest";
import { apply, withCurves } from "#shared/trees/apply.ts";
import { emptyDocument, type TreeDocument } from "#shared/trees/document.ts";
import { dismissFinding } from "#shared/trees/edits/dismiss-finding.ts";
import { withSolvedCurves } from "#shared/trees/edits/edit-plan.ts";
import { extendStrand } from "#shared/trees/edits/extend-strand.ts";
import { renameTree } from "#shared/trees/edits/rename-tree.ts";
import { setRadius } from "#shared/trees/edits/set-radius.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";
import { countersOf, IdSource } from "#shared/trees/ids.ts";
import { brokenInvariants } from "#shared/trees/invariants.ts";
import { drawnCurve } from "../drawn-curve.ts";
import { at, edited, fork, string, twoTrees } from "../drawn-tree.ts";

const idsOf = (document: TreeDocument) => new IdSource(countersOf(document));

describe("putting solved curves into a plan", () => {
  it("gives each a new id and leaves untraced what could not be solved", () => {
    const d = fork();
    const ids = idsOf(d);
    const plan = extendStrand(d, ids, { node: "n4", to: at(6, 8, 0) });
    const { operation, curves } = withSolvedCurves(plan, [drawnCurve(plan.solves[0]!.request)], ids);
    expect(curves.map((curve) => d.curves.has(curve.id))).toEqual([false]);
    expect(apply(withCurves(d, curves), operation).document.strands.get("s3")!.curve).toBe(curves[0]!.id);
    const without = withSolvedCurves(plan, [null], ids);
    expect(apply(d, without.operation).document.strands.get("s3")!.curve).toBeNull();
  });
  it("refuses a curve that does not run from node to node", () => {
    const d = fork();
    const ids = idsOf(d);
    const plan = extendStrand(d, ids, { node: "n4", to: at(6, 8, 0) });
    const wrong = drawnCurve({ ...plan.solves[0]!.request, to: at(6, 8, 0.000001) });
    expect(() => withSolvedCurves(plan, [wrong], ids)).toThrowError(/does not run from node to node/);
  });
});

describe("a radius set by hand", () => {
  const madeBy = (first: number, last: number) => {
    const d = string();
    const old = d.curves.get(d.strands.get("s1")!.curve!)!;
    const named = {
      ...old,
      id: "c90" as const,
      madeBy: [
        [0, 8, "guide"],
        [8, 16, "straight"],
        [16, 24, "guide"],
      ] as const,
    };
    const strand = { ...d.strands.get("s1")!, curve: named.id };
    const document = { ...withCurves(d, [named]), strands: new Map([["s1", strand]]) } as TreeDocument;
    return edited(document, (doc, ids) => setRadius(doc, ids, { strand: "s1", first, last, radiusMm: 0.4 }));
  };
  const curveOf = (d: TreeDocument) => d.curves.get(d.strands.get("s1")!.curve!)!;

  it("changes radii only there, keeps the points, and marks the stretch", () => {
    const d = edited(string(), (doc, ids) => setRadius(doc, ids, { strand: "s1", first: 2, last: 4, radiusMm: null }));
    const radii = [...curveOf(d).radii];
    expect(radii.slice(0, 6)).toEqual([0.25, 0.25, Number.NaN, Number.NaN, Number.NaN, 0.25]);
    expect(curveOf(d).points).toEqual(curveOf(string()).points);
    expect(curveOf(d).madeBy).toEqual([
      [0, 2, "guide"],
      [2, 4, "edited"],
      [4, 24, "guide"],
    ]);
    expect(brokenInvariants(d)).toEqual([]);
  });
  it("marks over several stretches and at the ends", () => {
    expect(curveOf(madeBy(4, 20)).madeBy).toEqual([
      [0, 4, "guide"],
      [4, 20, "edited"],
      [20, 24, "guide"],
    ]);
    expect(curveOf(madeBy(0, 8)).madeBy).toEqual([
      [0, 8, "edited"],
      [8, 16, "straight"],
      [16, 24, "guide"],
    ]);
    expect(curveOf(madeBy(8, 16)).madeBy).toEqual([
      [0, 8, "guide"],
      [8, 16, "edited"],
      [16, 24, "guide"],
    ]);
    expect(curveOf(madeBy(0, 24)).madeBy).toEqual([[0, 24, "edited"]]);
    expect(curveOf(madeBy(18, 24)).madeBy).toEqual([
      [0, 8, "guide"],
      [8, 16, "straight"],
      [16, 18, "guide"],
      [18, 24, "edited"],
    ]);
  });
  it("outside the strand, or not above 0, is refused", () => {
    const d = string();
    const set = (first: number, last: number, radiusMm: number) => () =>
      setRadius(d, idsOf(d), { strand: "s1", first, last, radiusMm });
    expect(set(0, 25, 1)).toThrowError(/points 0 to 24/);
    expect(set(3, 2, 1)).toThrowError(/3 to 2/);
    expect(set(0, 1, 0)).toThrowError(/above 0/);
    expect(set(0, 1, Number.POSITIVE_INFINITY)).toThrowError(/above 0/);
  });
});

describe("taking in trees", () => {
  it("gives fresh ids, keeps places, labels and curves, and renames only what is in use", () => {
    const here = twoTrees();
    const d = edited(here, (doc, ids) => takeInTrees(doc, ids, { incoming: twoTrees() }));
    expect(brokenInvariants(d)).toEqual([]);
    expect([...d.trees.values()].map((tree) => tree.name)).toEqual(["ALPM-01", "PMPM-01", "ALPM-02", "PMPM-02"]);
    expect(d.nodes.size).toBe(2 * here.nodes.size);
    const [old, taken] = [here.strands.get("s1")!, d.strands.get("s5")!];
    expect(taken.via).toEqual(old.via);
    expect(d.curves.get(taken.curve!)!.points).toEqual(here.curves.get(old.curve!)!.points);
    const alone = takeInTrees(emptyDocument(), idsOf(emptyDocument()), { incoming: here });
    expect(alone.renamed).toEqual([]);
    expect(alone.solves).toEqual([]);
  });
  it("sets the ends of curves to their nodes when a file rounded them differently", () => {
    const incoming = string();
    const strand = incoming.strands.get("s1")!;
    const curve = incoming.curves.get(strand.curve!)!;
    const points = Float64Array.from(curve.points);
    points[0] = 0.0004;
    points[3] = 0.5000000004;
    const file = { ...incoming, curves: new Map([[curve.id, { ...curve, points }]]) };
    const d = edited(emptyDocument(), (doc, ids) => takeInTrees(doc, ids, { incoming: file }));
    const taken = d.curves.get(d.strands.get("s1")!.curve!)!.points;
    expect([taken[0], taken[3]]).toEqual([0, 0.5]);
    expect(brokenInvariants(d)).toEqual([]);
  });
  it("names the strands of a pins file for solving", () => {
    const incoming = string();
    const pins = { ...incoming, strands: new Map([["s1", { ...incoming.strands.get("s1")!, curve: null }]]) } as TreeDocument;
    const plan = takeInTrees(emptyDocument(), idsOf(emptyDocument()), { incoming: pins });
    expect(plan.solves).toMatchObject([{ line: "s1", request: { via: [at(4, 0, 0), at(8, 0, 0)] } }]);
  });
  it("refuses a document that does not hold together", () => {
    const incoming = fork();
    const torn = { ...incoming, nodes: new Map([...incoming.nodes].filter(([id]) => id !== "n4")) } as TreeDocument;
    expect(() => takeInTrees(emptyDocument(), idsOf(emptyDocument()), { incoming: torn })).toThrowError(/n4 names nothing/);
  });
});

describe("names and findings", () => {
  it("a tree is renamed, blanks aside, but not to another's name or to nothing", () => {
    const d = twoTrees();
    expect(edited(d, (doc, ids) => renameTree(doc, ids, { tree: "t1", name: "  ALPM-07 " })).trees.get("t1")!.name).toBe(
      "ALPM-07",
    );
    expect(renameTree(d, idsOf(d), { tree: "t1", name: "ALPM-01" }).operation.changes).toEqual([]);
    expect(() => renameTree(d, idsOf(d), { tree: "t1", name: "PMPM-01" })).toThrowError(/Another tree/);
    expect(() => renameTree(d, idsOf(d), { tree: "t1", name: "  " })).toThrowError(/needs a name/);
  });
  it("a finding is dismissed with a reason and brought back", () => {
    const d = edited(fork(), (doc, ids) => dismissFinding(doc, ids, { key: "short-spur s3", reason: " a stump " }));
    expect(d.dismissals.get("short-spur s3")).toEqual({ key: "short-spur s3", reason: "a stump" });
    expect(edited(d, (doc, ids) => dismissFinding(doc, ids, { key: "short-spur s3", reason: null })).dismissals.size).toBe(0);
    expect(() => dismissFinding(d, idsOf(d), { key: "k", reason: " " })).toThrowError(/with a reason/);
  });
});
