import { describe, expect, it } from "vitest";
import { IDENTITY3, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { drawAssignments } from "#shared/study/draw-assignments.ts";
import type { Assignment, ReturnedPass, StudyRecord } from "#shared/study/study-record.ts";
import { DAY_MS, earliestOut, packetObstacle, passCounts } from "#shared/study/study-standing.ts";
import { analysisAnswer } from "#shared/study/study-view.ts";
import { sampleStudy } from "#test/shared/study/sample-study.ts";

const grid = {
  size: sizeXyz(4, 5, 6),
  spacing: spacingMm(1, 1, 1),
  origin: pointMm(0, 0, 0),
  direction: IDENTITY3,
  frame: "LPS" as const,
};

function study(change: Parameters<typeof sampleStudy>[0] = {}): StudyRecord {
  const record = sampleStudy({ specimens: 2, training: 1, annotators: 1, ...change });
  return { ...record, assignments: drawAssignments(record, () => grid) };
}

function back(at: number, change: Partial<ReturnedPass> = {}): ReturnedPass {
  const effort = { workMs: 1, idleThresholdMs: 1, sessions: 1, edits: 1, undos: 0, redos: 0, interactionsPerTree: 1, trees: [] };
  return {
    at,
    pass: "p1",
    head: { seq: 1, hash: "0".repeat(64) },
    protocolVersion: 1,
    trees: 1,
    openEnds: 0,
    doubts: 0,
    effort,
    drawn: { from: at - 1000, to: at },
    fingerprint: null,
    ...change,
  };
}

/** The study with changed assignments, by their place in the one annotator's order. */
const withPlaces = (record: StudyRecord, change: (one: Assignment) => Partial<Assignment>): StudyRecord => ({
  ...record,
  assignments: record.assignments.map((one) => ({ ...one, ...change(one) })),
});
const at = (record: StudyRecord, place: number) => record.assignments.find((one) => one.place === place)!;
const OUT = { at: 1, protocolVersion: 1, protocolSha256: "1".repeat(64) };

describe("an assignment", () => {
  it("goes out in the order drawn, training first, or together with those before it", () => {
    const record = study();
    expect(packetObstacle(record, at(record, 1), 0)).toBeNull();
    expect(packetObstacle(record, at(record, 2), 0)?.why).toContain(`${at(record, 1).code} comes before it`);
    expect(packetObstacle(record, at(record, 2), 0, new Set([at(record, 1).id]))).toBeNull();
    const sent = withPlaces(record, ({ place }) => (place === 1 ? { out: OUT } : {}));
    expect(packetObstacle(sent, at(sent, 2), 0)).toBeNull();
  });

  it("of a repeat waits for the pass before and for the days of the protocol", () => {
    const record = withPlaces(study(), ({ place }) => (place < 4 ? { out: OUT } : {}));
    expect(packetObstacle(record, at(record, 4), 0)).toMatchObject({
      waivable: false,
      why: expect.stringContaining("has not come back yet"),
    });
    expect(earliestOut(record, at(record, 4))).toBeNull();
    const came = withPlaces(record, ({ pass, place }) => (pass === 1 && place < 4 ? { returned: back(100 * DAY_MS) } : {}));
    expect(earliestOut(came, at(came, 4))).toBe(114 * DAY_MS);
    expect(packetObstacle(came, at(came, 4), 113.5 * DAY_MS)).toEqual({
      why: "Of the 14 days between repeats, 1 is still to pass.",
      waivable: true,
    });
    expect(packetObstacle(came, at(came, 4), 114 * DAY_MS)).toBeNull();
    const none = {
      ...came,
      protocols: [{ ...came.protocols[0]!, content: { ...came.protocols[0]!.content, schedule: { washoutDays: 0 } } }],
    };
    expect(packetObstacle(none, at(none, 4), 100 * DAY_MS)).toBeNull();
  });

  it("stays here while the protocol is not frozen, and once its pass has come back", () => {
    const record = study();
    const open = { ...record, protocols: [{ ...record.protocols[0]!, frozen: null }] };
    expect(packetObstacle(open, at(open, 1), 0)?.why).toMatch(/is not frozen/);
    const came = withPlaces(record, ({ place }) => (place === 1 ? { out: OUT, returned: back(1) } : {}));
    expect(packetObstacle(came, at(came, 1), 0)?.why).toMatch(/has been taken in/);
  });
});

describe("a pass that came back", () => {
  it("counts, unless it is of the training round", () => {
    const record = withPlaces(study(), ({ place }) => ({ out: OUT, returned: back(place * DAY_MS) }));
    expect(passCounts(record, at(record, 1))).toEqual({ yes: false, reason: "The training round does not count." });
    expect(passCounts(record, at(record, 2))).toEqual({ yes: true, reason: null });
    const answer = analysisAnswer(record);
    expect(answer).toMatchObject({ refusal: null, awaited: 0, leftOut: [{ assignment: at(record, 1).id }] });
    expect(answer.passes).toHaveLength(4);
  });

  it("takes no part once the rules for drawing have changed, and stays in when only the analysis has", () => {
    const record = withPlaces(study(), () => ({ out: OUT, returned: back(1) }));
    const [first] = record.protocols;
    const next = (content: (typeof record.protocols)[number]["content"]): StudyRecord => ({
      ...record,
      protocols: [first!, { version: 2, content, frozen: { at: 1, sha256: "2".repeat(64) }, reason: "r" }],
    });
    const { drawing, analysis } = first!.content;
    const redrawn = next({ ...first!.content, drawing: { ...drawing, remarks: "Draw also false chordae." } });
    expect(passCounts(redrawn, at(redrawn, 2))?.reason).toMatch(/drawn under version 1.*differ from version 2's/);
    expect(analysisAnswer(redrawn)).toMatchObject({ refusal: "No specimen has two passes that count yet.", passes: [] });
    const counted = next({ ...first!.content, analysis: { ...analysis, toleranceMm: 0.25 } });
    expect(analysisAnswer(counted)).toMatchObject({ refusal: null, protocol: { version: 2 } });
    expect(analysisAnswer(counted).notes).toContain("Versions of the protocol after the first that was frozen: 1.");
  });

  it("that was drawn before the pass before by the annotator's own clock is told", () => {
    const record = withPlaces(study(), ({ pass }) => ({
      out: OUT,
      returned: back(10 * DAY_MS, { drawn: { from: -pass, to: -pass } }),
    }));
    expect(analysisAnswer(record).notes.filter((note) => note.includes("own clock"))).toHaveLength(2);
  });
});
