import { expect, test } from "vitest";
import { hitTest } from "#renderer/section/hit-test.ts";
import { projectScene } from "#renderer/section/project-scene.ts";
import type { SectionContent } from "#renderer/section/section-content.ts";
import type { ViewPlane } from "#renderer/section/view-plane.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { emptyDocument, type TreeDocument } from "#shared/trees/document.ts";

const size = { width: 400, height: 400, ratio: 1 };
// 0.1 mm a pixel; the pane's middle is (20, 20, 0), so pixel = 10 * mm.
const plane: ViewPlane = { centre: pointMm(20, 20, 0), right: [1, 0, 0], down: [0, 1, 0], mmPerPx: 0.1 };

const document: TreeDocument = {
  ...emptyDocument(),
  trees: new Map([["t1", { id: "t1", name: "ALPM-01", root: "n1" }]]),
  nodes: new Map([
    ["n1", { id: "n1", tree: "t1", kind: "origin", position: pointMm(5, 10, 0) }],
    ["n2", { id: "n2", tree: "t1", kind: "insertion", position: pointMm(35, 10, 0) }],
    ["n3", { id: "n3", tree: "t1", kind: "origin", position: pointMm(5, 10.4, 1.5) }],
    ["n4", { id: "n4", tree: "t1", kind: "insertion", position: pointMm(35, 10.4, 1.5) }],
    ["n5", { id: "n5", tree: "t1", kind: "open", position: pointMm(20, 30, 9) }],
  ]),
  strands: new Map([
    ["s1", { id: "s1", tree: "t1", from: "n1", to: "n2", curve: null, via: [pointMm(15, 10, 0)] }],
    ["s2", { id: "s2", tree: "t1", from: "n3", to: "n4", curve: null, via: [] }],
  ]),
};

function hitAt(x: number, y: number, change: Partial<SectionContent> = {}, ruler: { from: number; to: number } | null = null) {
  const content = {
    document,
    strands: null,
    places: [],
    selection: {},
    slabMm: 0.4,
    underWay: null,
    ...change,
  } as SectionContent;
  const scene = projectScene(content, plane, size);
  const end = (px: number) => ({ x: px, y: 300, depthMm: 0 });
  return hitTest(scene, { ruler: ruler === null ? null : { from: end(ruler.from), to: end(ruler.to) } }, x, y, 0.2);
}

test("a node is hit within half a 24 px target, and not beyond", () => {
  expect(hitAt(50, 110)).toEqual({ kind: "node", id: "n1" });
  expect(hitAt(50, 115)).not.toEqual({ kind: "node", id: "n1" });
});

test("a strand is hit between its nodes and tells where along it", () => {
  const hit = hitAt(250, 98);
  expect(hit).toMatchObject({ kind: "strand", id: "s1" });
  if (hit?.kind !== "strand") return;
  expect(hit.atMm).toBeCloseTo(20, 9);
  expect(hit.point[0]).toBeCloseTo(25, 9);
  expect(hit.point[1]).toBeCloseTo(10, 9);
});

test("the strand in the slab wins over one that only shines through, even when that is nearer", () => {
  expect(hitAt(250, 103.5)).toMatchObject({ kind: "strand", id: "s1" });
  expect(hitAt(250, 109)).toMatchObject({ kind: "strand", id: "s2" });
});

test("what is too deep to show cannot be hit", () => {
  expect(hitAt(200, 300)).toBeNull();
});

test("pins can be grabbed on the selected strand only", () => {
  expect(hitAt(150, 100)).toMatchObject({ kind: "strand" });
  expect(hitAt(150, 100, { selection: { strand: "s1" } })).toEqual({ kind: "pin", strand: "s1", index: 0 });
});

test("pins under way and the ruler's ends can be grabbed", () => {
  const underWay = { tree: null, pins: [pointMm(10, 25, 0), pointMm(12, 25, 7)], curves: [] };
  expect(hitAt(100, 250, { underWay })).toEqual({ kind: "under-way-pin", index: 0 });
  expect(hitAt(120, 250, { underWay })).toEqual({ kind: "under-way-pin", index: 1 });
  expect(hitAt(303, 301, {}, { from: 300, to: 350 })).toEqual({ kind: "ruler-end", end: "from" });
});
