import { describe, expect, it } from "vitest";
import { annotatorNames, draftOfTyped, EMPTY_STUDY, planSentence } from "#renderer/study/make/study-draft.ts";

const typed = {
  name: " Harrow Bay ",
  parts: { a: "counted", b: "none", c: "training", d: "counted" },
  annotators: "AN-1, AN-2\n\n AN-3 ;",
  passes: "2",
} as const;

describe("a study as it is put together", () => {
  it("names annotators line by line or between commas", () => {
    expect(annotatorNames(typed.annotators)).toEqual(["AN-1", "AN-2", "AN-3"]);
  });

  it("becomes a draft in the shelf's order of specimens", () => {
    expect(draftOfTyped(typed, ["d", "c", "b", "a"])).toEqual({
      draft: { name: "Harrow Bay", specimens: ["d", "a"], training: ["c"], annotators: ["AN-1", "AN-2", "AN-3"], passes: 2 },
    });
    expect(planSentence(typed)).toBe("2 × 3 × 2: 12 passes that count, and 3 of the training round.");
  });

  it("says everything that is missing at once", () => {
    expect(draftOfTyped({ ...EMPTY_STUDY, passes: "ten" }, ["a"])).toEqual({
      missing: [
        "Give the study a name.",
        "Choose at least one specimen that counts.",
        "Name at least one annotator.",
        'Passes of each annotator: a whole number from 1 to 9 is expected, found "ten".',
      ],
    });
    expect(draftOfTyped({ ...typed, annotators: "AN-1, AN-1" }, ["a", "d"])).toEqual({ missing: ["AN-1 is named twice."] });
  });
});
