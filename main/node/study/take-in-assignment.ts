import { join } from "node:path";
import { makeFolder, writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { WriterCheck } from "#main/node/journal.ts";
import type { Library } from "#main/node/library.ts";
import type { OpenBag } from "#main/node/packet/bag-reader.ts";
import { writeStreamed } from "#main/node/packet/bag-writer.ts";
import { keptPng } from "#main/node/study/kept-png.ts";
import { readJson } from "#main/node/study/packet-parts.ts";
import type { StudyStore } from "#main/node/study/study-store.ts";
import { writeJson, writeWhole } from "#main/node/whole-file.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import type { TakenPacket } from "#shared/api/study.ts";
import { isTautlineError, TautlineError, unreadable } from "#shared/errors.ts";
import { PAYLOAD_FOLDER } from "#shared/formats/bagit/bag-texts.ts";
import { ASSIGNMENT_FORMAT, type AssignmentRecord } from "#shared/study/assignment-record.ts";
import { counted } from "#shared/study/count-words.ts";
import { type AssignmentPacket, PICTURE_FOLDER, SCAN_FOLDER, type ScanPacket } from "#shared/study/packet.ts";
import { STORE_NAME } from "#shared/volume/store/layout.ts";

export interface TakeInOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly store: StudyStore;
  readonly mayWrite: WriterCheck;
  readonly newId: () => string;
  /** UTC milliseconds. */
  readonly now: () => number;
}

export interface TakeInHooks {
  readonly signal: AbortSignal;
  /** Called with the bytes verified and written so far. */
  onBytes(bytes: number): void;
}

const MOST_PICTURE_BYTES = 8 * 1024 * 1024;
const SCAN_FILE = new RegExp(
  `^${STORE_NAME.replaceAll(".", "\\.")}/(zarr\\.json|\\d{1,2}/zarr\\.json|\\d{1,2}/c/\\d{1,5}/\\d{1,5}/\\d{1,5})$`,
);

/**
 * What keeps an assignment or its scan from being taken in here; null when nothing does.
 * A library that leads the study is no place to work in: its windows show names and passes.
 */
export async function assignmentObstacle(
  options: TakeInOptions,
  packet: AssignmentPacket | ScanPacket,
): Promise<TautlineError | null> {
  const { library, store } = options;
  const led = await store.read(packet.study).then(
    () => true,
    (error) => !isTautlineError(error, "not-found"),
  );
  if (led) {
    const sentence = `${packet.code} belongs to a study that this library leads, where names and passes can be seen. Take it in with a library of the annotator's own.`;
    return new TautlineError("conflict", sentence, {
      what: packet.code,
      expected: "an annotator's library",
      found: "the study's own",
    });
  }
  const there = await specimenThere(library, packet.assignment);
  if (packet.kind === "scan" || packet.scan.within) {
    if (there && packet.scan.sha256 !== null && there.volume.sha256 !== packet.scan.sha256)
      return otherScan(packet.code, packet.scan.sha256, there);
    return null;
  }
  if (!there) {
    const sentence = `The scan of ${packet.code} is not in this library: take in the packet ${packet.code}-scan first.`;
    return new TautlineError("not-found", sentence, { what: "scan of the assignment", id: packet.code });
  }
  if (packet.scan.sha256 !== null && there.volume.sha256 !== packet.scan.sha256)
    return otherScan(packet.code, packet.scan.sha256, there);
  return null;
}

/** Takes in a scan that travels apart. @throws conflict, other-scan, unreadable-input, disk-full, write-failed, cancelled */
export async function takeInScan(
  options: TakeInOptions,
  bag: OpenBag,
  packet: ScanPacket,
  hooks: TakeInHooks,
): Promise<TakenPacket> {
  const obstacle = await assignmentObstacle(options, packet);
  if (obstacle) throw obstacle;
  const outcome = (await specimenThere(options.library, packet.assignment)) ? "known" : "taken";
  if (outcome === "taken") await bringScan(options, bag, packet.assignment, packet.scan.sha256, hooks);
  return answer(bag, packet, outcome, null, []);
}

/**
 * Takes in an assignment: its scan when it is within, its pictures, its one pass, and last the record that makes it one. Stopped
 * anywhere, the same packet completes it. @throws as {@link takeInScan}
 */
