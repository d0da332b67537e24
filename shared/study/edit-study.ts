import type { StudyDraft, StudyPatch } from "#shared/api/study.ts";
import { TautlineError } from "#shared/errors.ts";
import { counted } from "#shared/study/count-words.ts";
import { drawAssignments } from "#shared/study/draw-assignments.ts";
import { beginningProtocol, missingFromProtocol, type ProtocolContent } from "#shared/study/protocol.ts";
import { protocolHash } from "#shared/study/protocol-change.ts";
import {
  STUDY_FORMAT,
  STUDY_VERSION,
  type StudyEvent,
  type StudyRecord,
  type StudySpecimenEntry,
} from "#shared/study/study-record.ts";
import { currentProtocol } from "#shared/study/study-standing.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

/** What the library knows of a specimen that is put into a study. */
export interface StudySpecimenFacts {
  readonly name: string;
  readonly sha256: string;
  readonly grid: VolumeGrid;
}

export type SpecimenFactsOf = (specimen: string) => StudySpecimenFacts;

/** A new study with an unfrozen protocol. @throws bad-request for a plan that cannot be. */
export function newStudy(
  draft: StudyDraft,
  facts: SpecimenFactsOf,
  made: { readonly id: string; readonly seed: string; readonly now: number },
): StudyRecord {
  checkDraft(draft);
  return {
    format: STUDY_FORMAT,
    version: STUDY_VERSION,
    id: made.id,
    name: draft.name,
    created: made.now,
    seed: made.seed,
    specimens: entriesOf(draft, facts),
    annotators: draft.annotators.map((name) => ({ name, fingerprint: null })),
    passes: draft.passes,
    protocols: [{ version: 1, content: beginningProtocol(), frozen: null, reason: "" }],
    assignments: [],
    events: [{ at: made.now, what: "made", text: "The study was made." }],
  };
}

/**
 * The study with another plan. Assignments that are drawn and still wanted stay as they are; new ones are drawn for what was
 * added, once anything is drawn at all. @throws conflict when something whose packet is out would go; bad-request
 */
export function changedStudy(study: StudyRecord, patch: StudyPatch, facts: SpecimenFactsOf, now: number): StudyRecord {
  const draft: StudyDraft = {
    name: patch.name ?? study.name,
    specimens: patch.specimens ?? study.specimens.filter((one) => !one.training).map(({ id }) => id),
    training: patch.training ?? study.specimens.filter((one) => one.training).map(({ id }) => id),
    annotators: patch.annotators ?? study.annotators.map(({ name }) => name),
    passes: patch.passes ?? study.passes,
  };
  checkDraft(draft);
  const known = new Map(study.specimens.map((one) => [one.id, one]));
  const annotators = new Map(study.annotators.map((one) => [one.name, one]));
  const planned = {
    ...study,
    name: draft.name,
    // A specimen keeps the hash it came in with: another scan under the same id is told by it.
    specimens: entriesOf(draft, (id) => facts(id)).map((one) => ({ ...one, sha256: known.get(one.id)?.sha256 ?? one.sha256 })),
    annotators: draft.annotators.map((name) => annotators.get(name) ?? { name, fingerprint: null }),
    passes: draft.passes,
  };
  const wanted = (one: StudyRecord["assignments"][number]) =>
    draft.annotators.includes(one.annotator) &&
    (one.training ? draft.training.includes(one.specimen) : draft.specimens.includes(one.specimen) && one.pass <= draft.passes);
  const gone = study.assignments.filter((one) => !wanted(one));
  const out = gone.find((one) => one.out || one.returned || one.setAside.length > 0);
  if (out) {
    const what = `assignment ${out.code} of ${out.annotator}`;
    throw new TautlineError("conflict", `The ${what} is out already: what it belongs to stays in the study.`, {
      what,
      expected: "no packet made",
      found: "a packet made",
    });
  }
  const kept = { ...planned, assignments: study.assignments.filter(wanted) };
  const drawn = study.assignments.length === 0 ? kept : { ...kept, assignments: drawAssignments(kept, (id) => facts(id).grid) };
  return noted(drawn, { at: now, what: "changed", text: `The plan was changed: ${planText(drawn)}.` });
}

