import { describe, expect, it } from "vitest";
import { contentOf, draftOf } from "#renderer/study/protocol/protocol-draft.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";

describe("a protocol as it is typed", () => {
  it("comes back as it was when nothing is typed", () => {
    const content = beginningProtocol();
    expect(contentOf(draftOf(content))).toEqual({ content });
  });

  it("keeps what is typed, with a decimal comma and spare spaces understood", () => {
    const draft = draftOf(beginningProtocol());
    const typed = contentOf({
      ...draft,
      minimumDiameter: " 0,2 ",
      margin: "0.3",
      primary: "total length",
      labels: [{ label: " texture ", on: "strand", values: "smooth, , frayed ", required: true }],
    });
    if (!("content" in typed)) throw new Error("it can be understood");
    expect(typed.content.drawing.limits.minimumDiameterMm).toBe(0.2);
    expect(typed.content.analysis).toMatchObject({ marginMm: 0.3, primary: "total length" });
    expect(typed.content.drawing.labels).toEqual([
      { label: "texture", on: "strand", values: ["smooth", "frayed"], required: true },
    ]);
  });

  it("takes an empty limit for none, and names every number that cannot be understood", () => {
    const draft = draftOf(beginningProtocol());
    const none = contentOf({ ...draft, minimumDiameter: "", margin: " " });
    expect("content" in none && none.content.drawing.limits.minimumDiameterMm).toBeNull();
    const typed = contentOf({ ...draft, tolerance: "0", merge: "-1", washoutDays: "1.5", margin: "wide", mostBranches: "" });
    expect("problems" in typed && typed.problems).toEqual([
      "Matching tolerance: more than 0 is expected.",
      'Forks count as one below: a number of 0 or more is expected, found "-1".',
      'Margin: a number of 0 or more is expected, found "wide".',
      'Days between repeats: a whole number of 0 or more is expected, found "1.5".',
    ]);
  });

  it("does not let a label without a word pass", () => {
    const draft = draftOf(beginningProtocol());
    const typed = contentOf({ ...draft, labels: [{ label: " ", on: "fork", values: "", required: false }] });
    expect("problems" in typed && typed.problems).toEqual(["Label 1 has no word. Give it one, or take it out."]);
  });
});
