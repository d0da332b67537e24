import { effortAfter, IDLE_THRESHOLD_MS, NO_EFFORT } from "#shared/log/effort.ts";
import type { LogRecord } from "#shared/log/records.ts";
import type { Operation } from "#shared/trees/operations.ts";

/** What went into one tree; an edit that concerns two trees counts for both. */
export interface TreeEffort {
  readonly tree: string;
  readonly edits: number;
  /** Edits of this tree that were taken back. */
  readonly undos: number;
  /** Edits, undos and redos together: every act that changed the tree. */
  readonly interactions: number;
  /** Time at work that led to an edit of this tree, milliseconds; shared equally where an act concerns several. */
  readonly workMs: number;
}

/** What went into a pass, from its log alone. */
export interface PassEffort {
  /** Time at work, milliseconds: gaps between records of a session, idle ones left out. */
  readonly workMs: number;
  /** Gaps longer than this counted as absence, milliseconds. */
  readonly idleThresholdMs: number;
  readonly sessions: number;
  /** Edits ever made, undone ones included. */
  readonly edits: number;
  /** Times the history was taken back (undo, or a jump that undid something). */
  readonly undos: number;
  readonly redos: number;
  /** Mean of edits, undos and redos over the trees that were ever touched; null when there is none. */
  readonly interactionsPerTree: number | null;
  /** In the order of first touch. */
  readonly trees: readonly TreeEffort[];
}

interface Tally {
  edits: number;
  undos: number;
  interactions: number;
  workMs: number;
}

/**
 * Effort of a pass: time at work, edits, undos and interactions per tree. Trees that were deleted again count: work went into
 * them. An undo counts for the trees of the edits it took back.
 * @param records a whole log in order of `seq`. Complexity: records and their changes, and the way of each history move.
 */
export function passEffort(records: Iterable<LogRecord>): PassEffort {
  const operations = new Map<number, { readonly parent: number; readonly trees: readonly string[] }>();
  const treeOf = new Map<string, string>();
  const tallies = new Map<string, Tally>();
  let effort = NO_EFFORT;
  let pointer = 0;
  const counts = { edits: 0, undos: 0, redos: 0 };
  let waiting = 0;
  const tally = (tree: string): Tally => {
    const found = tallies.get(tree) ?? { edits: 0, undos: 0, interactions: 0, workMs: 0 };
    tallies.set(tree, found);
    return found;
  };
  const touch = (trees: readonly string[], kind: "edits" | "undos" | null) => {
    for (const tree of trees) {
      const one = tally(tree);
      if (kind) one[kind] += 1;
      one.interactions += 1;
      one.workMs += waiting / trees.length;
    }
    if (trees.length > 0) waiting = 0;
  };
  for (const record of records) {
    const before = effort.workMs;
    effort = effortAfter(effort, record);
    waiting += effort.workMs - before;
    if (record.kind === "op") {
      const trees = treesOf(record.body, treeOf);
      operations.set(record.seq, { parent: record.parent, trees });
      pointer = record.seq;
      counts.edits += 1;
      touch(trees, "edits");
    } else if (record.kind === "at") {
      const back = between(operations, pointer, record.body.at);
      const forth = between(operations, record.body.at, pointer);
      if (back.length > 0) counts.undos += 1;
      else if (forth.length > 0) counts.redos += 1;
      touch([...new Set(back.length > 0 ? back : forth)], back.length > 0 ? "undos" : null);
      pointer = record.body.at;
    }
  }
  const trees = [...tallies].map(([tree, one]): TreeEffort => ({ tree, ...one }));
  const acts = trees.reduce((sum, { interactions }) => sum + interactions, 0);
  return {
    workMs: effort.workMs,
    idleThresholdMs: IDLE_THRESHOLD_MS,
    sessions: effort.sessions,
    ...counts,
    interactionsPerTree: trees.length === 0 ? null : acts / trees.length,
    trees,
  };
}

/** Trees of all operations on the way from `from` back to the common ancestor with `to`. */
function between(
  operations: ReadonlyMap<number, { readonly parent: number; readonly trees: readonly string[] }>,
  from: number,
  to: number,
): string[] {
  const kept = new Set<number>([0]);
  for (let at: number | undefined = to; at; at = operations.get(at)?.parent) kept.add(at);
  const trees: string[] = [];
  for (let at = from; !kept.has(at); at = operations.get(at)?.parent ?? 0) trees.push(...(operations.get(at)?.trees ?? []));
  return trees;
}

/** Trees an operation concerns; `treeOf` remembers the tree of each node, since a cross-link names only nodes. */
function treesOf(operation: Operation, treeOf: Map<string, string>): string[] {
  const trees = new Set<string>();
  for (const change of operation.changes) {
    if (change.table === "tree") trees.add(change.id);
    if (change.table === "node" || change.table === "strand")
      for (const record of [change.from, change.to]) if (record) trees.add(record.tree);
    if (change.table === "node" && change.to) treeOf.set(change.id, change.to.tree);
    if (change.table === "cross-link")
      for (const node of [change.from, change.to].flatMap((link) => (link ? [link.from, link.to] : []))) {
        const tree = treeOf.get(node);
        if (tree) trees.add(tree);
      }
  }
  return [...trees];
}
