import { describe, expect, it } from "vitest";
import { effortRows, effortSums } from "#renderer/study/effort/effort-rows.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";

const returned = (trees: number, workMs: number, interactions: readonly number[]) =>
  ({
    trees,
    effort: { workMs, edits: 10, undos: 2, trees: interactions.map((count) => ({ interactions: count })) },
  }) as unknown as AssignmentCell["returned"];
const cell = (annotator: string, specimen: string, pass: number, back: AssignmentCell["returned"]) =>
  ({ id: `${annotator} ${specimen} ${pass}`, annotator, specimen, pass, returned: back }) as AssignmentCell;
const view = (assignments: readonly AssignmentCell[]) =>
  ({
    specimens: [
      { id: "s1", name: "HB-07" },
      { id: "s2", name: "HB-08" },
    ],
    annotators: [{ name: "AN-2" }, { name: "AN-1" }],
    assignments,
  }) as unknown as StudyView;

describe("effort of the passes that came back", () => {
  it("is listed in the study's order of annotators, specimens and passes; what is out is left out", () => {
    const some = returned(1, 60_000, [3]);
    const rows = effortRows(
      view([cell("AN-1", "s1", 1, some), cell("AN-2", "s2", 1, some), cell("AN-2", "s1", 2, some), cell("AN-2", "s1", 1, null)]),
    );
    expect(rows.map(({ cell: { id }, specimen }) => `${id} ${specimen}`)).toEqual([
      "AN-2 s1 2 HB-07",
      "AN-2 s2 1 HB-08",
      "AN-1 s1 1 HB-07",
    ]);
  });

  it("is summed for each annotator over passes, by trees and not by passes", () => {
    // By hand: 3 minutes over 3 trees; 12 interactions over 4 trees that were touched, one of which was deleted again.
    const rows = effortRows(
      view([cell("AN-1", "s1", 1, returned(1, 60_000, [2, 4])), cell("AN-1", "s2", 1, returned(2, 120_000, [1, 5]))]),
    );
    expect(effortSums(rows)).toEqual([
      {
        annotator: "AN-1",
        passes: 2,
        workMs: 180_000,
        edits: 20,
        undos: 4,
        trees: 3,
        workPerTreeMs: 60_000,
        interactionsPerTree: 3,
      },
    ]);
  });

  it("gives no number per tree where there is no tree", () => {
    const [sum] = effortSums(effortRows(view([cell("AN-1", "s1", 1, returned(0, 5_000, []))])));
    expect(sum).toMatchObject({ workPerTreeMs: null, interactionsPerTree: null });
  });
});
