import { join } from "node:path";
import type { Abilities } from "#main/node/abilities.ts";
import { makeFolder } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Progress } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { bagPath, type PayloadFile, writeBag } from "#main/node/packet/bag-writer.ts";
import type { SigningKey } from "#main/node/packet/signing.ts";
import { checkPacketFolder, refuseAnyTaken } from "#main/node/study/packet-names.ts";
import { bagInfo, jsonPayload } from "#main/node/study/packet-parts.ts";
import type { StudyStore } from "#main/node/study/study-store.ts";
import type { MadePacket, PacketRequest } from "#shared/api/study.ts";
import { TautlineError } from "#shared/errors.ts";
import { noted } from "#shared/study/edit-study.ts";
import {
  type AssignmentPacket,
  PACKET_FILE,
  PACKET_FORMAT,
  PICTURE_FOLDER,
  SCAN_FOLDER,
  type ScanPacket,
} from "#shared/study/packet.ts";
import type { Assignment, StudyRecord } from "#shared/study/study-record.ts";
import { currentProtocol, packetObstacle } from "#shared/study/study-standing.ts";
import { STORE_NAME } from "#shared/volume/store/layout.ts";

export interface MakeAssignmentsOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly store: StudyStore;
  readonly key: SigningKey;
  readonly runTurned: Abilities["runTurned"];
  readonly newId: () => string;
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly softwareVersion: string;
}

interface Hooks {
  readonly signal: AbortSignal;
  onProgress(progress: Progress): void;
}

/** The assignments that a request names, once everything about them is in order. @throws bad-request, conflict, not-found */
export async function plannedPackets(
  options: MakeAssignmentsOptions,
  id: string,
  request: PacketRequest,
): Promise<readonly Assignment[]> {
  const { store, files, library, now } = options;
  const study = await store.read(id);
  await checkPacketFolder(files, request.folder, library.layout.root);
  const wanted = new Set(request.assignments);
  const planned = request.assignments.map((one) => {
    const found = study.assignments.find((assignment) => assignment.id === one);
    if (!found)
      throw new TautlineError("not-found", "There is no such assignment in the study.", { what: "assignment", id: one });
    return found;
  });
  if (planned.length === 0)
    throw new TautlineError("bad-request", "Choose at least one assignment.", {
      what: "no assignment",
      where: "body.assignments",
    });
  for (const assignment of planned) {
    await checkSpecimen(library, study, assignment);
    const obstacle = packetObstacle(study, assignment, now(), wanted);
    if (!obstacle || (obstacle.waivable && request.waiveWashout)) continue;
    throw new TautlineError("conflict", `The packet ${assignment.code} cannot be made: ${obstacle.why}`, {
      what: assignment.code,
      expected: "an assignment that may go out",
      found: obstacle.why,
    });
  }
  await refuseAnyTaken(
    files,
    planned.flatMap((one) => pathsOf(one, request)),
  );
  return planned;
}

/**
 * Makes the packets of assignments one after the other; each is noted in the study as soon as it stands.
 * @throws conflict, disk-full, write-failed, cancelled, unreadable-input
 */
export async function makeAssignments(
  options: MakeAssignmentsOptions,
  id: string,
  request: PacketRequest,
  hooks: Hooks,
): Promise<MadePacket[]> {
  const planned = await plannedPackets(options, id, request);
  const made: MadePacket[] = [];
  for (const [k, { id: assignment, code }] of planned.entries()) {
    const onProgress = (share: number, step: string, progress?: Progress) =>
      hooks.onProgress({
        bytesPerSecond: progress?.bytesPerSecond ?? null,
        secondsLeft: null,
        progress: (k + share) / planned.length,
        step: `${code}: ${step}`,
      });
    made.push(...(await makeOne(options, id, assignment, request, { signal: hooks.signal, onProgress })));
  }
  return made;
}

interface OneHooks {
  readonly signal: AbortSignal;
  onProgress(share: number, step: string, progress?: Progress): void;
}