/** The study with another content of its unfrozen protocol. @throws conflict when it is frozen */
export function withProtocol(study: StudyRecord, content: ProtocolContent): StudyRecord {
  const current = currentProtocol(study);
  if (current.frozen) {
    const sentence = `Version ${current.version} of the protocol is frozen and stays as it is: begin the next version to change it.`;
    throw new TautlineError("conflict", sentence, { what: "protocol", expected: "an unfrozen version", found: "a frozen one" });
  }
  return { ...study, protocols: [...study.protocols.slice(0, -1), { ...current, content }] };
}

/** The study with its protocol frozen, and every assignment drawn. @throws conflict when frozen already; bad-request when something is missing */
export function frozenStudy(study: StudyRecord, facts: SpecimenFactsOf, now: number): StudyRecord {
  const current = currentProtocol(study);
  if (current.frozen) {
    const sentence = `Version ${current.version} of the protocol is frozen already.`;
    throw new TautlineError("conflict", sentence, { what: "protocol", expected: "an unfrozen version", found: "a frozen one" });
  }
  const missing = missingFromProtocol(current.content);
  if (missing.length > 0) {
    const what = missing.join(" ");
    throw new TautlineError("bad-request", `The protocol cannot be frozen yet. ${what}`, { what, where: "protocol" });
  }
  const sha256 = protocolHash(study.id, current);
  const frozen = { ...study, protocols: [...study.protocols.slice(0, -1), { ...current, frozen: { at: now, sha256 } }] };
  const assignments = drawAssignments(frozen, (id) => facts(id).grid);
  const text = `Version ${current.version} of the protocol was frozen, SHA-256 ${sha256}.`;
  const withFreeze = noted({ ...frozen, assignments }, { at: now, what: "protocol-frozen", text });
  const fresh = assignments.length - study.assignments.length;
  if (fresh === 0) return withFreeze;
  return noted(withFreeze, { at: now, what: "drawn", text: `${counted(fresh, "assignment")} drawn: ${planText(withFreeze)}.` });
}

/** The study with the next version of its protocol, a copy of the frozen one, open for changes. @throws conflict */
export function revisedStudy(study: StudyRecord, reason: string, now: number): StudyRecord {
  const { version, content, frozen } = currentProtocol(study);
  if (!frozen) {
    const sentence = `Version ${version} of the protocol is not frozen yet: change it as it is.`;
    throw new TautlineError("conflict", sentence, { what: "protocol", expected: "a frozen version", found: "an unfrozen one" });
  }
  const next = { ...study, protocols: [...study.protocols, { version: version + 1, content, frozen: null, reason }] };
  return noted(next, { at: now, what: "protocol-revised", text: `Version ${version + 1} of the protocol was begun: ${reason}` });
}

/** The study with one more event. */
export function noted(study: StudyRecord, event: StudyEvent): StudyRecord {
  return { ...study, events: [...study.events, event] };
}

function planText({ specimens, annotators, passes }: StudyRecord): string {
  const training = specimens.filter((one) => one.training).length;
  const main = specimens.length - training;
  const round = training === 0 ? "" : `, and ${counted(training, "specimen")} of training`;
  return `${counted(main, "specimen")}, ${counted(annotators.length, "annotator")}, ${counted(passes, "pass", "passes")} each${round}`;
}

function entriesOf({ specimens, training }: StudyDraft, facts: SpecimenFactsOf): StudySpecimenEntry[] {
  return [...specimens, ...training].map((id) => {
    const { name, sha256 } = facts(id);
    return { id, name, training: training.includes(id), sha256 };
  });
}

function checkDraft({ specimens, training, annotators }: StudyDraft): void {
  const refuse = (what: string, where: string) => new TautlineError("bad-request", what, { what, where });
  const twice = (list: readonly string[]) => list.find((one, i) => list.indexOf(one) !== i);
  const specimen = twice([...specimens, ...training]);
  if (specimen !== undefined)
    throw refuse(
      `The specimen ${specimen} is named twice: a specimen is of the training round or of the study, and once.`,
      "body.specimens",
    );
  const annotator = twice(annotators);
  if (annotator !== undefined) throw refuse(`The annotator ${annotator} is named twice.`, "body.annotators");
  if (specimens.length === 0) throw refuse("A study needs at least one specimen that counts.", "body.specimens");
  if (annotators.length === 0) throw refuse("A study needs at least one annotator.", "body.annotators");
}
