import { unreadable } from "#shared/errors.ts";
import { holds, isBoolean, isCount, isText, listOf, objectOf, oneOf, orNull } from "#shared/log/shape-checks.ts";
import { checked, isDrawingRules } from "#shared/study/parse-study.ts";
import type { DrawingRules } from "#shared/study/protocol.ts";

/** Name in `assignment.json`. */
export const ASSIGNMENT_FORMAT = "tautline-assignment";

/** `assignment.json` beside a specimen in the annotator's library: what its packet said, and where the work stands. */
export interface AssignmentRecord {
  readonly format: typeof ASSIGNMENT_FORMAT;
  readonly version: 1;
  readonly study: string;
  /** Also the specimen's id. */
  readonly assignment: string;
  readonly code: string;
  readonly training: boolean;
  readonly protocol: { readonly version: number; readonly sha256: string };
  readonly rules: DrawingRules;
  /** The one pass of the assignment. */
  readonly pass: string;
  /** UTC milliseconds, by this library's clock. */
  readonly taken: number;
  /** SHA-256 of the packet's manifest: the same packet is known again by it. */
  readonly packet: string;
  /** Fingerprint of the lead's key; null = unsigned. */
  readonly from: string | null;
  /** Set once a return was made; the pass is sealed while `sealed`. */
  readonly returned: {
    readonly at: number;
    readonly head: { readonly seq: number; readonly hash: string };
    readonly files: readonly string[];
    readonly sealed: boolean;
  } | null;
}

const isHash = holds("64 hex digits", (v) => typeof v === "string" && /^[0-9a-f]{64}$/.test(v));
const isId = holds("an id", (v) => typeof v === "string" && /^[a-z0-9][a-z0-9-]{0,63}$/.test(v));
const isAssignment = objectOf({
  format: oneOf([ASSIGNMENT_FORMAT]),
  version: holds("version 1", (v) => v === 1),
  study: isId,
  assignment: isId,
  code: isText,
  training: isBoolean,
  protocol: objectOf({ version: isCount, sha256: isHash }),
  rules: isDrawingRules,
  pass: isId,
  taken: isCount,
  packet: isHash,
  from: orNull(isText),
  returned: orNull(
    objectOf({ at: isCount, head: objectOf({ seq: isCount, hash: isHash }), files: listOf(isText), sealed: isBoolean }),
  ),
});

/** The record that an `assignment.json` holds. @throws unreadable-input */
export function parseAssignment(value: unknown, file: string): AssignmentRecord {
  const { version } = (value ?? {}) as { version?: unknown };
  if (typeof version === "number" && version > 1)
    throw unreadable(file, "version 1", `version ${version}`, "version", "It was written by a newer version of the program.");
  checked(isAssignment, value, "assignment", file);
  return value as AssignmentRecord;
}
