import { describe, expect, it } from "vitest";
import { type GuideWarning, guideWarnings, type TracedString } from "#shared/checks/guide-warnings.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";

// All cases are made by hand from straight pieces, so that the right place and length follow from the drawing.
const stem: TracedString = { strand: "s1", line: run([0, 0, 0], [0, 0, 20]), radiusMm: 0.3 };

describe("warnings of a guide", () => {
  it("says nothing of a guide that keeps to itself, nor of one that crosses a string and goes straight on", () => {
    expect(guideWarnings(run([2, 0, 0], [2, 0, 20]), [], [stem])).toEqual([]);
    expect(guideWarnings(run([-5, 0, 10], [5, 0.1, 10]), [], [stem])).toEqual([]);
  });

  it("says nothing without strings, without length, and beside a strand that is not traced", () => {
    expect(guideWarnings(run([0, 0, 0], [0, 0, 5]), [], [])).toEqual([]);
    expect(guideWarnings([[0, 0, 0]], [], [stem])).toEqual([]);
    expect(guideWarnings(run([0, 0, 0], [0, 0, 5]), [], [{ strand: "s2", line: [[0, 0, 0]], radiusMm: 1 }])).toEqual([]);
  });

  it("tells a ride along a string that was traced before, with its length", () => {
    const guide = [
      ...run([3, 0, 2], [0.1, 0, 5]),
      ...run([0.1, 0, 5], [0.1, 0, 12]).slice(1),
      ...run([0.1, 0, 12], [3, 0, 15]).slice(1),
    ];
    const [warning, ...rest] = guideWarnings(guide, [], [stem]);
    expect(rest).toEqual([]);
    expect(warning).toMatchObject({ kind: "rides", strand: "s1" });
    expect((warning as { lengthMm: number }).lengthMm).toBeCloseTo(7.5, 0);
    expect(warning!.at[2]).toBeCloseTo(8.5, 0);
  });

  it.each([20, 40, 70, 90])("puts the fork where a guide leaves the string it began on, at %d degrees", (degrees) => {
    const turn = (degrees * Math.PI) / 180;
    const end: Vec3 = [6 * Math.sin(turn), 0, 8 + 6 * Math.cos(turn)];
    const guide = [...run([0, 0, 4], [0, 0, 8]), ...run([0, 0, 8], end).slice(1)];
    const [warning, ...rest] = guideWarnings(guide, [], [stem]);
    expect(rest).toEqual([]);
    expect(warning).toMatchObject({ kind: "leaves", strand: "s1" });
    expect(distance(warning!.at, [0, 0, 8])).toBeLessThan(0.1);
  });

  it("finds the fork also where the guide cut the corner", () => {
    const guide = [...run([0, 0, 4], [0, 0, 7.2]), [0.25, 0, 7.9] as Vec3, ...run([0.7, 0, 8.7], [4, 0, 12])];
    const [warning] = guideWarnings(guide, [], [stem]);
    // The branch's own line meets the stem's axis at z = 8.
    expect(warning).toMatchObject({ kind: "leaves" });
    expect(distance(warning!.at, [0, 0, 8])).toBeLessThan(0.6);
  });

  it("tells the same place for a guide that arrives at a string as for one that leaves it", () => {
    const away: Vec3 = [4, 0, 12];
    const guide = [...run(away, [0, 0, 8]), ...run([0, 0, 8], [0, 0, 7.6]).slice(1)];
    const [warning, ...rest] = guideWarnings(guide, [], [stem]);
    expect(rest).toEqual([]);
    expect(warning).toMatchObject({ kind: "meets", strand: "s1" });
    expect(distance(warning!.at, [0, 0, 8])).toBeLessThan(0.1);
  });

  it("tells exchanged tails at a crossing where both would run straight on", () => {
    // Two straight strings cross; each was drawn with the other's second half.
    const bent: TracedString = {
      strand: "s2",
      line: [...run([-6, 0, 0], [0, 0, 6]), ...run([0, 0, 6], [-6, 0, 12]).slice(1)],
      radiusMm: 0.3,
    };
    const guide = [...run([6, 0.1, 0], [0, 0.1, 6]), ...run([0, 0.1, 6], [6, 0.1, 12]).slice(1)];
    const [warning, ...rest] = guideWarnings(guide, [], [bent]);
    expect(rest).toEqual([]);
    expect(warning).toMatchObject({ kind: "tails", strand: "s2" });
    // Each turns by 90 degrees as drawn and by 0 exchanged.
    expect((warning as { bendDegrees: number }).bendDegrees).toBeCloseTo(180, 0);
  });

  it("tells a short stretch that the image does not show between two that it shows as a jump", () => {
    const guide = run([5, 0, 0], [5, 0, 10]);
    const at = (mm: number) => Math.round(mm / 0.2);
    expect(guideWarnings(guide, [[at(4), at(5)]], [])).toEqual([
      { kind: "jumps", at: expect.anything(), lengthMm: expect.closeTo(1, 6) },
    ]);
    // At the ends of the guide and over long stretches the image simply shows nothing.
    expect(guideWarnings(guide, [[at(0), at(1)]], [])).toEqual([]);
    expect(guideWarnings(guide, [[at(9), at(10)]], [])).toEqual([]);
    expect(guideWarnings(guide, [[at(3), at(7)]], [])).toEqual([]);
  });

  it("gives them in the order of the guide", () => {
    const other: TracedString = { strand: "s2", line: run([3, 0, 20], [-3, 0, 20]), radiusMm: 0.3 };
    const guide = [...run([0.1, 0, 2], [0.1, 0, 10]), ...run([0.1, 0, 10], [2, 0, 20.1]).slice(1)];
    expect(
      guideWarnings(guide, [], [other, { ...stem, line: run([0, 0, 0], [0, 0, 14]) }]).map(
        (warning: GuideWarning) => warning.kind,
      ),
    ).toEqual(["leaves", "meets"]);
  });
});

/** A straight piece in steps of 0.2 mm. */
function run(from: Vec3, to: Vec3): Vec3[] {
  const steps = Math.max(1, Math.round(distance(from, to) / 0.2));
  return Array.from(
    { length: steps + 1 },
    (_, i) => from.map((value, axis) => value + ((to[axis]! - value) * i) / steps) as unknown as Vec3,
  );
}
