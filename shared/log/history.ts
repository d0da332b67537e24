import { TautlineError } from "#shared/errors.ts";
import { readChain } from "#shared/log/chain.ts";
import { bodyOfCurve } from "#shared/log/curve-body.ts";
import { type Folded, fold, type Mark, NOTHING_FOLDED } from "#shared/log/fold.ts";
import { type LoggedOperation, pathTo } from "#shared/log/history-tree.ts";
import { hashOfLine, lineOf } from "#shared/log/line.ts";
import { LOG_FORMAT, LOG_VERSION, type LogHead, type LogHeader, type LogRecord, type RecordBody } from "#shared/log/records.ts";
import { isEmpty } from "#shared/trees/apply.ts";
import type { Curve, TreeDocument } from "#shared/trees/document.ts";
import { type IdOfTable, IdSource, type IdTable } from "#shared/trees/ids.ts";
import type { Operation, OperationCode } from "#shared/trees/operations.ts";

/** When something happened, from the caller's clocks: UTC milliseconds, milliseconds since the session opened, session id. */
export interface Stamp {
  readonly t: number;
  readonly mono: number;
  readonly session: string;
}

/** One edit as the history drawer shows it. */
export interface HistoryEntry {
  readonly seq: number;
  readonly parent: number;
  readonly label: string;
  readonly code: OperationCode;
  /** UTC milliseconds. */
  readonly t: number;
  readonly session: string;
  /** `past`: from the first edit to where the history stands; `ahead`: what redo would bring back; `aside`: an undone branch. */
  readonly place: "past" | "ahead" | "aside";
  readonly isPointer: boolean;
  /** Names given to this point. */
  readonly marks: readonly string[];
}

/**
 * The history of one pass: its document, where it stands, and all edits ever made, undone branches included. Methods that
 * change it return the new log lines (without newlines) to be stored; what is in memory is always the fold of the lines, and
 * a method that throws leaves it as it was. It holds no lines itself: whoever stores them has them.
 */
export class PassHistory {
  private folded: Folded;

  private constructor(folded: Folded) {
    this.folded = folded;
  }

  /** The history of a whole log. @throws unreadable-input where the chain breaks or a record does not fit */
  static fromLines(lines: readonly string[], file = "the log"): PassHistory {
    const folded = fold(NOTHING_FOLDED, readChain(lines, undefined, file), file);
    if (folded.header === null) {
      throw new TautlineError("unreadable-input", `${file}: expected a log's header on line 1, found no line.`, {
        file,
        expected: "a log's header on line 1",
        found: "no line",
      });
    }
    return new PassHistory(folded);
  }

  /** A history folded elsewhere (a snapshot). */
  static fromFolded(folded: Folded): PassHistory {
    return new PassHistory(folded);
  }

  /** A new pass's history, and line 0 of its log. */
  static begin(
    fields: Omit<LogHeader, "format" | "version">,
    stamp: Stamp,
  ): { readonly history: PassHistory; readonly lines: string[] } {
    const history = new PassHistory(NOTHING_FOLDED);
    const { pass, specimen, annotator, number, epoch } = fields;
    const body: LogHeader = { format: LOG_FORMAT, version: LOG_VERSION, pass, specimen, annotator, number, epoch };
    const lines = history.write([{ kind: "header", body }], "", stamp);
    return { history, lines };
  }

  get header(): LogHeader {
    return this.folded.header!;
  }
  get document(): TreeDocument {
    return this.folded.document;
  }
  /** Seq of the edit the history stands at; 0 = before the first. */
  get pointer(): number {
    return this.folded.pointer;
  }
  get head(): LogHead {
    return this.folded.head;
  }
  get canUndo(): boolean {
    return this.folded.pointer !== 0;
  }
  get canRedo(): boolean {
    return this.folded.onward.has(this.folded.pointer);
  }
  /** Number of edits ever made, undone ones included. */
  get edits(): number {
    return this.folded.operations.size;
  }
  get marks(): readonly Mark[] {
    return this.folded.marks;
  }
  /** Time at work, milliseconds (rule in `effort.ts`). */
  get workMs(): number {
    return this.folded.effort.workMs;
  }
  /** UTC milliseconds of the last record. */
  get changed(): number {
    return this.folded.changed;
  }
  /** Everything folded; for snapshots. */
  get state(): Folded {
    return this.folded;
  }

  /** The id that the next record of `table` gets; never one that was used before, undone branches included. */
  nextId<T extends IdTable>(table: T): IdOfTable[T] {
    return this.ids().next(table);
  }

  /** New ids for one plan. */
  ids(): IdSource {
    return new IdSource(this.folded.counters);
  }

