import type { PassFile } from "#main/node/pass-file.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import type { LogHeader, LogRecord } from "#shared/log/records.ts";
import type { Change } from "#shared/trees/operations.ts";

/** A pause longer than this between two records of one session is not time at work. */
const LONGEST_PAUSE_MS = 5 * 60_000;

/** The summary of a pass as the shelf lists it, from its records and its file. */
export function summarise(header: LogHeader, records: readonly LogRecord[], file: PassFile): PassSummary {
  const changes = changesInForce(records);
  const trees = new Set<string>();
  const openEnds = new Set<string>();
  const doubts = new Set<string>();
  const put = (set: Set<string>, id: string, is: boolean) => void (is ? set.add(id) : set.delete(id));
  for (const change of changes) {
    if (change.table === "tree") put(trees, change.id, change.to !== null);
    if (change.table === "node") put(openEnds, change.id, change.to?.kind === "open");
    if (change.table === "node" || change.table === "strand" || change.table === "cross-link") {
      put(doubts, change.id, change.to?.certainty === "doubtful");
    }
  }
  return {
    id: header.pass,
    specimen: header.specimen,
    annotator: header.annotator,
    number: header.number,
    state: file.state,
    trees: trees.size,
    openEnds: openEnds.size,
    doubts: doubts.size,
    edits: records.filter(({ kind }) => kind === "op").length,
    workMs: workMs(records),
    changed: records.reduce((latest, { t }) => Math.max(latest, t), 0),
    synthetic: file.synthetic,
  };
}

/** Changes of the operations from the first edit to the history pointer, in order. */
function changesInForce(records: readonly LogRecord[]): Change[] {
  let at = 0;
  for (const record of records) {
    if (record.kind === "op") at = record.seq;
    if (record.kind === "at") at = record.body.at;
  }
  const path: Change[][] = [];
  for (let seq = at; seq > 0; ) {
    const record = records[seq]!;
    if (record.kind === "op") path.push([...record.body.changes]);
    seq = record.parent;
  }
  return path.reverse().flat();
}

function workMs(records: readonly LogRecord[]): number {
  let sum = 0;
  for (let i = 1; i < records.length; i += 1) {
    const before = records[i - 1]!;
    const record = records[i]!;
    const idle = before.kind === "session" && before.body.state !== "opened";
    if (record.session !== before.session || idle) continue;
    sum += Math.min(Math.max(0, record.mono - before.mono), LONGEST_PAUSE_MS);
  }
  return sum;
}
