import { TautlineError } from "#shared/errors.ts";
import type { Curve, Dismissal, TreeDocument } from "#shared/trees/document.ts";
import type { Change, DocumentDiff, Operation } from "#shared/trees/operations.ts";
import { sameRecord } from "#shared/trees/same-record.ts";

type Writable<T> = { -readonly [K in keyof T]: T[K] };
type Table = "trees" | "nodes" | "strands" | "crossLinks" | "dismissals" | "curves";

/**
 * A document under change: a table is copied the first time it is written, so that what is folded from many operations
 * costs one copy and the document it began from stays as it was. After a throw the draft is to be thrown away.
 */
export class DocumentDraft {
  private readonly current: Writable<TreeDocument>;
  private readonly owned = new Set<Table>();

  constructor(document: TreeDocument) {
    this.current = { ...document };
  }

  /** Applies every change of `operation`. @throws conflict when a change's `from` is not what the document holds */
  apply(operation: Operation): void {
    for (const change of operation.changes) this.change(change);
  }

  /** Adds curves; one that is there already with the same id stays. */
  addCurves(curves: Iterable<Curve>): void {
    for (const curve of curves) if (!this.current.curves.has(curve.id)) this.own("curves").set(curve.id, curve);
  }

  /** The document as it stands; later changes to the draft do not reach it. */
  finish(): TreeDocument {
    this.owned.clear();
    return { ...this.current };
  }

  private change(change: Change): void {
    switch (change.table) {
      case "tree":
        this.put("trees", "tree", change.id, change.from, change.to);
        break;
      case "node":
        this.put("nodes", "node", change.id, change.from, change.to);
        break;
      case "strand":
        this.put("strands", "strand", change.id, change.from, change.to);
        break;
      case "cross-link":
        this.put("crossLinks", "cross-link", change.id, change.from, change.to);
        break;
      case "dismissal":
        this.put("dismissals", "dismissal", change.id, change.from, change.to);
        break;
      case "landmarks":
        if (!sameRecord(this.current.landmarks, change.from)) throw conflict("landmarks", change.from, this.current.landmarks);
        this.current.landmarks = change.to;
        break;
      default:
        unknownTable(change);
    }
  }

  private put(table: Table, word: string, id: string, from: unknown, to: { id?: string } | Dismissal | null): void {
    const found = (this.current[table] as ReadonlyMap<string, unknown>).get(id) ?? null;
    if (!sameRecord(found, from)) throw conflict(`${word} ${id}`, from, found);
    const map = this.own(table);
    if (to === null) map.delete(id);
    else map.set(id, to);
  }

  private own(table: Table): Map<string, unknown> {
    if (!this.owned.has(table)) {
      (this.current as Record<Table, unknown>)[table] = new Map(this.current[table] as ReadonlyMap<string, unknown>);
      this.owned.add(table);
    }
    return this.current[table] as Map<string, unknown>;
  }
}

/**
 * The document after `operation`, and what changed. Pure: tables that the operation does not touch are shared with the
 * document given; all changes are applied or none. Complexity: size of the touched tables.
 * @throws conflict when a change's `from` is not what the document holds
 */
export function apply(
  document: TreeDocument,
  operation: Operation,
): { readonly document: TreeDocument; readonly diff: DocumentDiff } {
  const draft = new DocumentDraft(document);
  draft.apply(operation);
  return { document: draft.finish(), diff: diffOf(operation) };
}

/** The document with `curves` added; one whose id is known stays as it is. */
export function withCurves(document: TreeDocument, curves: Iterable<Curve>): TreeDocument {
  const draft = new DocumentDraft(document);
  draft.addCurves(curves);
  return draft.finish();
}

/** The operation that undoes `operation` exactly: `apply(apply(d, o), invert(o))` is d. */
export function invert(operation: Operation): Operation {
  return { code: operation.code, changes: operation.changes.map(swapped).reverse() };
}

/**
 * One operation with the effect of `a` and then `b`, named as `a`: one change per record, records that end as they began
 * left out. So a drag becomes one edit.
 */
export function squash(a: Operation, b: Operation): Operation {
  return { code: a.code, changes: netChanges([...a.changes, ...b.changes]) };
}

/** True when the operation changes nothing. */
export function isEmpty(operation: Operation): boolean {
  return netChanges(operation.changes).length === 0;
}

/** Ids that `operation` adds, updates and removes; each id once, by its net effect. Landmarks count as the id `landmarks`. */
export function diffOf(operation: Operation): DocumentDiff {
  const diff = { added: [] as string[], updated: [] as string[], removed: [] as string[] };
  for (const change of netChanges(operation.changes)) {
    const id = change.table === "landmarks" ? "landmarks" : change.id;
    if (change.from === null) diff.added.push(id);
    else if (change.to === null) diff.removed.push(id);
    else diff.updated.push(id);
  }
  return diff;
}

function netChanges(changes: readonly Change[]): Change[] {
  const net = new Map<string, Change>();
  for (const change of changes) {
    const key = change.table === "landmarks" ? "landmarks" : `${change.table} ${change.id}`;
    const first = net.get(key);
    // Same table and id: only the far end moves on.
    net.set(key, first ? ({ ...first, to: change.to } as Change) : change);
  }
  return [...net.values()].filter((change) => !sameRecord(change.from, change.to));
}

function swapped(change: Change): Change {
  return { ...change, from: change.to, to: change.from } as Change;
}

function conflict(what: string, expected: unknown, found: unknown): TautlineError<"conflict"> {
  const fields = { what, expected: brief(expected), found: brief(found) };
  return new TautlineError(
    "conflict",
    `The edit expects ${what} to be ${fields.expected}, but it is ${fields.found}. Make the edit again on what is there now.`,
    fields,
  );
}

function brief(record: unknown): string {
  if (record === null || record === undefined) return "absent";
  const text = JSON.stringify(record);
  return text.length > 160 ? `${text.slice(0, 157)}...` : text;
}

function unknownTable(change: never): never {
  const table = (change as { table?: unknown }).table;
  throw new TautlineError("internal", `An edit names the table ${JSON.stringify(table)}, which no document has.`, {
    what: "unknown table in an edit",
  });
}
