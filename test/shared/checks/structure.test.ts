import { describe, expect, it } from "vitest";
import { structureFindings } from "#shared/checks/structure.ts";
import type { PlainNode, PlainStrand, PlainTree } from "#shared/trees/plain-trees.ts";

type Place = readonly [number, number, number];
const node = (id: string, kind: string, position: Place): PlainNode => ({ id, kind, position });

function strand(id: string, from: PlainNode, to: PlainNode, radius = 0.2): PlainStrand {
  const points = Array.from({ length: 21 }, (_, k) => from.position.map((x, axis) => x + ((to.position[axis]! - x) * k) / 20));
  return { id, from: from.id, to: to.id, points, radii: points.map(() => radius) };
}

const r = node("n1", "origin", [0, 0, 0]);
const b = node("n2", "fork", [0, 0, 6]);
const e1 = node("n3", "insertion", [-3, 0, 12]);
const e2 = node("n4", "insertion", [3, 0, 12]);
const sound: PlainTree = {
  id: "t1",
  name: "ALPM-01",
  root: "n1",
  nodes: [r, b, e1, e2],
  strands: [strand("s1", r, b), strand("s2", b, e1), strand("s3", b, e2)],
};
const codes = (...trees: PlainTree[]) =>
  structureFindings({ trees }).map(
    (finding) => `${finding.severity} ${finding.code} ${finding.at.node ?? "-"} ${finding.at.strand ?? "-"}`,
  );

// The list of codes and their weights is the project's own; each case breaks one rule of what a tree is.
describe("structure findings", () => {
  it("finds nothing in a sound tree", () => {
    expect(codes(sound)).toEqual([]);
  });

  it("misses the root", () => {
    expect(codes({ ...sound, root: null })).toEqual(["error no-root n1 -"]);
    expect(codes({ ...sound, root: "n99" })).toEqual(["error no-root n1 -"]);
  });

  it("finds a piece that hangs on nothing", () => {
    expect(codes({ ...sound, strands: sound.strands.slice(0, 2), nodes: sound.nodes })).toEqual([
      "error not-connected n4 -",
      "warning two-strand-fork n2 -",
    ]);
  });

  it("finds a loop, a doubled strand and a strand onto itself", () => {
    expect(codes({ ...sound, strands: [...sound.strands, strand("s4", e1, e2)] })).toEqual(["error loop n4 s4"]);
    expect(codes({ ...sound, strands: [...sound.strands, { id: "s5", from: "n2", to: "n2" }] })).toContain("error loop n2 s5");
  });

  it("finds an unfinished end", () => {
    expect(codes({ ...sound, nodes: [r, b, e1, { ...e2, kind: "open" }] })).toEqual(["error open-end n4 -"]);
  });

  it("finds a strand without points", () => {
    const { points: _points, radii: _radii, ...bare } = sound.strands[2]!;
    expect(codes({ ...sound, strands: [...sound.strands.slice(0, 2), bare] })).toEqual(["warning no-points n2 s3"]);
  });

  it("finds a spur shorter than the radius of the strand it leaves", () => {
    const stub = node("n5", "insertion", [0, 0.25, 6]);
    expect(
      codes({
        ...sound,
        nodes: [...sound.nodes, stub],
        strands: [strand("s1", r, b, 0.5), ...sound.strands.slice(1), strand("s4", b, stub, 0.1)],
      }),
    ).toEqual(["warning short-spur n5 s4"]);
    const long = node("n5", "insertion", [0, 3, 6]);
    expect(
      codes({
        ...sound,
        nodes: [...sound.nodes, long],
        strands: [strand("s1", r, b, 0.5), ...sound.strands.slice(1), strand("s4", b, long, 0.1)],
      }),
    ).toEqual([]);
  });

  it("finds a string traced twice in one tree and by two trees, but not touching neighbours", () => {
    const twin = node("n6", "insertion", [3.05, 0.05, 12]);
    expect(codes({ ...sound, nodes: [...sound.nodes, twin], strands: [...sound.strands, strand("s4", b, twin)] })).toEqual([
      "warning overlapping-strands - s3",
    ]);
    const beside = (offset: number): PlainTree => {
      const [p, q] = [node("m1", "origin", [offset, 0, 0]), node("m2", "insertion", [offset, 0, 5])];
      return { id: "t2", root: "m1", nodes: [p, q], strands: [strand("u1", p, q)] };
    };
    expect(codes(sound, beside(0.1))).toEqual(["warning shared-stretch - s1"]);
    expect(codes(sound, beside(0.4))).toEqual([]);
  });
});
