import { describe, expect, it } from "vitest";
import { IDENTITY3, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { drawAssignments } from "#shared/study/draw-assignments.ts";
import { secretBytes } from "#shared/study/study-secrets.ts";
import { sampleStudy } from "#test/shared/study/sample-study.ts";

const gridOf = () => ({
  size: sizeXyz(4, 5, 6),
  spacing: spacingMm(0.04, 0.04, 0.04),
  origin: pointMm(1, 2, 3),
  direction: IDENTITY3,
  frame: "LPS" as const,
});
const drawn = (change: Parameters<typeof sampleStudy>[0] = {}) => {
  const study = sampleStudy(change);
  return { ...study, assignments: drawAssignments(study, gridOf) };
};

describe("the draw of a study", () => {
  it("gives every annotator every specimen as often as planned, training first and once", () => {
    const { assignments } = drawn({ specimens: 5, training: 2, annotators: 3, passes: 3 });
    expect(assignments).toHaveLength(3 * (2 + 15));
    for (const annotator of ["AN-1", "AN-2", "AN-3"]) {
      const own = assignments.filter((one) => one.annotator === annotator).sort((a, b) => a.place - b.place);
      expect(own.map(({ place }) => place)).toEqual(Array.from({ length: 17 }, (_, k) => k + 1));
      expect(own.map(({ training }) => training)).toEqual(Array.from({ length: 17 }, (_, k) => k < 2));
      expect(own.slice(2).map(({ pass }) => pass)).toEqual([1, 1, 1, 1, 1, 2, 2, 2, 2, 2, 3, 3, 3, 3, 3]);
      for (const round of [0, 1, 2])
        expect(new Set(own.slice(2 + 5 * round, 7 + 5 * round).map((one) => one.specimen)).size).toBe(5);
    }
  });

  it("never lets a specimen follow itself, and keeps repeats half a round apart", () => {
    for (let seed = 0; seed < 40; seed += 1) {
      const { assignments } = drawn({ specimens: 6, annotators: 2, passes: 2, seed: seed.toString(16).padStart(64, "0") });
      for (const annotator of ["AN-1", "AN-2"]) {
        const own = assignments.filter((one) => one.annotator === annotator).sort((a, b) => a.place - b.place);
        const first = new Map(own.slice(0, 6).map(({ specimen, place }) => [specimen, place]));
        for (const { specimen, place } of own.slice(6)) expect(place - first.get(specimen)!).toBeGreaterThanOrEqual(3);
      }
    }
  });

  it("shows a specimen to an annotator in another turn each time", () => {
    const { assignments } = drawn({ specimens: 3, annotators: 2, passes: 9 });
    for (const annotator of ["AN-1", "AN-2"])
      for (const specimen of new Set(assignments.map((one) => one.specimen))) {
        const own = assignments.filter((one) => one.annotator === annotator && one.specimen === specimen);
        expect(new Set(own.map(({ turn }) => JSON.stringify(turn))).size).toBe(9);
      }
  });

  it("follows from the seed alone, differs by annotator, and another seed gives another", () => {
    const [a, again, other] = [
      drawn({ annotators: 2 }),
      drawn({ annotators: 2 }),
      drawn({ annotators: 2, seed: "f".repeat(64) }),
    ];
    expect(again.assignments).toEqual(a.assignments);
    const codes = (study: typeof a) => new Set(study.assignments.map(({ code }) => code));
    expect([...codes(other)].filter((code) => codes(a).has(code))).toEqual([]);
    const order = (annotator: string) => a.assignments.filter((one) => one.annotator === annotator).map((one) => one.specimen);
    expect(order("AN-1")).not.toEqual(order("AN-2"));
  });

  it("gives codes and ids that are opaque and all different", () => {
    const { assignments } = drawn({ specimens: 8, annotators: 4, passes: 3 });
    expect(new Set(assignments.map(({ id }) => id)).size).toBe(assignments.length);
    expect(new Set(assignments.map(({ code }) => code)).size).toBe(assignments.length);
    for (const { id, code } of assignments) {
      expect(id).toMatch(/^[a-z][0-9a-z]{19}$/);
      expect(code).toMatch(/^[2-9BCDFGHJKMNPQRTVWXYZ]{4}-[2-9BCDFGHJKMNPQRTVWXYZ]{4}$/);
    }
  });

  it("keeps what is drawn when annotators, specimens or passes are added", () => {
    const before = drawn({ specimens: 3, annotators: 2, passes: 1 });
    const more = sampleStudy({ specimens: 5, annotators: 3, passes: 2 });
    const after = drawAssignments({ ...more, assignments: before.assignments }, gridOf);
    expect(after).toHaveLength(5 * 3 * 2);
    for (const one of before.assignments) expect(after.find(({ id }) => id === one.id)).toEqual(one);
    const places = after.filter(({ annotator }) => annotator === "AN-1").map(({ place }) => place);
    expect([...places].sort((a, b) => a - b)).toEqual(Array.from({ length: 10 }, (_, k) => k + 1));
  });

  it("can be drawn for one specimen, whose repeats then follow each other", () => {
    const { assignments } = drawn({ specimens: 1, annotators: 1, passes: 2 });
    expect(assignments.map(({ pass }) => pass)).toEqual([1, 2]);
  });
});

describe("the study's secrets", () => {
  it("are HMAC-SHA-256 of the words under the seed", () => {
    // RFC 4231 test case 1: key of twenty bytes 0x0b, data "Hi There".
    expect(Buffer.from(secretBytes("0b".repeat(20), "Hi There")).toString("hex")).toBe(
      "b0344c61d8db38535ca8afceaf0bf12b881dc200c9833da726e9376c2e32cff7",
    );
  });
});