export async function takeInAssignment(
  options: TakeInOptions,
  bag: OpenBag,
  packet: AssignmentPacket,
  hooks: TakeInHooks,
): Promise<TakenPacket> {
  const { library, files } = options;
  const obstacle = await assignmentObstacle(options, packet);
  if (obstacle) throw obstacle;
  const id = packet.assignment;
  const known = await library.assignments.find(id);
  if (known) return again(options, bag, packet, known);
  if (packet.scan.within && !(await specimenThere(library, id))) await bringScan(options, bag, id, packet.scan.sha256, hooks);
  await bringPictures(options, bag, packet);
  files.reach("take-in:after-pictures");
  const pass = await ownPass(options, packet);
  files.reach("take-in:after-own-pass");
  await library.assignments.write(recordOf(bag, packet, pass, options.now()));
  return answer(bag, packet, "taken", pass, []);
}

/** An assignment that is here already: the same packet changes nothing, another version of the rules only before work has begun. */
async function again(
  options: TakeInOptions,
  bag: OpenBag,
  packet: AssignmentPacket,
  known: AssignmentRecord,
): Promise<TakenPacket> {
  const { library } = options;
  if (known.protocol.sha256 === packet.protocol.sha256) return answer(bag, packet, "known", known.pass, []);
  const { edits } = await library.passes.summary(packet.assignment, known.pass);
  if (edits > 0 || known.returned) {
    const [expected, found] = [`version ${known.protocol.version}`, `version ${packet.protocol.version}`];
    const sentence = `${packet.code} was begun under ${expected} of the protocol and this packet holds ${found}: its ${counted(edits, "edit")} followed other rules. Nothing was changed; ask the lead.`;
    throw new TautlineError("conflict", sentence, { what: packet.code, expected, found });
  }
  await bringPictures(options, bag, packet);
  await library.assignments.write(recordOf(bag, packet, known.pass, options.now()));
  return answer(bag, packet, "taken", known.pass, [
    `The rules are now those of version ${packet.protocol.version} of the protocol.`,
  ]);
}

/** Copies the turned scan into the library, verified on the way; it stands there whole or not at all. */
async function bringScan(
  options: TakeInOptions,
  bag: OpenBag,
  id: string,
  sha256: string | null,
  hooks: TakeInHooks,
): Promise<void> {
  const { library, files, mayWrite } = options;
  const prefix = `${PAYLOAD_FOLDER}${SCAN_FOLDER}/`;
  const record = await scanRecord(bag, id, sha256);
  const stored = [...bag.payload].filter(([path]) => path.startsWith(prefix) && path !== `${prefix}specimen.json`);
  for (const [path] of stored)
    if (!SCAN_FILE.test(path.slice(prefix.length))) throw unreadable(bag.name, "files of a stored scan", `'${path}'`, path);
  await refuseFullDisk(
    files,
    library.layout.root,
    stored.reduce((sum, [, bytes]) => sum + bytes, 0),
  );
  await mayWrite();
  const work = join(library.layout.unfinished, `taken-${options.newId()}`);
  const folders = new Set<string>([work]);
  try {
    await files.makeFolder(work);
    let done = 0;
    const watched = async function* (path: string) {
      for await (const piece of bag.pieces(path)) {
        if (hooks.signal.aborted) throw new TautlineError("cancelled", "Stopped.", { what: "taking in the packet" });
        yield piece;
        done += piece.length;
        hooks.onBytes(done);
      }
    };
    for (const [path] of stored) {
      const parts = path.slice(prefix.length).split("/");
      for (let k = 1; k < parts.length; k += 1) folders.add(join(work, ...parts.slice(0, k)));
      await files.makeFolder(join(work, ...parts.slice(0, -1)));
      await writeStreamed(files, join(work, ...parts), watched(path));
    }
    // The packet says nothing of time; on this library's shelf the scan is as old as its taking in.
    await writeJson(files, join(work, "specimen.json"), { ...record, created: options.now() });
    for (const folder of [...folders].sort((a, b) => b.length - a.length)) await files.syncFolder(folder);
    await files.syncFolder(library.layout.unfinished);
    files.reach("take-in:after-scan-files");
    await mayWrite();
    await files.makeFolder(library.layout.specimens);
    await files.rename(work, library.layout.specimen(id));
    await files.syncFolder(library.layout.specimens);
    files.reach("take-in:after-scan");
  } catch (error) {
    const fault = await writeFault(files, work, error);
    await files.remove(work).catch(() => undefined);
    throw fault;
  }
}

