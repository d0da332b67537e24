import { describe, expect, it } from "vitest";
import { compareSets } from "#shared/compare/compare-sets.ts";
import { comparisonReport } from "#shared/compare/comparison-report.ts";
import { differenceSentence } from "#shared/compare/comparison-words.ts";
import { differenceGroups } from "#shared/compare/differences.ts";
import { demoValve } from "#shared/phantom/demo-valve.ts";

const valve = demoValve();
const [a, b] = [valve.passes[0]!.file, valve.passes[1]!.file];
const options = {
  preset: "geometry",
  origin: "held",
  positionScale: 2,
  merge: 0.3,
  tolerance: 0.5,
  minimumDiameter: null,
  step: 0.05,
} as const;
const comparison = compareSets(a, b, options, () => 60_000);
const report = comparisonReport({
  specimen: "HB-07 <b>",
  synthetic: true,
  nameA: "AN-1 & co",
  nameB: "AN-2",
  a,
  b,
  comparison,
  toleranceMm: 0.5,
  atMerges: [
    { merge: 0, whole: 0.25 },
    { merge: 0.3, whole: null },
  ],
  software: "Tautline test",
});

describe("the report on two sets", () => {
  it("needs nothing but itself: no script, no address to load", () => {
    expect(report).not.toMatch(/<script|<link|<img|src=|@import|url\(/);
    const addresses = [...report.matchAll(/https?:\/\/[^"\s]+/g)].map(([address]) => address);
    // The name of SVG's namespace, which is never loaded.
    expect(new Set(addresses)).toEqual(new Set(["http://www.w3.org/2000/svg"]));
  });

  it("carries the cautions, says that the specimen is synthetic, and escapes names", () => {
    expect(report).toContain("Research use only.");
    expect(report).toContain("The specimen is synthetic.");
    expect(report).toContain("HB-07 &lt;b&gt;");
    expect(report).toContain("AN-1 &amp; co");
    expect(report).not.toContain("<b>");
  });

  it("has every difference as its sentence, a picture a pair concerned, and every pair in its table", () => {
    const groups = differenceGroups(comparison, a, b);
    const all = groups.flatMap((group) => group.differences);
    expect(all.length).toBeGreaterThan(1);
    for (const one of all) expect(report).toContain(differenceSentence(one, a, b));
    const pictures = report.match(/front<\/text>/g) ?? [];
    expect(pictures).toHaveLength(groups.filter((group) => group.pair !== null).length);
    for (const pair of comparison.pairs) {
      const name = a.trees.find((tree) => tree.id === pair.a)!.name;
      expect(report).toContain(`<th scope="row">${name}</th>`);
    }
  });
});
