import { describe, expect, it } from "vitest";
import { IDENTITY3, pointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { changedStudy, frozenStudy, newStudy, revisedStudy, withProtocol } from "#shared/study/edit-study.ts";
import { parseStudy } from "#shared/study/parse-study.ts";
import { beginningProtocol, missingFromProtocol, type ProtocolContent, remarksOnProtocol } from "#shared/study/protocol.ts";
import { canonicalJson, protocolHash, protocolTouches } from "#shared/study/protocol-change.ts";
import { analysisAnswer, studySummary, studyView } from "#shared/study/study-view.ts";
import { sampleStudy } from "#test/shared/study/sample-study.ts";

const facts = (id: string) => ({
  name: `name of ${id}`,
  sha256: "a".repeat(64),
  grid: {
    size: sizeXyz(3, 4, 5),
    spacing: spacingMm(1, 1, 1),
    origin: pointMm(0, 0, 0),
    direction: IDENTITY3,
    frame: "LPS" as const,
  },
});
const draft = { name: "S", specimens: ["s1", "s2"], training: ["s3"], annotators: ["AN-1", "AN-2"], passes: 2 };
const made = { id: "y0000000000000000001", seed: "7".repeat(64), now: 10 };
const fresh = () => newStudy(draft, facts, made);
const ready = (): ProtocolContent => {
  const content = beginningProtocol();
  return { ...content, analysis: { ...content.analysis, primary: "total length" } };
};
const frozen = () => frozenStudy(withProtocol(fresh(), ready()), facts, 20);

describe("a study", () => {
  it("begins with an unfrozen protocol and nothing drawn, and cannot be analysed", () => {
    const view = studyView(fresh(), () => null, 11);
    expect(view).toMatchObject({ protocol: { version: 1, frozen: null }, assignments: [] });
    expect(analysisAnswer(fresh()).refusal).toMatch(/Version 1 of the protocol is not frozen/);
    expect(JSON.stringify(view)).not.toContain("7".repeat(64));
    expect(JSON.stringify(studyView(frozen(), () => null, 30))).not.toContain("flips");
  });

  it.each([
    [{ specimens: ["s1", "s1"] }, /s1 is named twice/],
    [{ training: ["s1"] }, /s1 is named twice/],
    [{ specimens: [] }, /at least one specimen/],
    [{ annotators: [] }, /at least one annotator/],
    [{ annotators: ["A", "A"] }, /A is named twice/],
  ])("is refused for the plan %j", (change, sentence) => {
    expect(() => newStudy({ ...draft, ...change }, facts, made)).toThrow(sentence);
  });

  it("is frozen only when nothing is missing, and says what is", () => {
    expect(() => frozenStudy(fresh(), facts, 20)).toThrow(/Choose the primary quantity/);
    const content = ready();
    const points = content.drawing.points.filter(({ point }) => point !== "fork");
    expect(missingFromProtocol({ ...content, drawing: { ...content.drawing, points } })).toEqual(["Say where the fork is set."]);
    expect(remarksOnProtocol(content).join(" ")).toMatch(/no still picture.*Without a margin/);
  });

  it("keeps a frozen protocol as it is, under a hash of its own text", () => {
    const study = frozen();
    expect(() => withProtocol(study, ready())).toThrow(/Version 1 of the protocol is frozen/);
    expect(() => frozenStudy(study, facts, 30)).toThrow(/frozen already/);
    const { version, content, frozen: freeze } = study.protocols[0]!;
    expect(freeze).toEqual({ at: 20, sha256: protocolHash(study.id, { version, content }) });
    expect(study.events.map(({ what }) => what)).toEqual(["made", "protocol-frozen", "drawn"]);
    expect(study.assignments).toHaveLength(2 * (1 + 4));
  });

  it("says of every change of the protocol what it touches", () => {
    const study = revisedStudy(frozen(), "pilot round", 40);
    expect(() => revisedStudy(study, "again", 41)).toThrow(/is not frozen yet/);
    expect(analysisAnswer(study).refusal).toMatch(/Version 2 of the protocol is not frozen/);
    const before = ready();
    const after: ProtocolContent = {
      drawing: { ...before.drawing, limits: { ...before.drawing.limits, minimumDiameterMm: 0.2 } },
      analysis: { ...before.analysis, toleranceMm: 0.4, marginMm: 0.3 },
      schedule: { washoutDays: 21 },
    };
    expect(protocolTouches(before, after).map(({ key, part }) => `${part} ${key}`)).toEqual([
      "drawing drawing.limits",
      "analysis analysis.toleranceMm",
      "analysis analysis.marginMm",
      "schedule schedule.washoutDays",
    ]);
    expect(protocolTouches(before, ready())).toEqual([]);
    const view = studyView(withProtocol(study, after), () => null, 50);
    expect(view.protocol.touches[0]!.sentence).toMatch(/take no part in the analysis/);
  });

  it("draws for what is added and takes out what is not out yet", () => {
    const study = frozen();
    const more = changedStudy(study, { annotators: ["AN-1", "AN-2", "AN-3"], specimens: ["s1", "s2", "s4"] }, facts, 60);
    expect(more.assignments).toHaveLength(3 * (1 + 6));
    for (const one of study.assignments) expect(more.assignments).toContainEqual(one);
    const less = changedStudy(more, { annotators: ["AN-2"] }, facts, 70);
    expect(new Set(less.assignments.map(({ annotator }) => annotator))).toEqual(new Set(["AN-2"]));
    expect(studySummary(more).counts).toEqual({ planned: 18, out: 0, returned: 0 });
  });
});

describe("a study file", () => {
  const file = () =>
    JSON.parse(JSON.stringify(frozen())) as Record<string, never> & {
      protocols: { content: { schedule: { washoutDays: number } } }[];
    };

  it("comes back as it was written", () => {
    expect(parseStudy(file(), "study.json")).toEqual(frozen());
    expect(parseStudy(JSON.parse(JSON.stringify(sampleStudy())), "study.json")).toEqual(sampleStudy());
  });

  it("whose frozen protocol was changed outside is refused", () => {
    const changed = file();
    changed.protocols[0]!.content.schedule.washoutDays = 1;
    expect(() => parseStudy(changed, "study.json")).toThrow(/A frozen protocol was changed outside the program/);
  });

  it.each([
    ["a newer version", { version: 2 }, /expected version 1, found version 2.*newer version of the program/],
    ["another format", { format: "x" }, /expected one of tautline-study/],
    ["a short seed", { seed: "12" }, /study.seed\): expected 64 hex digits/],
    ["no protocol", { protocols: [] }, /at least one version of the protocol/],
    ["an unknown key", { extra: 1 }, /study.extra/],
  ])("with %s is refused, naming the place", (_, change, sentence) => {
    expect(() => parseStudy({ ...file(), ...change }, "study.json")).toThrow(sentence);
  });
});

describe("canonical JSON", () => {
  it("is the same whatever the order of keys, and without spaces", () => {
    expect(canonicalJson({ b: [1, { d: null, c: "x" }], a: true })).toBe('{"a":true,"b":[1,{"c":"x","d":null}]}');
    expect(canonicalJson({ a: undefined, b: 1 })).toBe('{"b":1}');
  });
});
