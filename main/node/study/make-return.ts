import type { FilePort } from "#main/node/file-port.ts";
import type { Progress } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { bagPath, type PayloadFile, refuseTaken, writeBag } from "#main/node/packet/bag-writer.ts";
import type { SigningKey } from "#main/node/packet/signing.ts";
import { checkPacketFolder } from "#main/node/study/packet-names.ts";
import { bagInfo, jsonPayload } from "#main/node/study/packet-parts.ts";
import type { MadePacket, ReturnRequest } from "#shared/api/study.ts";
import { TautlineError } from "#shared/errors.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { headerOfSpecimen } from "#shared/formats/chordae/header-of-specimen.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { readChain } from "#shared/log/chain.ts";
import { passEffort } from "#shared/log/pass-effort.ts";
import type { LogHead } from "#shared/log/records.ts";
import type { AssignmentRecord } from "#shared/study/assignment-record.ts";
import { PACKET_FILE, PACKET_FORMAT, RETURN_FILES, type ReturnPacket } from "#shared/study/packet.ts";

export interface MakeReturnOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly key: SigningKey;
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly softwareVersion: string;
}

/** The assignment of a return, once everything about it is in order. @throws not-found, conflict, bad-request */
export async function plannedReturn(
  { library, files }: MakeReturnOptions,
  specimen: string,
  request: ReturnRequest,
): Promise<AssignmentRecord> {
  const record = await library.assignments.read(specimen);
  await library.assignments.refuseSealed(specimen);
  await checkPacketFolder(files, request.folder, library.layout.root);
  await refuseTaken(files, bagPath({ ...request, name: nameOf(record) }));
  return record;
}

/**
 * Makes the packet of a finished pass: log, trees and times, as the journal on the disk stands. The pass is finished and the
 * assignment sealed once the packet stands. @throws as {@link plannedReturn}, disk-full, write-failed, cancelled
 */
export async function makeReturn(
  options: MakeReturnOptions,
  specimen: string,
  request: ReturnRequest,
  hooks: { readonly signal: AbortSignal; onProgress(progress: Progress): void },
): Promise<MadePacket> {
  const { library, files, key, softwareVersion, now } = options;
  const record = await plannedReturn(options, specimen, request);
  const { lines, head } = await library.readLog(specimen, record.pass, 0);
  const payload = await returnPayload(options, record, lines);
  const order = {
    name: nameOf(record),
    folder: request.folder,
    form: request.form,
    payload,
    info: bagInfo("return", softwareVersion),
    key: request.sign ? key : null,
  };
  const onShare = (progress: number) =>
    hooks.onProgress({ progress, step: `${record.code}: writing the packet`, bytesPerSecond: null, secondsLeft: null });
  const { path, bytes } = await writeBag(files, order, { signal: hooks.signal, onShare });
  await refuseGrown(options, record, path, head);
  await library.setPassState(specimen, record.pass, "finished");
  const made = [...(record.returned?.files ?? []), path];
  await library.assignments.write({ ...record, returned: { at: now(), head, files: made, sealed: true } });
  return { path, kind: "return", code: record.code, bytes };
}

/** Takes the packet back when the pass went on while it was written. @throws conflict */
async function refuseGrown(
  { library, files }: MakeReturnOptions,
  record: AssignmentRecord,
  path: string,
  head: LogHead,
): Promise<void> {
  const now = (await library.passes.journal(record.assignment, record.pass)).head;
  if (now.hash === head.hash) return;
  await files.remove(path);
  const sentence = `${record.code} was edited while its packet was written. Nothing was handed back; make the packet again.`;
  throw new TautlineError("conflict", sentence, { what: record.code, expected: `edit ${head.seq}`, found: `edit ${now.seq}` });
}

async function returnPayload(
  { library, softwareVersion }: MakeReturnOptions,
  record: AssignmentRecord,
  lines: readonly string[],
): Promise<PayloadFile[]> {
  const { study, assignment, code, protocol, pass } = record;
  const chained = readChain(lines, undefined, "journal.jsonl");
  const { hash, record: last } = chained[chained.length - 1]!;
  const history = await library.passes.history(assignment, pass);
  const packet: ReturnPacket = {
    format: PACKET_FORMAT,
    version: 1,
    kind: "return",
    study,
    assignment,
    code,
    protocol,
    log: { pass, epoch: history.header.epoch, seq: last.seq, hash },
  };
  const specimen = await library.specimen(assignment);
  const created = new Date(history.changed).toISOString();
  const header = {
    ...headerOfSpecimen(specimen, { annotator: code, pass: 1, created, softwareVersion }),
    protocol: { id: study, version: protocol.version, sha256: protocol.sha256 },
  };
  const text = (path: string, content: string): PayloadFile => ({ path, bytes: new TextEncoder().encode(content) });
  return [
    jsonPayload(PACKET_FILE, packet),
    text(RETURN_FILES.log, `${lines.join("\n")}\n`),
    text(RETURN_FILES.trees, writeChordaeFile(fileFromDocument(history.document, header))),
    jsonPayload(RETURN_FILES.times, passEffort(chained.map((one) => one.record))),
  ];
}

function nameOf({ code }: AssignmentRecord): string {
  return `${code}-return`;
}
