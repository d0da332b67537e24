import { createHash } from "node:crypto";
import { join } from "node:path";
import { makeFolder } from "#main/node/disk-fault.ts";
import { createId } from "#main/node/layout.ts";
import type { OpenBag } from "#main/node/packet/bag-reader.ts";
import { NEW_PASS } from "#main/node/pass-file.ts";
import type { TakeInOptions } from "#main/node/study/take-in-assignment.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import type { TakenPacket } from "#shared/api/study.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";
import { PAYLOAD_FOLDER } from "#shared/formats/bagit/bag-texts.ts";
import { counted } from "#shared/study/count-words.ts";
import { noted } from "#shared/study/edit-study.ts";
import { PACKET_FILE, RETURN_FILES, type ReturnPacket } from "#shared/study/packet.ts";
import { openEndsOf, type ReturnedLog, readReturnedLog } from "#shared/study/returned-log.ts";
import type { Assignment, ReturnedPass, StudyRecord } from "#shared/study/study-record.ts";
import { turnedFrame } from "#shared/study/turn.ts";
import { recordInTrueFrame } from "#shared/study/turn-log.ts";

/** Largest log and tree file of a returned pass, bytes. */
const MOST_LOG_BYTES = 512 * 1024 * 1024;

/** The study and assignment that a return belongs to. @throws not-found, conflict naming what differs */
export async function returnTarget(
  { store, library }: TakeInOptions,
  packet: ReturnPacket,
): Promise<{ study: StudyRecord; assignment: Assignment; known: boolean }> {
  const { code } = packet;
  const study = await store.read(packet.study).catch((error) => {
    if (!isTautlineError(error, "not-found")) throw error;
    const sentence = `${code} belongs to a study that this library does not lead. Take it in with the lead's library.`;
    throw new TautlineError("not-found", sentence, { what: "study", id: packet.study });
  });
  const assignment = study.assignments.find(({ id }) => id === packet.assignment);
  if (!assignment || assignment.code !== code) {
    const sentence = `${code} is no assignment of the study ${study.name}. It was made from another copy of the study.`;
    throw new TautlineError("not-found", sentence, { what: "assignment", id: packet.assignment });
  }
  const { returned, setAside, out } = assignment;
  if (returned?.head.hash === packet.log.hash) return { study, assignment, known: true };
  if (setAside.some(({ head }) => head.hash === packet.log.hash))
    throw conflict(
      code,
      `${code}: this very pass was set aside by the lead; it is kept and not taken in again.`,
      "a new pass",
      "the one set aside",
    );
  if (returned) {
    const sentence = `${code} has come back already, with another log. The pass that is here stays; set it aside first if this one is to take its place.`;
    throw conflict(code, sentence, `the log ${returned.head.hash.slice(0, 12)}...`, `${packet.log.hash.slice(0, 12)}...`);
  }
  if (!out)
    throw conflict(code, `${code} was never sent out from this library.`, "an assignment that is out", "one that is planned");
  if (out.protocolSha256 !== packet.protocol.sha256) {
    const [expected, found] = [`version ${out.protocolVersion}`, `version ${packet.protocol.version}`];
    const sentence = `${code} was drawn under ${found} of the protocol, but its assignment went out under ${expected}. It was not taken in: have it drawn by the packet that went out last.`;
    throw conflict(code, sentence, expected, found);
  }
  await library.specimen(assignment.specimen);
  return { study, assignment, known: false };
}

/**
 * Takes in a returned pass: the files as they came are kept with the study, the log is brought into the true frame as a pass of
 * the specimen, and last the study says so. Stopped anywhere, the same packet completes it.
 * @throws not-found, conflict, unreadable-input, disk-full, write-failed
 */
