import { unreadable } from "#shared/errors.ts";
import { holds, isBoolean, isCount, isText, objectOf, oneOf, orNull } from "#shared/log/shape-checks.ts";
import { checked, isDrawingRules } from "#shared/study/parse-study.ts";
import type { DrawingRules } from "#shared/study/protocol.ts";

// What a packet says about itself, in `packet.json` of its payload. Names of people, specimens and studies stand in none.

/** Name in `packet.json`. */
export const PACKET_FORMAT = "tautline-packet";
/** Newest version of `packet.json` that this program writes and reads. */
export const PACKET_VERSION = 1;
/** Name of the file, below the payload's folder. */
export const PACKET_FILE = "packet.json";

interface PacketHead {
  readonly format: typeof PACKET_FORMAT;
  readonly version: typeof PACKET_VERSION;
  readonly study: string;
  readonly assignment: string;
  readonly code: string;
}

/** The turned scan of an assignment, in a packet of its own. */
export interface ScanPacket extends PacketHead {
  readonly kind: "scan";
  /** SHA-256 of the turned scan's stored voxels. */
  readonly scan: { readonly sha256: string };
}

/** Work to be done: the rules to draw by, the pictures, and the turned scan when it is `within`. */
export interface AssignmentPacket extends PacketHead {
  readonly kind: "assignment";
  readonly training: boolean;
  readonly protocol: { readonly version: number; readonly sha256: string };
  readonly rules: DrawingRules;
  /** `sha256` null: the scan is neither within nor was it made for this packet; the annotator has it already. */
  readonly scan: { readonly within: boolean; readonly sha256: string | null };
}

/** Work that was done: log, trees and times lie beside. */
export interface ReturnPacket extends PacketHead {
  readonly kind: "return";
  readonly protocol: { readonly version: number; readonly sha256: string };
  readonly log: { readonly pass: string; readonly epoch: string; readonly seq: number; readonly hash: string };
}

export type Packet = ScanPacket | AssignmentPacket | ReturnPacket;

/** Files of a returned pass, below the payload's folder. */
export const RETURN_FILES = { log: "journal.jsonl", trees: "pass.chordae.json", times: "times.json" } as const;
/** Folder of the turned scan, below the payload's folder. */
export const SCAN_FOLDER = "scan";
/** Folder of the pictures of point rules, below the payload's folder. */
export const PICTURE_FOLDER = "pictures";

const isHash = holds("64 hex digits", (v) => typeof v === "string" && /^[0-9a-f]{64}$/.test(v));
const isId = holds("an id", (v) => typeof v === "string" && /^[a-z0-9][a-z0-9-]{0,63}$/.test(v));
const isCode = holds("a code", (v) => typeof v === "string" && /^[A-Z0-9]{4}-[A-Z0-9]{4}$/.test(v));
const head = {
  format: oneOf([PACKET_FORMAT]),
  version: holds(`version ${PACKET_VERSION}`, (v) => v === PACKET_VERSION),
  study: isId,
  assignment: isId,
  code: isCode,
};
const protocol = objectOf({ version: isCount, sha256: isHash });
const CHECKS = {
  scan: objectOf({ ...head, kind: oneOf(["scan"]), scan: objectOf({ sha256: isHash }) }),
  assignment: objectOf({
    ...head,
    kind: oneOf(["assignment"]),
    training: isBoolean,
    protocol,
    rules: isDrawingRules,
    scan: objectOf({ within: isBoolean, sha256: orNull(isHash) }),
  }),
  return: objectOf({
    ...head,
    kind: oneOf(["return"]),
    protocol,
    log: objectOf({ pass: isId, epoch: isText, seq: isCount, hash: isHash }),
  }),
} as const;

/** What a `packet.json` says, every field checked. @throws unreadable-input for another format, a newer version or a wrong field */
export function parsePacket(value: unknown, file: string): Packet {
  const { format, version, kind } = (value ?? {}) as { format?: unknown; version?: unknown; kind?: unknown };
  if (format !== PACKET_FORMAT) {
    const next = "This is a bag, but not one with an assignment or a pass in it.";
    throw unreadable(file, `format ${PACKET_FORMAT}`, `format ${String(format).slice(0, 40)}`, "format", next);
  }
  if (version !== PACKET_VERSION) {
    const next = "It was made by another version of the program; use that one, or have it made again.";
    throw unreadable(file, `version ${PACKET_VERSION}`, `version ${String(version).slice(0, 40)}`, "version", next);
  }
  const check = CHECKS[kind as keyof typeof CHECKS];
  if (!Object.hasOwn(CHECKS, String(kind)) || !check)
    throw unreadable(file, "a scan, an assignment or a return", `kind ${String(kind).slice(0, 40)}`, "kind");
  checked(check, value, "packet", file);
  return value as Packet;
}
