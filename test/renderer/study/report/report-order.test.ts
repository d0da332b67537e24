import { describe, expect, it } from "vitest";
import { madeFrom, reportOrder } from "#renderer/study/report/report-order.ts";
import type { StudyFile } from "#shared/agreement/study/study.ts";
import type { AnalysisAnswer, AssignmentCell, StudyView } from "#shared/api/study.ts";
import { beginningProtocol } from "#shared/study/protocol.ts";

const content = beginningProtocol();
const returned = { head: { seq: 5, hash: "h1" }, trees: 14, effort: { trees: [] } };
const cell = (change: object) =>
  ({
    id: "a1",
    annotator: "AN-1",
    specimen: "s1",
    pass: 1,
    training: false,
    out: { at: 1, protocolVersion: 2 },
    returned,
    counts: { yes: true, reason: null },
    setAside: [],
    ...change,
  }) as unknown as AssignmentCell;
const view = (assignments: readonly AssignmentCell[]): StudyView =>
  ({
    id: "st",
    name: "Harrow Bay",
    specimens: [{ id: "s1", name: "HB-07" }],
    protocol: {
      version: 2,
      frozen: { at: Date.UTC(2026, 11, 1), sha256: "f00d" },
      content: {
        ...content,
        analysis: { ...content.analysis, primary: "total length", toleranceMm: 0.4, marginMm: 0.2 },
        drawing: { ...content.drawing, limits: { ...content.drawing.limits, minimumDiameterMm: 0.15 } },
      },
    },
    versions: [
      { version: 1, frozen: { at: Date.UTC(2026, 10, 1), sha256: "0" }, reason: "" },
      { version: 2, frozen: { at: Date.UTC(2026, 11, 1), sha256: "f00d" }, reason: "Forks were vague." },
    ],
    assignments,
  }) as unknown as StudyView;
const analysis = (change: Partial<AnalysisAnswer>): AnalysisAnswer =>
  ({
    refusal: null,
    passes: [
      {
        assignment: "a1",
        annotator: "AN-1",
        specimenName: "HB-07",
        pass: 1,
        effort: { workMs: 90_000, idleThresholdMs: 120_000, edits: 30, undos: 4, trees: [] },
      },
    ],
    leftOut: [],
    notes: [],
    ...change,
  }) as unknown as AnalysisAnswer;
const software = { name: "Tautline", version: "0.0.0" };
const order = (study: StudyView, answer: AnalysisAnswer, method: Parameters<typeof reportOrder>[3] = null) =>
  reportOrder(study, answer, [], method, software, "2026-12-02T00:00:00Z");

describe("what a study's report is made of", () => {
  it("takes tolerance, margin and minimum diameter from the protocol, and effort from the logs", () => {
    const { options, context } = order(view([cell({})]), analysis({}));
    expect(options).toMatchObject({ margin: 0.2, method: null, compare: { tolerance: 0.4, minimumDiameter: 0.15 } });
    expect(context.protocol).toMatchObject({ version: 2, primaryQuantity: "total length", frozen: "2026-12-01T00:00:00.000Z" });
    expect(context.effort).toEqual([
      { specimen: "HB-07", annotator: "AN-1", pass: 1, secondsAtWork: 90, edits: 30, undos: 4, trees: 14 },
    ]);
    expect(context.idleSeconds).toBe(120);
  });

  it("says how passes were blinded only when all of them went out as packets", () => {
    expect(order(view([cell({})]), analysis({})).context.blinding).not.toBeNull();
    expect(order(view([cell({ out: null })]), analysis({})).context.blinding).toBeNull();
  });

  it("names passes that take no part, but not those of the training round", () => {
    const cells = [cell({}), cell({ id: "a2", pass: 2 }), cell({ id: "a3", training: true })];
    const leftOut = [
      { assignment: "a2", reason: "Other rules." },
      { assignment: "a3", reason: "Training." },
    ];
    const { notes } = order(view(cells), analysis({ leftOut, notes: ["One was waived."] }));
    expect(notes.slice(0, 2)).toEqual(["One was waived.", "HB-07, AN-1, pass 2 takes no part. Other rules."]);
    expect(notes.join()).not.toContain("Training.");
  });

  it("says why a pass was set aside and why the protocol was changed", () => {
    const cells = [cell({ setAside: [{ pass: "p", reason: "The wrong stick.", setAsideAt: 1 }] })];
    expect(order(view(cells), analysis({})).notes).toEqual([
      "HB-07, AN-1, pass 1: a returned pass was set aside. Why: The wrong stick.",
      "Version 2 of the protocol was frozen on 2026-12-01. Why: Forks were vague.",
    ]);
  });

  it("gives a method's files the method's name, whatever they say themselves", () => {
    const file = { name: "m.chordae.json", file: { annotator: "AN-1", pass: 3 } } as unknown as StudyFile;
    const { files, options } = order(view([cell({})]), analysis({}), { name: "method", files: [file], sameEngine: true });
    expect(files).toMatchObject([{ file: { annotator: "method", pass: 1 } }]);
    expect(options).toMatchObject({ method: "method", sameEngine: true });
  });

  it("is known to be old when a pass came in or was set aside since", () => {
    const before = madeFrom(view([cell({})]), null);
    expect(madeFrom(view([cell({})]), null)).toBe(before);
    expect(madeFrom(view([cell({}), cell({ id: "a2" })]), null)).not.toBe(before);
    expect(madeFrom(view([cell({ returned: null })]), null)).not.toBe(before);
  });
});
