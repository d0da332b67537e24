import { sha256 } from "@noble/hashes/sha2.js";
import { bytesToHex } from "@noble/hashes/utils.js";
import { unreadable } from "#shared/errors.ts";
import { BODY_CHECKS, ENVELOPE_CHECK } from "#shared/log/record-shapes.ts";
import type { LogRecord } from "#shared/log/records.ts";
import { ShapeFault } from "#shared/log/shape-checks.ts";

/** The line that stands for `record`, without its newline. Keys are in one fixed order. */
export function lineOf(record: LogRecord): string {
  const { seq, parent, prev, t, mono, session, kind, label, body } = record;
  return JSON.stringify({ seq, parent, prev, t, mono, session, kind, label, body });
}

/** SHA-256 (hex) of the line's UTF-8 bytes without a newline. */
export function hashOfLine(line: string): string {
  return bytesToHex(sha256(new TextEncoder().encode(line)));
}

/**
 * The record that a line holds, strictly checked: exact keys, known words, finite numbers, ids of the right form.
 * @param lineNumber counted from 1, for the message
 * @param file name shown in the message
 * @throws unreadable-input naming the line and the place in it
 */
export function parseLine(line: string, lineNumber: number, file: string): LogRecord {
  let value: unknown;
  try {
    value = JSON.parse(line);
  } catch {
    throw unreadable(file, "one JSON record per line", `${JSON.stringify(line.slice(0, 40))}...`, `line ${lineNumber}`);
  }
  try {
    ENVELOPE_CHECK(value, "record");
    const record = value as LogRecord;
    BODY_CHECKS[record.kind]!(record.body, "body");
    return record;
  } catch (fault) {
    if (!(fault instanceof ShapeFault)) throw fault;
    throw unreadable(file, fault.expected, fault.found, `line ${lineNumber}, ${fault.where}`);
  }
}
