import { describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { CompareOptions } from "#shared/compare/comparison.ts";
import type { PlainSet, PlainTree } from "#shared/trees/plain-trees.ts";

const OPTIONS: CompareOptions = {
  preset: "geometry",
  origin: "held",
  positionScale: 2,
  merge: 0.3,
  tolerance: 0.5,
  minimumDiameter: null,
  step: 0.02,
};
const forever = () => 30_000;

type Place = readonly [number, number, number];

/** A tree from places: a trunk to a fork, and straight branches to the ends. */
function fan(id: string, root: Place, fork: Place, ends: readonly Place[], name = ""): PlainTree {
  const nodes = [
    { id: `${id}r`, kind: "origin", position: root },
    { id: `${id}b`, kind: "fork", position: fork },
    ...ends.map((position, k) => ({ id: `${id}e${k}`, kind: "insertion", position })),
  ];
  const line = (a: Place, b: Place) => Array.from({ length: 21 }, (_, k) => a.map((x, axis) => x + ((b[axis]! - x) * k) / 20));
  const strands = [
    { id: `${id}s`, from: `${id}r`, to: `${id}b`, points: line(root, fork), radii: new Array(21).fill(0.3) },
    ...ends.map((end, k) => ({
      id: `${id}s${k}`,
      from: `${id}b`,
      to: `${id}e${k}`,
      points: line(fork, end),
      radii: new Array(21).fill(0.2),
    })),
  ];
  return { id, name, root: `${id}r`, nodes, strands };
}

const one = fan(
  "t1",
  [0, 0, 0],
  [0, 0, 6],
  [
    [-3, 0, 12],
    [3, 0, 12],
    [0, 3, 12],
  ],
);
const two = fan(
  "t2",
  [10, 0, 0],
  [10, 0, 6],
  [
    [8, 0, 13],
    [12, 0, 13],
  ],
);
const set = (...trees: PlainTree[]): PlainSet => ({ trees });
const events = (a: PlainSet, b: PlainSet) => compareSets(a, b, OPTIONS, forever).pairs.flatMap((pair) => pair.events);

describe("comparison of sets", () => {
  it("finds nothing between a set and itself", () => {
    const answer = compareSets(set(one, two), set(two, one), OPTIONS, forever);
    expect(answer.pairs.map((pair) => [pair.a, pair.b, pair.ged, pair.exact, pair.events.length, pair.script.length])).toEqual([
      ["t1", "t1", 0, true, 0, 0],
      ["t2", "t2", 0, true, 0, 0],
    ]);
    expect(answer.whole.ged).toBe(0);
    expect(answer.whole.overlap.ov).toBe(1);
    expect(answer.whole.distances.hd).toBeLessThan(1e-12);
    expect(answer.whole.detection.count).toEqual({ true: 7, missed: 0, extra: 0, recall: 1, precision: 1 });
  });

  it("tells what was found by branch order and by the labels of ends", () => {
    const labelled = {
      ...one,
      nodes: one.nodes.map((node, k) =>
        node.kind === "insertion" ? { ...node, leaflet: k === 4 ? "posterior" : "anterior", zone: "rough" } : node,
      ),
    };
    const b = set(
      fan(
        "t1",
        [0, 0, 0],
        [0, 0, 6],
        [
          [-3, 0, 12],
          [3, 0, 12],
        ],
      ),
    );
    const { byOrder, byLabel, count } = compareSets(set(labelled), b, OPTIONS, forever).whole.detection;
    expect(byOrder).toEqual([
      { order: 1, true: 1, missed: 0, recall: 1 },
      { order: 2, true: 2, missed: 1, recall: 2 / 3 },
    ]);
    expect(byLabel).toEqual([
      { label: "leaflet", value: "anterior", true: 2, missed: 0, recall: 1 },
      { label: "leaflet", value: "posterior", true: 0, missed: 1, recall: 0 },
      { label: "zone", value: "rough", true: 2, missed: 1, recall: 2 / 3 },
    ]);
    expect(count).toMatchObject({ true: 3, missed: 1 });
  });

  it("counts an empty side in full: pair-normalised 1", () => {
    const answer = compareSets(set(), set(one, two), OPTIONS, forever);
    expect(answer.whole.normalised).toEqual({ pair: 1, reference: null });
    expect(answer.whole.ged).toBe(9 + 7);
    expect(answer.onlyB).toEqual(["t1", "t2"]);
  });

  it("fails a tree that lies 10 mm away", () => {
    const away = fan(
      "t1",
      [0, 10, 0],
      [0, 10, 6],
      [
        [-3, 10, 12],
        [3, 10, 12],
        [0, 13, 12],
      ],
    );
    const answer = compareSets(set(one), set(away), OPTIONS, forever);
    expect(answer.pairs[0]!.normalised.reference).toBeGreaterThan(0.6);
  });

  it("does not exchange neighbours whose shapes were exchanged", () => {
    const b = set(
      fan(
        "p",
        [0, 0, 0],
        [0, 0, 6],
        [
          [-2, 0, 13],
          [2, 0, 13],
        ],
      ),
      fan(
        "q",
        [10, 0, 0],
        [10, 0, 6],
        [
          [7, 0, 12],
          [13, 0, 12],
          [10, 3, 12],
        ],
      ),
    );
    const answer = compareSets(set(one, two), b, OPTIONS, forever);
    expect(answer.pairs.map((pair) => [pair.a, pair.b])).toEqual([
      ["t1", "p"],
      ["t2", "q"],
    ]);
  });

  it("gives scripts whose costs add up to the distance", () => {
    const b = set(
      fan(
        "t1",
        [0, 0.2, 0],
        [0, 0, 6.8],
        [
          [-3, 0, 12],
          [3, 0.4, 12],
        ],
      ),
      two,
    );
    const pair = compareSets(set(one, two), b, OPTIONS, forever).pairs[0]!;
    expect(pair.script.reduce((sum, step) => sum + step.cost, 0)).toBeCloseTo(pair.ged, 9);
    expect(pair.ged).toBeGreaterThan(1);
  });
});

describe("events in an annotator's words", () => {
  it("names a missed branch once, with its length", () => {
    const b = set(
      fan(
        "t1",
        [0, 0, 0],
        [0, 0, 6],
        [
          [-3, 0, 12],
          [3, 0, 12],
        ],
      ),
    );
    expect(events(set(one), b)).toMatchObject([{ event: "missed-branch", a: "t1s2", b: null }]);
    expect(events(b, set(one))).toMatchObject([{ event: "extra-branch", a: null, b: "t1s2" }]);
  });

  it("names a missed branch once even when its fork dissolves", () => {
    const a = set(two);
    const joined = fan("t2", [10, 0, 0], [10, 0, 6], [[8, 0, 13]]);
    const single = {
      ...joined,
      nodes: joined.nodes.map((node) => (node.kind === "fork" ? { ...node, kind: "waypoint" } : node)),
    };
    expect(events(a, set(single)).map((event) => event.event)).toEqual(["missed-branch"]);
  });

  it("names a fork placed 0.6 mm low", () => {
    const b = set(
      fan(
        "t1",
        [0, 0, 0],
        [0, 0, 5.4],
        [
          [-3, 0, 12],
          [3, 0, 12],
          [0, 3, 12],
        ],
      ),
    );
    const found = events(set(one), b);
    expect(found).toMatchObject([{ event: "moved-fork", a: "t1b", b: "t1b" }]);
    expect(found[0]!.length).toBeCloseTo(0.6, 6);
  });

  it("names a strand ended short, by how much", () => {
    const b = set(
      fan(
        "t1",
        [0, 0, 0],
        [0, 0, 6],
        [
          [-3, 0, 12],
          [3, 0, 12],
          [0, 2, 10],
        ],
      ),
    );
    const found = events(set(one), b);
    expect(found).toMatchObject([{ event: "short-end", a: "t1e2", b: "t1e2" }]);
    expect(Math.abs(found[0]!.length - Math.hypot(1, 2))).toBeLessThan(0.2);
  });

  it("names a strand ended short once where only one other strand leaves its fork", () => {
    const short = fan(
      "t2",
      [10, 0, 0],
      [10, 0, 6],
      [
        [8, 0, 13],
        [11, 0, 9.5],
      ],
    );
    expect(events(set(two), set(short)).map((event) => event.event)).toEqual(["short-end"]);
  });

  it("names tails exchanged between two trees at a crossing once", () => {
    const left = (tail: Place) => fan("l", [0, 0, 0], [2, 0, 6], [[-3, 0, 12], tail]);
    const right = (tail: Place) => fan("r", [6, 0.6, 0], [4, 0.6, 6], [[9, 0.6, 12], tail]);
    const truth = set(left([7, 0, 16]), right([-1, 0.6, 16]));
    // The two tails cross near x = 3; the annotator followed the wrong one from there.
    const bend = (tree: PlainTree, via: Place): PlainTree => ({
      ...tree,
      strands: tree.strands.map((strand) => {
        if (!strand.id.endsWith("s1")) return strand;
        const [a, b] = [strand.points![0]!, strand.points![20]!];
        const piece = (p: readonly number[], q: readonly number[], first: number) =>
          Array.from({ length: 11 }, (_, k) => p.map((x, axis) => x + ((q[axis]! - x) * k) / 10)).slice(first);
        return { ...strand, points: [...piece(a, via, 0), ...piece(via, b, 1)], radii: new Array(21).fill(0.2) };
      }),
    });
    const seen = set(bend(left([-1, 0.6, 16]), [3, 0.3, 8]), bend(right([7, 0, 16]), [3, 0.3, 8]));
    expect(events(truth, seen).map((event) => event.event)).toEqual(["exchanged-tails"]);
  });

  it("names a branch hung on another fork of the same tree", () => {
    const chain = (third: string): PlainTree => {
      const places: Record<string, Place> = {
        r: [0, 0, 0],
        b: [0, 0, 5],
        c: [0, 0, 10],
        e1: [-3, 0, 15],
        e2: [3, 0, 15],
        e3: [0, 3, 9],
        e4: [0, -3, 12],
      };
      const edges = [
        ["r", "b"],
        ["b", "c"],
        ["c", "e1"],
        ["c", "e2"],
        [third, "e3"],
        ["b", "e4"],
      ];
      return {
        id: "t1",
        root: "r",
        nodes: Object.entries(places).map(([id, position]) => ({
          id,
          kind: id === "r" ? "origin" : id.startsWith("e") ? "insertion" : "fork",
          position,
        })),
        strands: edges.map(([from, to], k) => ({ id: `s${k}`, from: from!, to: to! })),
      };
    };
    expect(events(set(chain("b")), set(chain("c"))).map((event) => event.event)).toEqual(["joined-differently"]);
  });

  it("says when a matched tree has another name", () => {
    const named = (name: string) => set({ ...one, name });
    expect(events(named("ALPM-01"), named("PMPM-02"))).toMatchObject([{ event: "renamed", a: "t1", b: "t1" }]);
  });
});
