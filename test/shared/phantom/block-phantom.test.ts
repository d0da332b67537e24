import { describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import { checkChordaeFile } from "#shared/formats/chordae/check-chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { nearestOnPolyline } from "#shared/geometry/polyline.ts";
import { blockPhantom, mostTrees } from "#shared/phantom/block-phantom.ts";
import { humanPasses } from "#shared/phantom/human-passes.ts";
import { pinsOf } from "#shared/phantom/pins.ts";
import { smallestGap } from "#test/shared/phantom/gaps.ts";

const block = (seed: number, trees = 4, n = 256) =>
  blockPhantom({ name: "phantom", seed, size: [n, n, n], spacingMm: 0.04, trees, noise: 0.05 });

describe("a block of synthetic trees", () => {
  it("has as many trees as asked for, in valid files, inside the scan", () => {
    for (const [seed, trees, n] of [
      [1, 4, 256],
      [2, 1, 64],
      [3, 9, 192],
    ] as const) {
      const made = block(seed, trees, n);
      expect(made.truth.trees.length).toBe(trees);
      for (const file of [
        made.truth,
        pinsOf(made.truth, made.crossings, seed),
        ...humanPasses(made, seed).passes.map((p) => p.file),
      ])
        expect(() => checkChordaeFile(file, "f")).not.toThrow();
      const places = made.truth.trees.flatMap((tree) => tree.strands.flatMap((strand) => strand.points!));
      for (const p of places) for (const c of p) expect(c > 0 && c < n * 0.04).toBe(true);
      expect(made.crossings.length).toBe(trees > 1 ? 1 : 0);
    }
    expect(mostTrees([64, 64, 64])).toBe(4);
  });

  it("is the same for the same seed, scan and trees, and another for another seed", () => {
    const texts = [1, 1, 2].map((seed) => writeChordaeFile(block(seed).truth));
    expect(texts[1]).toBe(texts[0]);
    expect(texts[2]).not.toBe(texts[0]);
    const slices = [1, 1].map((seed) => {
      const out = new Uint16Array(64 * 64 * 5);
      block(seed, 2, 64).renderSlab(20, 25, out);
      return out;
    });
    expect(slices[1]).toEqual(slices[0]);
  });

  it("keeps trees apart by two voxels except where two cross on purpose, and these touch", () => {
    for (const seed of [1, 2]) {
      const made = block(seed);
      const [a, b] = made.crossings[0]!.strands;
      const crossed = (x: string, y: string) => (x === a && y === b) || (x === b && y === a);
      // Fork strands of the two trees come near the crossing too; they are held to the rule.
      expect(smallestGap(made.truth, crossed)).toBeGreaterThan(0.08);
      const touching = smallestGap(made.truth, (x, y) => !crossed(x, y));
      expect(touching).toBeLessThan(0.04);
      expect(touching).toBeGreaterThan(-0.04);
    }
  });

  it("pins every strand beside its axis by less than 0.3 of its radius", () => {
    const made = block(5);
    const pins = pinsOf(made.truth, made.crossings, 5);
    let count = 0;
    const clicked = pins.trees.flatMap((tree) => tree.strands);
    for (const [k, truth] of made.truth.trees.flatMap((tree) => tree.strands).entries()) {
      expect(clicked[k]).not.toHaveProperty("points");
      for (const pin of clicked[k]!.via ?? []) {
        count += 1;
        const near = nearestOnPolyline(truth.points!, pin);
        expect(near.distance).toBeLessThan(0.3 * truth.radii![near.segment]!);
      }
    }
    expect(count).toBeGreaterThan(10);
  });
});

describe("the passes over it", () => {
  it("differ from the truth by exactly the events that are listed", () => {
    const options = { preset: "geometry", origin: "held", positionScale: 2, merge: 0.3, tolerance: 0.5 } as const;
    for (const seed of [1, 2]) {
      const made = block(seed);
      const { passes, errors } = humanPasses(made, seed);
      expect(errors.map((error) => error.event).sort()).toEqual(["exchanged-tails", "missed-branch", "moved-fork", "short-end"]);
      for (const { annotator, file } of passes) {
        const comparison = compareSets(made.truth, file, { ...options, minimumDiameter: null, step: 0.02 }, () => 20);
        const found = comparison.pairs.flatMap((pair) => pair.events.map((event) => event.event)).sort();
        const listed = errors
          .filter((error) => error.annotator === annotator)
          .map((error) => error.event)
          .sort();
        expect(found).toEqual(listed);
      }
    }
  });
});
