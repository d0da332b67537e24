import type { AnalysisAnswer, AssignmentCell, StudySummary, StudyView } from "#shared/api/study.ts";
import { missingFromProtocol, remarksOnProtocol } from "#shared/study/protocol.ts";
import { protocolTouches } from "#shared/study/protocol-change.ts";
import type { Assignment, StudyRecord } from "#shared/study/study-record.ts";
import { currentProtocol, earliestOut, packetObstacle, passCounts } from "#shared/study/study-standing.ts";

/** What a specimen's place in the library looks like: a sentence when something is wrong, else null. */
export type SpecimenProblem = (specimen: string) => string | null;

/** The study as the lead's screen shows it: no seed and no turns. @param now UTC milliseconds. */
export function studyView(study: StudyRecord, problemOf: SpecimenProblem, now: number): StudyView {
  const current = currentProtocol(study);
  const versions = study.protocols.map(({ version, frozen, reason, content }, i) => ({
    version,
    frozen,
    reason,
    touches: i === 0 ? [] : protocolTouches(study.protocols[i - 1]!.content, content),
  }));
  return {
    id: study.id,
    name: study.name,
    created: study.created,
    specimens: study.specimens.map(({ id, name, training }) => ({ id, name, training, problem: problemOf(id) })),
    annotators: study.annotators,
    passes: study.passes,
    protocol: {
      ...current,
      missing: missingFromProtocol(current.content),
      remarks: remarksOnProtocol(current.content),
      touches: versions[versions.length - 1]!.touches,
    },
    versions,
    assignments: study.assignments.map((assignment) => cellOf(study, assignment, problemOf, now)),
    events: study.events,
  };
}

/** The study as the shelf lists it. */
export function studySummary(study: StudyRecord): StudySummary {
  const counted = study.assignments.filter(({ training }) => !training);
  const specimens = study.specimens.filter(({ training }) => !training).length;
  const planned = study.assignments.length > 0 ? counted.length : specimens * study.annotators.length * study.passes;
  const { version, frozen } = currentProtocol(study);
  return {
    id: study.id,
    name: study.name,
    created: study.created,
    specimens,
    annotators: study.annotators.length,
    protocol: { version, frozen: frozen !== null },
    counts: {
      planned,
      out: counted.filter(({ out, returned }) => out && !returned).length,
      returned: counted.filter(({ returned }) => returned).length,
    },
  };
}

/** Whether the study can be analysed, and from which passes. */
export function analysisAnswer(study: StudyRecord): AnalysisAnswer {
  const current = currentProtocol(study);
  const names = new Map(study.specimens.map(({ id, name }) => [id, name]));
  const judged = study.assignments.map((assignment) => ({ assignment, counts: passCounts(study, assignment) }));
  const passes = judged
    .filter(({ counts }) => counts?.yes)
    .map(({ assignment: { id, annotator, specimen, pass, returned } }) => ({
      assignment: id,
      annotator,
      specimen,
      specimenName: names.get(specimen) ?? specimen,
      pass,
      effort: returned!.effort,
      drawn: returned!.drawn,
    }));
  const leftOut = judged.flatMap(({ assignment, counts }) =>
    counts && !counts.yes ? [{ assignment: assignment.id, reason: counts.reason ?? "" }] : [],
  );
  const awaited = study.assignments.filter(({ training, returned }) => !training && !returned).length;
  const notes: string[] = [];
  if (awaited > 0) notes.push(`Passes planned that have not come back: ${awaited}.`);
  const openEnds = study.assignments.filter(({ returned }) => returned && returned.openEnds > 0).length;
  if (openEnds > 0) notes.push(`Passes that were taken in with open ends: ${openEnds}.`);
  const setAside = study.assignments.reduce((sum, one) => sum + one.setAside.length, 0);
  if (setAside > 0) notes.push(`Returned passes that the lead set aside: ${setAside}; the reasons stand in the study.`);
  const waived = study.events.filter(({ what }) => what === "washout-waived").length;
  if (waived > 0) notes.push(`Packets sent before the days between repeats had passed: ${waived}.`);
  const late = study.protocols.slice(1).filter(({ frozen }) => frozen).length;
  if (late > 0) notes.push(`Versions of the protocol after the first that was frozen: ${late}.`);
  notes.push(...clocksBack(study));
  return {
    refusal: refusalOf(study, passes),
    protocol: current.frozen && { version: current.version, sha256: current.frozen.sha256 },
    passes,
    leftOut,
    awaited,
    notes,
  };
}

/** Sentences on repeats that were drawn before the pass before by the annotator's own clock: the days between are not known. */
function clocksBack({ assignments, specimens }: StudyRecord): string[] {
  return assignments.flatMap(({ annotator, specimen, pass, returned }) => {
    const before = assignments.find((one) => one.annotator === annotator && one.specimen === specimen && one.pass === pass - 1);
    if (!returned?.drawn || !before?.returned?.drawn || returned.drawn.from >= before.returned.drawn.to) return [];
    const name = specimens.find(({ id }) => id === specimen)?.name ?? specimen;
    return [
      `By ${annotator}'s own clock, pass ${pass} over ${name} was drawn before pass ${pass - 1}: the days between them are not known.`,
    ];
  });
}

function refusalOf(study: StudyRecord, passes: AnalysisAnswer["passes"]): string | null {
  const { version, frozen } = currentProtocol(study);
  if (!frozen) return `Version ${version} of the protocol is not frozen: freeze it before any number is made.`;
  const bySpecimen = new Map<string, number>();
  for (const { specimen } of passes) bySpecimen.set(specimen, (bySpecimen.get(specimen) ?? 0) + 1);
  if (![...bySpecimen.values()].some((count) => count > 1)) return "No specimen has two passes that count yet.";
  return null;
}

function cellOf(study: StudyRecord, assignment: Assignment, problemOf: SpecimenProblem, now: number): AssignmentCell {
  const { id, code, annotator, specimen, pass, training, place, out, returned, setAside } = assignment;
  const problem = problemOf(specimen);
  const obstacle = problem === null ? packetObstacle(study, assignment, now) : { why: problem, waivable: false };
  return {
    id,
    code,
    annotator,
    specimen,
    pass,
    training,
    place,
    state: returned ? "returned" : out ? "out" : "planned",
    out: out && { at: out.at, protocolVersion: out.protocolVersion },
    returned,
    setAside: setAside.map((one) => ({ pass: one.pass, reason: one.reason, setAsideAt: one.setAsideAt })),
    earliest: earliestOut(study, assignment),
    why: obstacle?.why ?? null,
    waivable: obstacle?.waivable ?? false,
    counts: passCounts(study, assignment),
  };
}
