import { expect, test } from "vitest";
import { pointMm } from "#shared/geometry/types.ts";
import { drawnStrands } from "#shared/marks/drawn-strand.ts";
import { emptyDocument, type TreeDocument } from "#shared/trees/document.ts";

const document: TreeDocument = {
  ...emptyDocument(),
  trees: new Map([["t3", { id: "t3", name: "ALPM-03", root: "n1" }]]),
  nodes: new Map([
    ["n1", { id: "n1", tree: "t3", kind: "origin", position: pointMm(0, 0, 0) }],
    ["n2", { id: "n2", tree: "t3", kind: "insertion", position: pointMm(0, 0, 4) }],
  ]),
  strands: new Map([
    ["s1", { id: "s1", tree: "t3", from: "n1", to: "n2", curve: "c1", via: [] }],
    ["s2", { id: "s2", tree: "t3", from: "n1", to: "n2", curve: null, via: [pointMm(1, 0, 2)], certainty: "doubtful" }],
    ["s3", { id: "s3", tree: "t3", from: "n1", to: "n9", curve: null, via: [] }],
  ]),
  crossLinks: new Map([["x1", { id: "x1", from: "n1", to: "n2", curve: null, via: [] }]]),
  curves: new Map([
    [
      "c1",
      {
        id: "c1",
        points: Float64Array.of(0, 0, 0, 0, 0.5, 2, 0, 0, 4),
        radii: Float64Array.of(0.3, Number.NaN, 0.2),
        madeBy: [[0, 2, "guide"]],
        imageFit: 0.9,
      },
    ],
  ]),
};

test("a traced strand shows its curve; an untraced one the straight lines through its pins, without radii", () => {
  const [traced, straight] = drawnStrands(document);
  expect(traced).toMatchObject({ id: "s1", name: "ALPM-03", traced: true, doubtful: false });
  expect(traced!.points).toBe(document.curves.get("c1")!.points);
  expect([...straight!.points]).toEqual([0, 0, 0, 1, 0, 2, 0, 0, 4]);
  expect(straight).toMatchObject({ traced: false, doubtful: true });
  expect(straight!.radii.every(Number.isNaN)).toBe(true);
});

test("a cross-link belongs to no tree, and a strand without its nodes is left out", () => {
  expect(drawnStrands(document).map(({ id, tree }) => [id, tree])).toEqual([
    ["s1", "t3"],
    ["s2", "t3"],
    ["x1", null],
  ]);
});