  /**
   * Lines of an edit: its curves, then the operation. An operation that changes nothing gives no line.
   * @throws conflict when it does not fit the document; @throws unreadable-input when a value could not be written
   */
  commit(operation: Operation, label: string, curves: readonly Curve[], stamp: Stamp): string[] {
    if (isEmpty(operation)) return [];
    this.expectCurves(operation, curves);
    const bodies: RecordBody[] = curves.map((curve) => ({ kind: "curve", body: bodyOfCurve(curve) }));
    return this.write([...bodies, { kind: "op", body: operation }], label, stamp);
  }

  /** Takes the last edit back; no line when there is none. */
  undo(stamp: Stamp): string[] {
    const current = this.folded.operations.get(this.folded.pointer);
    return current ? this.write([{ kind: "at", body: { at: current.parent, how: "undo" } }], current.label, stamp) : [];
  }

  /** Brings back the edit that was last on the path after this point; no line when there is none. */
  redo(stamp: Stamp): string[] {
    const next = this.folded.operations.get(this.folded.onward.get(this.folded.pointer) ?? -1);
    return next ? this.write([{ kind: "at", body: { at: next.seq, how: "redo" } }], next.label, stamp) : [];
  }

  /** Goes to any edit, also on an undone branch; 0 = before the first. @throws not-found when `seq` is no edit */
  jump(seq: number, stamp: Stamp): string[] {
    if (seq === this.folded.pointer) return [];
    const target = this.folded.operations.get(seq);
    if (!target && seq !== 0)
      throw new TautlineError("not-found", `The history has no edit ${seq}.`, { what: "edit", id: String(seq) });
    return this.write([{ kind: "at", body: { at: seq, how: "jump" } }], target?.label ?? "", stamp);
  }

  /** Names this point of the history. */
  mark(name: string, stamp: Stamp): string[] {
    return this.write([{ kind: "mark", body: { name } }], name, stamp);
  }

  /** Notes that a session opened, went idle or closed. */
  session(state: "opened" | "closed" | "idle", stamp: Stamp): string[] {
    return this.write([{ kind: "session", body: { state } }], "", stamp);
  }

  /**
   * Takes lines that were written elsewhere (the journal is ahead). All or none.
   * @throws unreadable-input when they do not continue this history's chain
   */
  absorb(lines: readonly string[], file = "the log"): void {
    if (lines.length > 0) this.folded = fold(this.folded, readChain(lines, this.folded.head, file), file);
  }

  /** Every edit in the order made. Complexity: number of edits. */
  entries(): HistoryEntry[] {
    const { operations, onward, pointer, marks } = this.folded;
    const past = new Set(pathTo(operations, pointer).map((step) => step.seq));
    const ahead = new Set<number>();
    for (let next = onward.get(pointer); next !== undefined; next = onward.get(next)) ahead.add(next);
    const names = new Map<number, string[]>();
    for (const mark of marks) names.set(mark.at, [...(names.get(mark.at) ?? []), mark.name]);
    return [...operations.values()].map(({ seq, parent, label, operation, t, session }) => ({
      seq,
      parent,
      label,
      code: operation.code,
      t,
      session,
      place: past.has(seq) ? "past" : ahead.has(seq) ? "ahead" : "aside",
      isPointer: seq === pointer,
      marks: names.get(seq) ?? [],
    }));
  }

  /** Edits of the current path from the first to the newest: those up to here, then those that redo would bring back. */
  path(): LoggedOperation[] {
    const { operations, onward, pointer } = this.folded;
    const path = pathTo(operations, pointer);
    for (let next = onward.get(pointer); next !== undefined; next = onward.get(next)) path.push(operations.get(next)!);
    return path;
  }

  /** Lines for `bodies`, folded in as they will be read back. */
  private write(bodies: readonly RecordBody[], label: string, stamp: Stamp): string[] {
    const lines: string[] = [];
    let { seq, hash } = this.folded.head;
    for (const { kind, body } of bodies) {
      seq += 1;
      const record = { seq, parent: this.folded.pointer, prev: hash, ...stamp, kind, label: kind === "curve" ? "" : label, body };
      const line = lineOf(record as LogRecord);
      hash = hashOfLine(line);
      lines.push(line);
    }
    this.absorb(lines);
    return lines;
  }

  private expectCurves(operation: Operation, curves: readonly Curve[]): void {
    const given = new Set(curves.map((curve) => curve.id));
    for (const change of operation.changes) {
      if (change.table !== "strand" && change.table !== "cross-link") continue;
      const curve = change.to?.curve ?? null;
      if (curve !== null && !given.has(curve) && !this.folded.document.curves.has(curve)) {
        throw new TautlineError(
          "conflict",
          `The edit names the curve ${curve} for ${change.id}, which is neither in the log nor given with it.`,
          {
            what: `curve of ${change.id}`,
            expected: curve,
            found: "no such curve",
          },
        );
      }
    }
  }
}
