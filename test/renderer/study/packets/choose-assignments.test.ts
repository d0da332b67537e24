import { describe, expect, it } from "vitest";
import { canGoWith, keptChoice } from "#renderer/study/packets/choose-assignments.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";

const cell = (
  id: string,
  annotator: string,
  specimen: string,
  pass: number,
  place: number,
  state: AssignmentCell["state"] = "planned",
) => ({ id, annotator, specimen, pass, place, state }) as AssignmentCell;
const view = (assignments: readonly AssignmentCell[], frozen = true, problem: string | null = null) =>
  ({
    protocol: { frozen: frozen ? { at: 1, sha256: "" } : null },
    specimens: [
      { id: "s1", problem: null },
      { id: "s2", problem },
    ],
    assignments,
  }) as unknown as StudyView;
const drawn = [
  cell("a", "AN-1", "s2", 1, 1),
  cell("b", "AN-1", "s1", 1, 2),
  cell("c", "AN-1", "s1", 2, 3),
  cell("z", "AN-2", "s1", 1, 1),
];

describe("choosing assignments to send", () => {
  it("follows the order drawn for each annotator", () => {
    const study = view(drawn);
    expect(canGoWith(study, drawn[0]!, new Set())).toBe(true);
    expect(canGoWith(study, drawn[1]!, new Set())).toBe(false);
    expect(canGoWith(study, drawn[1]!, new Set(["a"]))).toBe(true);
    expect(canGoWith(study, drawn[3]!, new Set())).toBe(true);
  });

  it("keeps a repeat back until the pass before it came home", () => {
    expect(canGoWith(view(drawn), drawn[2]!, new Set(["a", "b"]))).toBe(false);
    const back = [cell("a", "AN-1", "s2", 1, 1, "out"), cell("b", "AN-1", "s1", 1, 2, "returned"), drawn[2]!];
    expect(canGoWith(view(back), back[2]!, new Set())).toBe(true);
    expect(canGoWith(view(back), back[1]!, new Set())).toBe(false);
  });

  it("needs a frozen protocol and the scan", () => {
    expect(canGoWith(view(drawn, false), drawn[0]!, new Set())).toBe(false);
    expect(canGoWith(view(drawn, true, "It is gone."), drawn[0]!, new Set())).toBe(false);
  });

  it("lets go of what came after one that is taken out", () => {
    expect([...keptChoice(view(drawn), new Set(["b", "z"]))]).toEqual(["z"]);
    expect([...keptChoice(view(drawn), new Set(["a", "b", "z"]))]).toEqual(["a", "b", "z"]);
  });
});
