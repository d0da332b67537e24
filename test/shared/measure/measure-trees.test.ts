import { describe, expect, it } from "vitest";
import { measureTrees } from "#shared/measure/measure-trees.ts";
import type { PlainSet, PlainStrand } from "#shared/trees/plain-trees.ts";

type Place = readonly [number, number, number];
const line = (a: Place, b: Place, n = 40): number[][] =>
  Array.from({ length: n + 1 }, (_, k) => a.map((x, axis) => x + ((b[axis]! - x) * k) / n));
const strand = (id: string, from: string, to: string, points: number[][], radius: number | null = 0.25): PlainStrand => ({
  id,
  from,
  to,
  points,
  radii: points.map(() => radius),
});

/** A fork of half-angle 30 degrees in the x-z plane with a waypoint on one branch; the incoming strand leans by 10 degrees. */
function forked(): PlainSet {
  const tilt = (10 * Math.PI) / 180;
  const root: Place = [-6 * Math.sin(tilt), 0, -6 * Math.cos(tilt)];
  const half = Math.PI / 6;
  const at = (s: number, side: number): Place => [side * s * Math.sin(half), 0, s * Math.cos(half)];
  return {
    trees: [
      {
        id: "t1",
        name: "ALPM-01",
        root: "n1",
        nodes: [
          { id: "n1", kind: "origin", position: root },
          { id: "n2", kind: "fork", position: [0, 0, 0] },
          { id: "n3", kind: "waypoint", position: at(1, 1) },
          { id: "n4", kind: "insertion", position: at(8, 1) },
          { id: "n5", kind: "insertion", position: at(5, -1) },
        ],
        strands: [
          strand("s1", "n1", "n2", line(root, [0, 0, 0])),
          strand("s2", "n2", "n3", line([0, 0, 0], at(1, 1))),
          strand("s3", "n4", "n3", line(at(8, 1), at(1, 1))),
          strand("s4", "n2", "n5", line([0, 0, 0], at(5, -1)), null),
        ],
      },
    ],
  };
}

describe("measures of trees", () => {
  const measures = measureTrees(forked());
  const byId = (id: string) => measures.strands.find((one) => one.id === id)!;
  const nodeOf = (id: string) => measures.nodes.find((one) => one.id === id)!;

  it("sums lengths of stored points and counts", () => {
    expect(byId("s1").length).toBeCloseTo(6, 9);
    expect(byId("s3").length).toBeCloseTo(7, 9);
    expect(measures.trees).toEqual([{ id: "t1", name: "ALPM-01", length: expect.closeTo(19, 9), strands: 4, forks: 1, ends: 2 }]);
    expect(measures.totals).toEqual({ trees: 1, strands: 4, forks: 1, ends: 2, length: expect.closeTo(19, 9) });
  });

  it("gives branch orders that waypoints do not raise, whichever way a strand is stored", () => {
    expect(["s1", "s2", "s3", "s4"].map((id) => byId(id).order)).toEqual([1, 2, 2, 2]);
    expect(["s1", "s2", "s3", "s4"].map((id) => byId(id).trunk)).toEqual([true, false, false, false]);
  });

  it("gives path and straight lengths from the origin", () => {
    expect(nodeOf("n4").pathLength).toBeCloseTo(14, 9);
    expect(nodeOf("n5").pathLength).toBeCloseTo(11, 9);
    expect(nodeOf("n1").pathLength).toBe(0);
    expect(nodeOf("n4").straightLength!).toBeLessThan(14);
  });

  it("gives the fork's angles through waypoints: 60 between branches, 10 off the straight (statics of the construction)", () => {
    expect(nodeOf("n2").branchingAngle).toBeCloseTo(60, 6);
    expect(nodeOf("n2").straightnessAngle).toBeCloseTo(10, 6);
    expect(nodeOf("n3").branchingAngle).toBeNull();
  });

  it("gives null, not zero, where no radius was measured", () => {
    expect(byId("s4")).toMatchObject({ meanRadius: null, minRadius: null, maxRadius: null, meanArea: null });
    expect(byId("s1").meanRadius).toBeCloseTo(0.25, 12);
    expect(byId("s1").meanArea).toBeCloseTo(Math.PI * 0.0625, 12);
  });

  it("leaves one local diameter at both ends out of radius statistics", () => {
    const points = line([0, 0, 0], [10, 0, 0], 100);
    const radii = points.map((p) => (p[0]! < 0.85 || p[0]! > 9.15 ? 0.45 : 0.2));
    const set: PlainSet = {
      trees: [
        {
          id: "t",
          root: "a",
          nodes: [
            { id: "a", kind: "origin", position: [0, 0, 0] },
            { id: "b", kind: "insertion", position: [10, 0, 0] },
          ],
          strands: [{ id: "s", from: "a", to: "b", points, radii }],
        },
      ],
    };
    expect(measureTrees(set).strands[0]).toMatchObject({
      meanRadius: expect.closeTo(0.2, 12),
      maxRadius: 0.2,
      slack: expect.closeTo(0, 12),
    });
  });

  // Arc over chord of a parabola with sag/span 0.05, 0.1, 0.2: geometry, recomputed by an independent program.
  it.each([
    [0.05, 1.00663],
    [0.1, 1.02606],
    [0.2, 1.09823],
  ])("reads the slack of a parabola with sag %d of its span", (sag, ratio) => {
    const points = Array.from({ length: 2001 }, (_, k) => {
      const x = k / 2000;
      return [x * 10, 0, 10 * 4 * sag * x * (1 - x)];
    });
    const set: PlainSet = {
      trees: [
        {
          id: "t",
          root: "a",
          nodes: [
            { id: "a", kind: "origin", position: [0, 0, 0] },
            { id: "b", kind: "insertion", position: [10, 0, 0] },
          ],
          strands: [{ id: "s", from: "a", to: "b", points }],
        },
      ],
    };
    expect(measureTrees(set).strands[0]!.slack).toBeCloseTo(ratio - 1, 5);
  });

  it("gives null paths and orders where the root does not reach", () => {
    const set = forked();
    const loose = { trees: [{ ...set.trees[0]!, root: null }] };
    expect(measureTrees(loose).strands.every((one) => one.order === null && one.trunk === null)).toBe(true);
    expect(measureTrees(loose).nodes.every((one) => one.pathLength === null)).toBe(true);
  });
});
