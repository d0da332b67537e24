import { describe, expect, it } from "vitest";
import { FIRST_PLANNING, planningAnswer } from "#renderer/study/planning/planning-answer.ts";

describe("how many specimens a study needs", () => {
  it("gives Bonett's specimens for an interval of a wished width", () => {
    // Bonett, Stat Med 2002;21:1331-1335: r .8, k 2, width .2: 51, with the correction for two raters 55; (.8, 3, .2): 36.
    expect(planningAnswer({ ...FIRST_PLANNING, annotators: "2" })).toMatchObject({
      specimens: 55,
      corrected: true,
      clustered: null,
    });
    expect(planningAnswer(FIRST_PLANNING)).toMatchObject({ specimens: 36, corrected: false });
  });

  it("gives the specimens for a test", () => {
    // Walter, Eliasziw & Donner, Stat Med 1998;17:101-110: (.6, .8, k 2) 38.6; (.75, .9, 3) 18.5 before rounding up.
    const two = planningAnswer({ ...FIRST_PLANNING, goal: "test", annotators: "2" });
    expect(two).toMatchObject({ specimens: 39 });
    expect(two.kind === "answer" && two.exact).toBeCloseTo(38.6, 1);
    expect(planningAnswer({ ...FIRST_PLANNING, goal: "test", least: "0,75", expected: "0,9" })).toMatchObject({ specimens: 19 });
  });

  it("counts strands of one specimen for less than independent ones", () => {
    // Design effect 1 + (m - 1) rho, by hand: 1 + 9 * 0.5 = 5.5; 35.x subjects x 5.5 over 10 strands each.
    const draft = { ...FIRST_PLANNING, per: "strand", strandsPerSpecimen: "10", rho: "0.5" } as const;
    const answer = planningAnswer(draft);
    if (answer.kind !== "answer" || answer.clustered === null) throw new Error("an answer was expected");
    expect(answer.clustered.designEffect).toBe(5.5);
    expect(answer.clustered.strands).toBe(Math.ceil(answer.exact * 5.5));
    expect(answer.specimens).toBe(Math.ceil(answer.clustered.strands / 10));
    // Strands that resemble each other wholly: as many specimens as subjects.
    expect(planningAnswer({ ...draft, rho: "1" })).toMatchObject({ specimens: answer.subjects });
  });

  it("says what is wrong with what was typed, and never gives NaN", () => {
    for (const [part, words] of [
      [{ expected: "" }, /expected intraclass correlation, found ""/],
      [{ expected: "1.2" }, /between 0 and 1, found 1.2/],
      [{ annotators: "two" }, /number of annotators, found "two"/],
      [{ annotators: "1" }, /two annotators or more/],
      [{ width: "0" }, /interval width between 0 and 2/],
      [{ goal: "test", least: "0.9" }, /least acceptable < expected/],
      [{ per: "strand", rho: "-1" }, /correlation within specimens/],
    ] as const) {
      const answer = planningAnswer({ ...FIRST_PLANNING, ...part });
      expect(answer.kind === "problem" && answer.sentence).toMatch(words);
    }
  });
});
