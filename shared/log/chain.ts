import { unreadable } from "#shared/errors.ts";
import { hashOfLine, parseLine } from "#shared/log/line.ts";
import type { LogHead, LogRecord } from "#shared/log/records.ts";

/** Before the first line. */
export const NO_LINES: LogHead = { seq: -1, hash: "" };

/** A record with the hash of its line. */
export interface ChainedRecord {
  readonly record: LogRecord;
  readonly hash: string;
}

/**
 * The lines of a log's text and the torn rest. A line counts when its newline is there; what follows the last newline was
 * never acknowledged and is given back as `torn` (null when there is none). A last line that is no JSON record (a page of
 * zeros after a power cut) is torn too. Anything wrong earlier is left for {@link readChain} to report.
 */
export function splitLog(text: string): { readonly lines: readonly string[]; readonly torn: string | null } {
  const pieces = text.split("\n");
  const rest = pieces.pop() ?? "";
  const last = pieces[pieces.length - 1];
  if (rest === "" && last !== undefined && !isJson(last)) return { lines: pieces.slice(0, -1), torn: last };
  return { lines: pieces, torn: rest === "" ? null : rest };
}

/**
 * The records of `lines`, which follow `base`, with every link checked: `seq` without gaps, `prev` the hash of the line
 * before, one header and only at 0.
 * @param base the line that the first one follows; {@link NO_LINES} for a whole log
 * @throws unreadable-input naming the line where the chain breaks; nothing is repaired
 */
export function readChain(lines: readonly string[], base: LogHead = NO_LINES, file = "the log"): ChainedRecord[] {
  const chained: ChainedRecord[] = [];
  let head = base;
  for (const line of lines) {
    const number = head.seq + 2;
    const record = parseLine(line, number, file);
    const where = `line ${number}`;
    if (record.seq !== head.seq + 1) throw broken(file, `record ${head.seq + 1}`, `record ${record.seq}`, where);
    if (record.prev !== head.hash) {
      throw broken(file, `the hash of the line before (${brief(head.hash)})`, brief(record.prev), where);
    }
    if ((record.kind === "header") !== (record.seq === 0))
      throw broken(file, "one header, on line 1", `a ${record.kind} record`, where);
    head = { seq: record.seq, hash: hashOfLine(line) };
    chained.push({ record, hash: head.hash });
  }
  return chained;
}

function isJson(line: string): boolean {
  try {
    JSON.parse(line);
    return true;
  } catch {
    return false;
  }
}

function broken(file: string, expected: string, found: string, where: string) {
  return unreadable(file, expected, found, where, "The log was changed or damaged outside Tautline; nothing was repaired.");
}

function brief(hash: string): string {
  return hash === "" ? "none" : `${hash.slice(0, 12)}...`;
}
