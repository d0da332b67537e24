import { describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { CompareOptions } from "#shared/compare/comparison.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { demoValve } from "#shared/phantom/demo-valve.ts";
import { humanPasses } from "#shared/phantom/human-passes.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";

const OPTIONS: CompareOptions = {
  preset: "geometry",
  origin: "held",
  positionScale: 2,
  merge: 0.3,
  tolerance: 0.5,
  minimumDiameter: null,
  step: 0.05,
};

/** Kinds of events, in order of their names, that the comparison finds between the truth and a pass. */
function found(truth: PlainSet, pass: PlainSet): string[] {
  const answer = compareSets(truth, pass, OPTIONS, () => 60_000);
  return answer.pairs.flatMap((pair) => pair.events.map((event) => event.event)).sort();
}

// The generator writes down each error it makes, without knowing how the comparison looks for it.
describe("passes with known errors", () => {
  it.each([1, 2, 3, 4, 5, 6])("of the block phantom of seed %d: exactly the errors put in, each once", (seed) => {
    const made = blockPhantom({ name: "phantom", seed, size: [256, 256, 256], spacingMm: 0.04, trees: 4, noise: 0.05 });
    const { passes, errors } = humanPasses(made, seed);
    for (const pass of passes) {
      const put = errors.filter((error) => error.annotator === pass.annotator).map((error) => error.event);
      expect(found(made.truth, pass.file)).toEqual([...put].sort());
    }
  });

  it("of the demo valve: exactly the errors put in, each once", () => {
    const valve = demoValve();
    for (const pass of valve.passes) {
      const put = valve.errors.filter((error) => error.annotator === pass.annotator).map((error) => error.event);
      expect(put.length).toBeGreaterThan(0);
      expect(found(valve.truth, pass.file)).toEqual([...put].sort());
    }
  });
});
