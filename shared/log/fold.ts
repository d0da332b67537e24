import { unreadable } from "#shared/errors.ts";
import { type ChainedRecord, NO_LINES } from "#shared/log/chain.ts";
import { curveOfBody } from "#shared/log/curve-body.ts";
import { type Effort, effortAfter, NO_EFFORT } from "#shared/log/effort.ts";
import { type LoggedOperation, pathTo, routeBetween } from "#shared/log/history-tree.ts";
import type { LogHead, LogHeader, LogRecord } from "#shared/log/records.ts";
import { DocumentDraft, invert } from "#shared/trees/apply.ts";
import { emptyDocument, type TreeDocument } from "#shared/trees/document.ts";
import { type IdCounters, idsIn, NO_IDS_YET, raised } from "#shared/trees/ids.ts";

/** A named point of the history. */
export interface Mark {
  readonly seq: number;
  readonly name: string;
  /** The operation that was current. */
  readonly at: number;
  readonly t: number;
}

/** All that a log says, folded up to its head. */
export interface Folded {
  readonly header: LogHeader | null;
  readonly head: LogHead;
  readonly document: TreeDocument;
  /** The operation the history stands at; 0 = before the first edit. */
  readonly pointer: number;
  readonly operations: ReadonlyMap<number, LoggedOperation>;
  /** By operation (0 = start): the one after it that was last on the path; redo goes there. */
  readonly onward: ReadonlyMap<number, number>;
  readonly marks: readonly Mark[];
  readonly counters: IdCounters;
  readonly effort: Effort;
  /** UTC milliseconds of the last record. */
  readonly changed: number;
}

/** The fold of no lines. */
export const NOTHING_FOLDED: Folded = {
  header: null,
  head: NO_LINES,
  document: emptyDocument(),
  pointer: 0,
  operations: new Map(),
  onward: new Map(),
  marks: [],
  counters: NO_IDS_YET,
  effort: NO_EFFORT,
  changed: 0,
};

/**
 * `start` with further records folded in; `start` stays as it was, so that a record which does not fit leaves nothing half
 * done. Never calls a kernel: curves come from the log. Complexity: records and their changes, and one copy of the tables.
 * @throws unreadable-input when a record does not follow from those before it
 * @throws conflict when an operation does not fit the document it is said to follow
 */
export function fold(start: Folded, chained: readonly ChainedRecord[], file = "the log"): Folded {
  const work = new FoldInProgress(start, file);
  for (const { record, hash } of chained) work.take(record, hash);
  return work.finish();
}

class FoldInProgress {
  private readonly draft: DocumentDraft;
  private readonly operations: Map<number, LoggedOperation>;
  private readonly onward: Map<number, number>;
  private readonly marks: Mark[];
  private readonly file: string;
  private header: LogHeader | null;
  private head: LogHead;
  private pointer: number;
  private counters: IdCounters;
  private effort: Effort;
  private changed: number;

  constructor(start: Folded, file: string) {
    this.draft = new DocumentDraft(start.document);
    this.operations = new Map(start.operations);
    this.onward = new Map(start.onward);
    this.marks = [...start.marks];
    this.header = start.header;
    this.head = start.head;
    this.pointer = start.pointer;
    this.counters = start.counters;
    this.effort = start.effort;
    this.changed = start.changed;
    this.file = file;
  }

  take(record: LogRecord, hash: string): void {
    if (record.parent !== this.pointer) {
      throw this.misfit(record, `to follow edit ${this.pointer}, where the history stood`, `parent ${record.parent}`);
    }
    switch (record.kind) {
      case "header":
        this.header = record.body;
        break;
      case "op":
        this.draft.apply(record.body);
        this.addOperation(record);
        break;
      case "at":
        this.moveTo(record);
        break;
      case "mark":
        this.marks.push({ seq: record.seq, name: record.body.name, at: this.pointer, t: record.t });
        break;
      case "curve":
        this.draft.addCurves([curveOfBody(record.body)]);
        this.counters = raised(this.counters, [record.body.id]);
        break;
      case "session":
        break;
      default:
        throw this.misfit(record, "a known kind of record", String((record as { kind: unknown }).kind));
    }
    this.head = { seq: record.seq, hash };
    this.effort = effortAfter(this.effort, record);
    this.changed = record.t;
  }

  finish(): Folded {
    const { header, head, pointer, operations, onward, marks, counters, effort, changed } = this;
    return { header, head, document: this.draft.finish(), pointer, operations, onward, marks, counters, effort, changed };
  }

  private addOperation(record: LogRecord & { kind: "op" }): void {
    const { seq, parent, t, session, label, body } = record;
    this.operations.set(seq, { seq, parent, t, session, label, operation: body });
    this.onward.set(parent, seq);
    this.pointer = seq;
    this.counters = raised(this.counters, idsIn(body));
  }

  private moveTo(record: LogRecord & { kind: "at" }): void {
    const target = record.body.at;
    if (target !== 0 && !this.operations.has(target)) throw this.misfit(record, "an earlier edit to go to", `at ${target}`);
    const route = routeBetween(this.operations, this.pointer, target);
    for (const step of route.back) this.draft.apply(invert(step.operation));
    for (const step of route.forth) this.draft.apply(step.operation);
    for (const step of pathTo(this.operations, target)) this.onward.set(step.parent, step.seq);
    this.pointer = target;
  }

  private misfit(record: LogRecord, expected: string, found: string) {
    return unreadable(this.file, `${record.kind} record ${record.seq} ${expected}`, found, `line ${record.seq + 1}`);
  }
}