async function makeOne(
  options: MakeAssignmentsOptions,
  id: string,
  assignmentId: string,
  request: PacketRequest,
  hooks: OneHooks,
) {
  const { store, files, key, softwareVersion } = options;
  const study = await store.read(id);
  const assignment = study.assignments.find((one) => one.id === assignmentId)!;
  const protocol = currentProtocol(study);
  const signing = request.sign ? key : null;
  const scratch = join(options.library.layout.unfinished, `turned-${options.newId()}`);
  try {
    const scan = request.scan === "without" ? null : await turnedScan(options, assignment, scratch, hooks);
    const head = { format: PACKET_FORMAT, version: 1, study: id, assignment: assignment.id, code: assignment.code } as const;
    const packet: AssignmentPacket = {
      ...head,
      kind: "assignment",
      training: assignment.training,
      protocol: { version: protocol.version, sha256: protocol.frozen!.sha256 },
      rules: protocol.content.drawing,
      scan: { within: request.scan === "within", sha256: scan?.sha256 ?? null },
    };
    const rules = [jsonPayload(PACKET_FILE, packet), ...(await pictures(store, id, packet))];
    const made: MadePacket[] = [];
    const write = async (kind: "assignment" | "scan", payload: readonly PayloadFile[], from: number, to: number) => {
      const order = {
        name: nameOf(assignment, kind),
        folder: request.folder,
        form: request.form,
        payload,
        info: bagInfo(kind, softwareVersion),
        key: signing,
      };
      const onShare = (share: number) => hooks.onProgress(from + (to - from) * share, "writing the packet");
      const { path, bytes } = await writeBag(files, order, { signal: hooks.signal, onShare });
      made.push({ path, kind, code: assignment.code, bytes });
    };
    if (scan && request.scan === "apart") {
      const scanPacket: ScanPacket = { ...head, kind: "scan", scan: { sha256: scan.sha256 } };
      await write("scan", [jsonPayload(PACKET_FILE, scanPacket), ...scan.payload], 0.5, 0.95);
      await write("assignment", rules, 0.95, 1);
    } else await write("assignment", [...rules, ...(scan?.payload ?? [])], scan ? 0.5 : 0, 1);
    await store.change(id, (now) => sent(now, assignment, protocol, request, options.now()));
    return made;
  } finally {
    await files.remove(scratch).catch(() => undefined);
  }
}

/** The study with a packet noted as out. */
function sent(
  study: StudyRecord,
  assignment: Assignment,
  protocol: ReturnType<typeof currentProtocol>,
  request: PacketRequest,
  at: number,
): StudyRecord {
  const out = { at, protocolVersion: protocol.version, protocolSha256: protocol.frozen!.sha256 };
  const waived = packetObstacle(study, assignment, at, new Set(request.assignments))?.waivable === true;
  const assignments = study.assignments.map((one) => (one.id === assignment.id ? { ...one, out } : one));
  const whose = `${assignment.annotator}'s pass ${assignment.pass} (${assignment.code})`;
  const again = assignment.out ? " again" : "";
  const text = `The packet of ${whose} was made${again} under version ${protocol.version} of the protocol.`;
  const changed = noted({ ...study, assignments }, { at, what: "packet-made", text });
  if (!waived) return changed;
  return noted(changed, { at, what: "washout-waived", text: `${whose} was sent before the days between repeats had passed.` });
}

/** Makes the turned copy in the library's folder for unfinished things and lists its files for a packet. */
async function turnedScan(options: MakeAssignmentsOptions, assignment: Assignment, scratch: string, hooks: OneHooks) {
  const { library, files, runTurned } = options;
  const specimen = await library.specimen(assignment.specimen);
  await makeFolder(files, scratch);
  const { record } = await runTurned(
    {
      store: library.layout.store(specimen.id),
      volume: specimen.volume,
      turn: assignment.turn,
      library: scratch,
      id: assignment.id,
      code: assignment.code,
      polarity: specimen.polarity,
      synthetic: specimen.synthetic,
    },
    { signal: hooks.signal, onProgress: (progress) => hooks.onProgress(progress.progress / 2, "turning the scan", progress) },
  );
  const folder = join(scratch, "specimens", assignment.id);
  const payload: PayloadFile[] = [jsonPayload(`${SCAN_FOLDER}/specimen.json`, record)];
  const walk = async (path: string, inside: string): Promise<void> => {
    for (const { name } of (await files.list(path)) ?? []) {
      const facts = await files.facts(join(path, name));
      if (facts?.kind === "folder") await walk(join(path, name), `${inside}/${name}`);
      else payload.push({ path: `${inside}/${name}`, file: join(path, name), size: facts?.bytes ?? 0 });
    }
  };
  await walk(join(folder, STORE_NAME), `${SCAN_FOLDER}/${STORE_NAME}`);
  return { sha256: record.volume.sha256, payload };
}

async function pictures(store: StudyStore, study: string, { rules }: AssignmentPacket): Promise<PayloadFile[]> {
  const names = new Set(rules.points.flatMap(({ picture }) => (picture === null ? [] : [picture])));
  return Promise.all(
    [...names].map(async (name) => ({ path: `${PICTURE_FOLDER}/${name}.png`, bytes: await store.picture(study, name) })),
  );
}

async function checkSpecimen(library: Library, study: StudyRecord, { specimen }: Assignment): Promise<void> {
  const entry = study.specimens.find(({ id }) => id === specimen)!;
  const { volume, name } = await library.specimen(specimen);
  if (volume.sha256 === entry.sha256) return;
  const sentence = `${name} is another scan than when it was put into the study: expected ${entry.sha256.slice(0, 12)}..., found ${volume.sha256.slice(0, 12)}.... Put the scan back.`;
  throw new TautlineError("other-scan", sentence, { file: name, expected: entry.sha256, found: volume.sha256 });
}

function nameOf({ code }: Assignment, kind: "assignment" | "scan"): string {
  return `${code}-${kind}`;
}

function pathsOf(assignment: Assignment, { folder, form, scan }: PacketRequest): string[] {
  const kinds = scan === "apart" ? (["assignment", "scan"] as const) : (["assignment"] as const);
  return kinds.map((kind) => bagPath({ folder, form, name: nameOf(assignment, kind) }));
}