/** The turned specimen's record as the packet has it. */
async function scanRecord(bag: OpenBag, id: string, sha256: string | null): Promise<SpecimenRecord> {
  const path = `${PAYLOAD_FOLDER}${SCAN_FOLDER}/specimen.json`;
  const record = parseSpecimenRecord(await readJson(bag, path), `${bag.name}, ${path}`);
  // A packet brings its voxels along; a path would have the desk read other files of this computer.
  if (record.volume.inPlace) throw unreadable(`${bag.name}, ${path}`, "a scan within the packet", "one that lies elsewhere");
  if (record.id !== id) throw unreadable(bag.name, `the scan of ${id}`, `one of ${record.id.slice(0, 64)}`, path);
  if (record.volume.sha256 !== sha256)
    throw unreadable(
      bag.name,
      `a scan with the SHA-256 ${String(sha256).slice(0, 16)}...`,
      `${record.volume.sha256.slice(0, 16)}...`,
      path,
    );
  return record;
}

async function bringPictures(options: TakeInOptions, bag: OpenBag, packet: AssignmentPacket): Promise<void> {
  const { library, files, mayWrite } = options;
  for (const { picture } of packet.rules.points) {
    if (picture === null) continue;
    const bytes = keptPng(await bag.read(`${PAYLOAD_FOLDER}${PICTURE_FOLDER}/${picture}.png`, MOST_PICTURE_BYTES));
    const path = library.layout.assignmentPicture(packet.assignment, picture);
    await mayWrite();
    await makeFolder(files, join(path, ".."));
    await writeWhole(files, path, bytes);
  }
}

/** The assignment's one pass; one that was begun when taking in was stopped is taken again. */
async function ownPass({ library }: TakeInOptions, { assignment, code }: AssignmentPacket): Promise<string> {
  for (const id of await library.passes.ids(assignment)) {
    const begun = await library.passes.journal(assignment, id).catch(() => null);
    if (begun?.header.annotator === code) return id;
  }
  return (await library.passes.create(assignment, code)).id;
}

function recordOf(bag: OpenBag, packet: AssignmentPacket, pass: string, taken: number): AssignmentRecord {
  const { study, assignment, code, training, protocol, rules } = packet;
  return {
    format: ASSIGNMENT_FORMAT,
    version: 1,
    study,
    assignment,
    code,
    training,
    protocol,
    rules,
    pass,
    taken,
    packet: bag.identity,
    from: bag.fingerprint,
    returned: null,
  };
}

async function specimenThere(library: Library, id: string): Promise<SpecimenRecord | null> {
  return library.specimenRecord(id).catch((error) => {
    if (isTautlineError(error, "not-found")) return null;
    throw error;
  });
}

function otherScan(code: string, expected: string, { volume }: SpecimenRecord): TautlineError<"other-scan"> {
  const sentence = `The library has another scan under ${code}: expected ${expected.slice(0, 12)}..., found ${volume.sha256.slice(0, 12)}.... It stays as it is.`;
  return new TautlineError("other-scan", sentence, { file: code, expected, found: volume.sha256 });
}

async function refuseFullDisk(files: FilePort, folder: string, needed: number): Promise<void> {
  const free = await files.freeBytes(folder);
  if (free >= needed + 16 * 1024 * 1024) return;
  const sentence = `The packet's scan needs ${needed} bytes of disk, ${free} are free. Nothing was taken in; free some space first.`;
  throw new TautlineError("disk-full", sentence, { file: "scan", needed, free });
}

function answer(
  bag: OpenBag,
  packet: AssignmentPacket | ScanPacket,
  outcome: TakenPacket["outcome"],
  pass: string | null,
  notes: readonly string[],
): TakenPacket {
  const { kind, code, assignment } = packet;
  return { kind, code, outcome, study: null, specimen: assignment, pass, fingerprint: bag.fingerprint, notes };
}
