import type { CrossLinkId, CurveId, NodeId, StrandId, TreeDocument, TreeId } from "#shared/trees/document.ts";
import type { Operation } from "#shared/trees/operations.ts";

/** The form of ids, by table. */
export interface IdOfTable {
  tree: TreeId;
  node: NodeId;
  strand: StrandId;
  "cross-link": CrossLinkId;
  curve: CurveId;
}
/** Tables whose records have ids. */
export type IdTable = keyof IdOfTable;

const LETTER: Readonly<Record<IdTable, string>> = { tree: "t", node: "n", strand: "s", "cross-link": "x", curve: "c" };
const TABLE_OF_LETTER: Readonly<Record<string, IdTable>> = { t: "tree", n: "node", s: "strand", x: "cross-link", c: "curve" };

/** The highest counter ever used, by table; 0 = none yet. */
export type IdCounters = Readonly<Record<IdTable, number>>;

/** Counters of a log that named nothing yet. */
export const NO_IDS_YET: IdCounters = { tree: 0, node: 0, strand: 0, "cross-link": 0, curve: 0 };

/** True for an id of the log's form: its letter and a positive counter without leading zeros. */
export function isIdOf<T extends IdTable>(table: T, value: unknown): value is IdOfTable[T] {
  return typeof value === "string" && value[0] === LETTER[table] && counterOf(value) !== null;
}

/** The counter of an id (12 for `n12`); null when the text is no id. */
export function counterOf(id: string): number | null {
  const match = /^[tnsxc]([1-9]\d{0,14})$/.exec(id);
  return match ? Number(match[1]) : null;
}

/** Order of ids by counter, for results that must not depend on the order of edits. */
export function byCounter(a: string, b: string): number {
  return (counterOf(a) ?? 0) - (counterOf(b) ?? 0) || (a < b ? -1 : a > b ? 1 : 0);
}

/** Hands out ids above a log's maximum. Ids of a plan that is never committed are free again: nothing ever named them. */
export class IdSource {
  private readonly last: Record<IdTable, number>;

  constructor(counters: IdCounters) {
    this.last = { ...counters };
  }

  /** A new id of `table`. */
  next<T extends IdTable>(table: T): IdOfTable[T] {
    this.last[table] += 1;
    return `${LETTER[table]}${this.last[table]}` as IdOfTable[T];
  }
}

/** Counters raised to cover every id in `ids`. */
export function raised(counters: IdCounters, ids: Iterable<string>): IdCounters {
  const next = { ...counters };
  for (const id of ids) {
    const table = TABLE_OF_LETTER[id[0] ?? ""];
    const counter = counterOf(id);
    if (table && counter !== null && counter > next[table]) next[table] = counter;
  }
  return next;
}

/** Every id of a record that `operation` names. */
export function idsIn(operation: Operation): string[] {
  return operation.changes.flatMap((change) => (change.table === "landmarks" || change.table === "dismissal" ? [] : [change.id]));
}

/** Counters that cover every record a document holds; for documents that come without a log (a file's trees). */
export function countersOf(document: TreeDocument): IdCounters {
  return raised(NO_IDS_YET, [
    ...document.trees.keys(),
    ...document.nodes.keys(),
    ...document.strands.keys(),
    ...document.crossLinks.keys(),
    ...document.curves.keys(),
  ]);
}
