import { describe, expect, it } from "vitest";
import { cellWords, nextStep, passGrid, progressOf } from "#renderer/study/passes/grid.ts";
import type { AssignmentCell, StudyView } from "#shared/api/study.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";

const cell = (change: Partial<AssignmentCell>): AssignmentCell => ({
  id: "a1",
  code: "K7Q2",
  annotator: "AN-1",
  specimen: "s1",
  pass: 1,
  training: false,
  place: 1,
  state: "planned",
  out: null,
  returned: null,
  setAside: [],
  earliest: null,
  why: null,
  waivable: false,
  counts: null,
  ...change,
});
const returned = { trees: 14, openEnds: 0 } as AssignmentCell["returned"];
const study = (change: Partial<StudyView>): StudyView => ({
  id: "st",
  name: "Harrow Bay",
  created: 0,
  specimens: [
    { id: "s1", name: "HB-07", training: false, problem: null },
    { id: "s2", name: "HB-08", training: false, problem: null },
    { id: "s0", name: "HB-11", training: true, problem: null },
  ],
  annotators: [
    { name: "AN-1", fingerprint: null },
    { name: "AN-2", fingerprint: null },
  ],
  passes: 2,
  protocol: {
    version: 1,
    content: beginningProtocol(),
    frozen: { at: 1, sha256: "0" },
    reason: "",
    missing: [],
    remarks: [],
    touches: [],
  },
  versions: [],
  assignments: [],
  events: [],
  ...change,
});

describe("the grid of a study", () => {
  it("has a row for each specimen and a column for each annotator's pass, training apart", () => {
    const found = cell({ annotator: "AN-2", pass: 2, specimen: "s2" });
    const view = study({ assignments: [found, cell({ specimen: "s0", training: true })] });
    const grid = passGrid(view, false);
    expect(grid.columns.map(({ annotator, pass }) => `${annotator} ${pass}`)).toEqual(["AN-1 1", "AN-1 2", "AN-2 1", "AN-2 2"]);
    expect(grid.rows.map(({ specimen }) => specimen.name)).toEqual(["HB-07", "HB-08"]);
    expect(grid.rows[1]!.cells).toEqual([null, null, null, found]);
    const training = passGrid(view, true);
    expect(training.columns).toHaveLength(2);
    expect(training.rows.map(({ cells }) => cells[0]?.training)).toEqual([true]);
  });

  it("says of each cell where it stands, by a mark as well as a word", () => {
    const marks = new Set<string>();
    for (const [one, kind, word, more] of [
      [null, "undrawn", "not drawn", ""],
      [cell({}), "ready", "ready", ""],
      [
        cell({ why: "Days have not passed.", waivable: true, earliest: Date.UTC(2026, 11, 15, 12) }),
        "waits",
        "waits",
        "until 2026-12-15",
      ],
      [cell({ why: "The scan is missing." }), "waits", "waits", ""],
      [cell({ state: "out", out: { at: Date.UTC(2026, 11, 1, 12), protocolVersion: 1 } }), "out", "out", "since 2026-12-01"],
      [cell({ state: "returned", returned, counts: { yes: true, reason: null } }), "returned", "returned", "14\u00a0trees"],
      [cell({ state: "returned", returned, counts: { yes: false, reason: "x" } }), "left-out", "takes no part", "14\u00a0trees"],
      [
        cell({ state: "returned", returned, training: true, counts: { yes: false, reason: "x" } }),
        "returned",
        "returned",
        "14\u00a0trees",
      ],
    ] as const) {
      const words = cellWords(one);
      expect(words).toMatchObject({ kind, word, more });
      marks.add(words.mark);
    }
    expect(marks.size).toBe(6);
  });

  it("says what comes next at every stage", () => {
    const unfrozen = study({}).protocol;
    expect(nextStep(study({ protocol: { ...unfrozen, frozen: null } }))).toMatch(/freeze it/);
    expect(nextStep(study({ protocol: { ...unfrozen, version: 2, frozen: null } }))).toMatch(/freeze version 2/);
    expect(nextStep(study({ assignments: [cell({})] }))).toMatch(/make packets/);
    expect(nextStep(study({ assignments: [cell({ why: "no" }), cell({ state: "out" })] }))).toMatch(/come back/);
    expect(nextStep(study({ assignments: [cell({ why: "no" })] }))).toMatch(/says why/);
    expect(nextStep(study({ assignments: [cell({ state: "returned" })] }))).toMatch(/Every pass is back/);
  });

  it("counts the passes that are back, training left out", () => {
    const assignments = [cell({ state: "returned" }), cell({ state: "returned", training: true, specimen: "s0" }), cell({})];
    expect(progressOf(study({ assignments }))).toEqual({ planned: 8, back: 1 });
  });
});
