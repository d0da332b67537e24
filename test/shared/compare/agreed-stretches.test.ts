import { describe, expect, it } from "vitest";
import { agreedStretches } from "#shared/compare/agreed-stretches.ts";

/** Points along x from 0 to 10 mm, one each millimetre; y bends away by `off` from x = 5 on. */
const line = (tree: string, off: number) => ({
  tree,
  points: Array.from({ length: 11 }, (_, x) => [x, x > 5 ? off : 0, 0]).flat(),
});
const partner = (tree: string) => ({ t1: "u1" })[tree];

describe("agreed stretches", () => {
  it("cover a line that the partner follows as one", () => {
    expect(agreedStretches([line("t1", 0)], [line("u1", 0.3)], partner, 0.5)).toEqual([[{ first: 0, last: 10, agreed: true }]]);
  });

  it("end where the partner goes elsewhere, and share the point there", () => {
    expect(agreedStretches([line("t1", 0)], [line("u1", 8)], partner, 0.5)).toEqual([
      [
        { first: 0, last: 5, agreed: true },
        { first: 5, last: 10, agreed: false },
      ],
    ]);
  });

  it("are none along a tree that is not the partner, though it lies in the same place", () => {
    expect(agreedStretches([line("t1", 0)], [line("u2", 0)], partner, 0.5)).toEqual([[{ first: 0, last: 10, agreed: false }]]);
  });

  it("are none along a tree without a partner", () => {
    expect(agreedStretches([line("t7", 0)], [line("u1", 0)], partner, 0.5)).toEqual([[{ first: 0, last: 10, agreed: false }]]);
  });
});