export async function takeInReturn(
  options: TakeInOptions,
  bag: OpenBag,
  packet: ReturnPacket,
  allowOpenEnds: boolean,
): Promise<TakenPacket> {
  const { library, files, store } = options;
  const { study, assignment, known } = await returnTarget(options, packet);
  const { content, log } = await readParts(bag, packet);
  if (known) return taken(bag, assignment, study, "known", assignment.returned!.pass, []);
  const open = openEndsOf(log.history.document);
  if (open.length > 0 && !allowOpenEnds) {
    const names = open.map(({ treeName, node }) => `${treeName} (${node})`);
    const shown = names.length > 12 ? `${names.slice(0, 12).join(", ")} and ${names.length - 12} more` : names.join(", ");
    const sentence = `${packet.code} has ${counted(open.length, "open end")}: ${shown}. It was not taken in: have them finished, or allow them.`;
    throw conflict(packet.code, sentence, "no open end", counted(open.length, "open end"));
  }
  const { volume } = await library.specimen(assignment.specimen);
  const frame = turnedFrame(volume, assignment.turn);
  await keepAsItCame(options, study.id, bag, content);
  files.reach("take-in:after-evidence");
  const pass = passId(assignment.id, packet.log.hash);
  await library.passes.takeIn(
    {
      specimen: assignment.specimen,
      pass,
      annotator: assignment.annotator,
      records: log.records.map((record) => recordInTrueFrame(record, frame)),
    },
    { ...NEW_PASS, state: "finished", returned: { study: study.id, assignment: assignment.id } },
  );
  files.reach("take-in:after-returned-pass");
  const at = options.now();
  const returned: ReturnedPass = {
    at,
    pass,
    head: { seq: packet.log.seq, hash: packet.log.hash },
    protocolVersion: assignment.out!.protocolVersion,
    ...log.facts,
    effort: log.effort,
    drawn: log.drawn,
    fingerprint: bag.fingerprint,
  };
  const notes: string[] = [];
  await store.change(study.id, (current) => {
    const { study: after, note } = withReturn(current, assignment.id, returned, open.length);
    if (note) notes.push(note);
    return after;
  });
  return taken(bag, assignment, study, "taken", pass, notes);
}

/** The study with a pass that came back, and a sentence when its key is not the annotator's known one. */
function withReturn(study: StudyRecord, id: string, returned: ReturnedPass, openEnds: number) {
  const assignment = study.assignments.find((one) => one.id === id)!;
  const { annotator, pass, code } = assignment;
  const known = study.annotators.find(({ name }) => name === annotator)?.fingerprint ?? null;
  const { fingerprint, at } = returned;
  const whose = `${annotator}'s pass ${pass} (${code})`;
  const note =
    known === null || known === fingerprint
      ? null
      : fingerprint === null
        ? `${whose} is not signed, though ${annotator}'s packet before was.`
        : `${whose} is signed by another key than ${annotator}'s packet before.`;
  const signed = fingerprint === null ? "unsigned" : `signed by ${fingerprint.slice(0, 9)}`;
  let changed: StudyRecord = {
    ...study,
    annotators: study.annotators.map((one) => (one.name === annotator && known === null ? { ...one, fingerprint } : one)),
    assignments: study.assignments.map((one) => (one === assignment ? { ...one, returned } : one)),
  };
  changed = noted(changed, { at, what: "pass-taken-in", text: `${whose} was taken in, ${signed}.${note ? ` ${note}` : ""}` });
  if (openEnds > 0)
    changed = noted(changed, {
      at,
      what: "open-ends-allowed",
      text: `${whose} was taken in with ${counted(openEnds, "open end")}.`,
    });
  return { study: changed, note };
}

async function readParts(bag: OpenBag, packet: ReturnPacket): Promise<{ content: Map<string, Uint8Array>; log: ReturnedLog }> {
  const content = new Map<string, Uint8Array>();
  for (const path of [PACKET_FILE, RETURN_FILES.log, RETURN_FILES.trees, RETURN_FILES.times])
    content.set(path, await bag.read(`${PAYLOAD_FOLDER}${path}`, MOST_LOG_BYTES));
  const text = (path: string) => new TextDecoder("utf-8").decode(content.get(path));
  return { content, log: readReturnedLog(packet, text(RETURN_FILES.log), text(RETURN_FILES.trees), bag.name) };
}

/** Keeps the returned files as they came, in the turned frame, under the hash of their packet. */
async function keepAsItCame(
  { library, files, mayWrite }: TakeInOptions,
  study: string,
  bag: OpenBag,
  content: ReadonlyMap<string, Uint8Array>,
) {
  const folder = library.layout.studyReturn(study, bag.identity);
  await mayWrite();
  await makeFolder(files, folder);
  for (const [path, bytes] of content) await writeWhole(files, join(folder, path), bytes);
}

/** The id of a returned pass follows from assignment and log: asked again after a stop, it is the same. */
function passId(assignment: string, hash: string): string {
  const bytes = createHash("sha256").update(`${assignment} ${hash}`).digest();
  return createId((count) => new Uint8Array(bytes.subarray(0, count)));
}

function conflict(what: string, sentence: string, expected: string, found: string): TautlineError<"conflict"> {
  return new TautlineError("conflict", sentence, { what, expected, found });
}

function taken(
  bag: OpenBag,
  { code, specimen }: Assignment,
  study: StudyRecord,
  outcome: TakenPacket["outcome"],
  pass: string,
  notes: readonly string[],
): TakenPacket {
  return { kind: "return", code, outcome, study: study.id, specimen, pass, fingerprint: bag.fingerprint, notes };
}
