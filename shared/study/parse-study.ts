import { unreadable } from "#shared/errors.ts";
import {
  type Check,
  holds,
  isBoolean,
  isCount,
  isFiniteNumber,
  isPlainObject,
  isText,
  listOf,
  objectOf,
  oneOf,
  orNull,
  ShapeFault,
} from "#shared/log/shape-checks.ts";
import { PRIMARY_QUANTITIES } from "#shared/study/protocol.ts";
import { protocolHash } from "#shared/study/protocol-change.ts";
import { STUDY_FORMAT, STUDY_VERSION, type StudyRecord } from "#shared/study/study-record.ts";

const isHash = holds("64 hex digits", (v) => typeof v === "string" && /^[0-9a-f]{64}$/.test(v));
const isId = holds("an id", (v) => typeof v === "string" && /^[a-z0-9][a-z0-9-]{0,63}$/.test(v));
const isFingerprint = orNull(isText);
const maybeNumber = orNull(isFiniteNumber);

const severities: Check = (value, where) => {
  isPlainObject(value, where);
  for (const [code, one] of Object.entries(value as object)) oneOf(["error", "warning", "note", "off"])(one, `${where}.${code}`);
};

/** Check for the part of a protocol that annotators work by. */
export const isDrawingRules: Check = objectOf({
  labels: listOf(
    objectOf({
      label: isText,
      on: oneOf(["origin", "fork", "insertion", "end", "strand"]),
      values: listOf(isText),
      required: isBoolean,
    }),
  ),
  points: listOf(objectOf({ point: isText, text: isText, picture: orNull(isHash) })),
  limits: objectOf({
    minimumDiameterMm: maybeNumber,
    minimumLengthMm: maybeNumber,
    mostBranches: maybeNumber,
    severities,
  }),
  remarks: isText,
});

const isProtocolContent: Check = objectOf({
  drawing: isDrawingRules,
  analysis: objectOf({
    primary: orNull(oneOf(PRIMARY_QUANTITIES)),
    toleranceMm: isFiniteNumber,
    mergeMm: isFiniteNumber,
    positionScaleMm: isFiniteNumber,
    marginMm: maybeNumber,
  }),
  schedule: objectOf({ washoutDays: isCount }),
});

const isPermutation = holds(
  "a permutation of 0, 1, 2",
  (v) => Array.isArray(v) && v.length === 3 && [0, 1, 2].every((axis) => v.includes(axis)),
);
const isFlips = holds(
  "three of true or false",
  (v) => Array.isArray(v) && v.length === 3 && v.every((f) => typeof f === "boolean"),
);

const effort = objectOf({
  workMs: isFiniteNumber,
  idleThresholdMs: isCount,
  sessions: isCount,
  edits: isCount,
  undos: isCount,
  redos: isCount,
  interactionsPerTree: maybeNumber,
  trees: listOf(objectOf({ tree: isText, edits: isCount, undos: isCount, interactions: isCount, workMs: isFiniteNumber })),
});
const returnedFields = {
  at: isCount,
  pass: isId,
  head: objectOf({ seq: isCount, hash: isHash }),
  protocolVersion: isCount,
  trees: isCount,
  openEnds: isCount,
  doubts: isCount,
  effort,
  drawn: orNull(objectOf({ from: isFiniteNumber, to: isFiniteNumber })),
  fingerprint: isFingerprint,
};

const isStudy: Check = objectOf({
  format: oneOf([STUDY_FORMAT]),
  version: holds(`version ${STUDY_VERSION}`, (v) => v === STUDY_VERSION),
  id: isId,
  name: isText,
  created: isCount,
  seed: isHash,
  specimens: listOf(objectOf({ id: isId, name: isText, training: isBoolean, sha256: isHash })),
  annotators: listOf(objectOf({ name: isText, fingerprint: isFingerprint })),
  passes: isCount,
  protocols: listOf(
    objectOf({
      version: isCount,
      content: isProtocolContent,
      frozen: orNull(objectOf({ at: isCount, sha256: isHash })),
      reason: isText,
    }),
  ),
  assignments: listOf(
    objectOf({
      id: isId,
      code: isText,
      annotator: isText,
      specimen: isId,
      pass: isCount,
      training: isBoolean,
      place: isCount,
      turn: objectOf({ axes: isPermutation, flips: isFlips }),
      out: orNull(objectOf({ at: isCount, protocolVersion: isCount, protocolSha256: isHash })),
      returned: orNull(objectOf(returnedFields)),
      setAside: listOf(objectOf({ ...returnedFields, reason: isText, setAsideAt: isCount })),
    }),
  ),
  events: listOf(objectOf({ at: isCount, what: isText, text: isText })),
});

/**
 * The study that a `study.json` holds, every field checked, and every frozen version of its protocol against its hash.
 * @throws unreadable-input for another format, a newer version, a field that is wrong, or a frozen protocol that was changed.
 */
export function parseStudy(value: unknown, file: string): StudyRecord {
  const { format, version } = (value ?? {}) as { format?: unknown; version?: unknown };
  if (format === STUDY_FORMAT && typeof version === "number" && version > STUDY_VERSION) {
    const next = "It was written by a newer version of the program; use that one.";
    throw unreadable(file, `version ${STUDY_VERSION}`, `version ${version}`, "version", next);
  }
  checked(isStudy, value, "study", file);
  const study = value as StudyRecord;
  if (study.protocols.length === 0) throw unreadable(file, "at least one version of the protocol", "none", "study.protocols");
  for (const [i, protocol] of study.protocols.entries()) {
    const where = `study.protocols[${i}]`;
    if (protocol.version !== i + 1) throw unreadable(file, `version ${i + 1}`, `version ${protocol.version}`, where);
    if (!protocol.frozen && i < study.protocols.length - 1) throw unreadable(file, "a frozen version", "an unfrozen one", where);
    if (protocol.frozen && protocolHash(study.id, protocol) !== protocol.frozen.sha256) {
      const next = "A frozen protocol was changed outside the program. Put the file back from a copy.";
      throw unreadable(file, `a protocol with the hash ${protocol.frozen.sha256.slice(0, 12)}...`, "another", where, next);
    }
  }
  return study;
}

/** Runs a check; what it finds wrong becomes the reader's error. @throws unreadable-input */
export function checked(check: Check, value: unknown, where: string, file: string): void {
  try {
    check(value, where);
  } catch (fault) {
    if (!(fault instanceof ShapeFault)) throw fault;
    throw unreadable(file, fault.expected, fault.found, fault.where);
  }
}
