import { unreadable } from "#shared/errors.ts";
import { readChain } from "#shared/log/chain.ts";
import { bodyOfCurve, curveOfBody } from "#shared/log/curve-body.ts";
import { type Folded, fold } from "#shared/log/fold.ts";
import { PassHistory } from "#shared/log/history.ts";
import { BODY_CHECKS, SNAPSHOT_CHECK } from "#shared/log/record-shapes.ts";
import type { CurveBody, LogHead, LogHeader } from "#shared/log/records.ts";
import { ShapeFault } from "#shared/log/shape-checks.ts";
import type { CrossLink, Dismissal, Landmarks, Strand, Tree, TreeNode } from "#shared/trees/document.ts";

/** What a snapshot calls itself. */
export const SNAPSHOT_FORMAT = "tautline-pass-snapshot";
/** Version of the snapshot's form; any other is passed over. */
export const SNAPSHOT_VERSION = 1;
/** A snapshot is due when this many records were written since the last one. */
export const RECORDS_PER_SNAPSHOT = 200;

/**
 * The fold of a log up to one line, as plain JSON. A cache only: it names the line it stands for by seq and hash, it is used
 * when that line is on the chain, and without it the log folds to the same.
 */
export interface PassSnapshot {
  readonly format: typeof SNAPSHOT_FORMAT;
  readonly version: typeof SNAPSHOT_VERSION;
  readonly seq: number;
  readonly hash: string;
  readonly header: LogHeader;
  readonly trees: readonly Tree[];
  readonly nodes: readonly TreeNode[];
  readonly strands: readonly Strand[];
  readonly crossLinks: readonly CrossLink[];
  readonly landmarks: Landmarks;
  readonly dismissals: readonly Dismissal[];
  readonly curves: readonly CurveBody[];
  readonly pointer: number;
  readonly operations: readonly (Folded["operations"] extends ReadonlyMap<number, infer T> ? T : never)[];
  readonly onward: readonly (readonly [number, number])[];
  readonly marks: Folded["marks"];
  readonly counters: Folded["counters"];
  readonly effort: Folded["effort"];
  readonly changed: number;
}

/** A snapshot of the history as it stands. Complexity: size of the history. */
export function snapshotOf(history: PassHistory): PassSnapshot {
  const { document, header, head, operations, onward, pointer, marks, counters, effort, changed } = history.state;
  return {
    format: SNAPSHOT_FORMAT,
    version: SNAPSHOT_VERSION,
    seq: head.seq,
    hash: head.hash,
    header: header!,
    trees: [...document.trees.values()],
    nodes: [...document.nodes.values()],
    strands: [...document.strands.values()],
    crossLinks: [...document.crossLinks.values()],
    landmarks: document.landmarks,
    dismissals: [...document.dismissals.values()],
    curves: Array.from(document.curves.values(), bodyOfCurve),
    pointer,
    operations: [...operations.values()],
    onward: [...onward],
    marks,
    counters,
    effort,
    changed,
  };
}

/**
 * The history that the snapshot and the lines after it give.
 * @param laterLines the lines after the snapshot's own; their chain is checked from its hash on
 * @throws unreadable-input when the snapshot has not its shape, or the lines do not continue it: fold the whole log instead
 */
export function historyFromSnapshot(snapshot: unknown, laterLines: readonly string[], file = "the snapshot"): PassHistory {
  const checked = checkedSnapshot(snapshot, file);
  const base: LogHead = { seq: checked.seq, hash: checked.hash };
  return PassHistory.fromFolded(fold(foldedOf(checked), readChain(laterLines, base, file), file));
}

function checkedSnapshot(value: unknown, file: string): PassSnapshot {
  try {
    SNAPSHOT_CHECK(value, "snapshot");
    const snapshot = value as PassSnapshot;
    BODY_CHECKS.header!(snapshot.header, "snapshot.header");
    snapshot.curves.forEach((curve, i) => {
      BODY_CHECKS.curve!(curve, `snapshot.curves[${i}]`);
    });
    snapshot.operations.forEach((entry, i) => {
      BODY_CHECKS.op!(entry.operation, `snapshot.operations[${i}].operation`);
    });
    return snapshot;
  } catch (fault) {
    if (!(fault instanceof ShapeFault)) throw fault;
    throw unreadable(file, fault.expected, fault.found, fault.where, "Delete the snapshot; the log alone says the same.");
  }
}

function foldedOf(snapshot: PassSnapshot): Folded {
  const byId = <T extends { readonly id: string }>(records: readonly T[]) => new Map(records.map((r) => [r.id as T["id"], r]));
  return {
    header: snapshot.header,
    head: { seq: snapshot.seq, hash: snapshot.hash },
    document: {
      trees: byId(snapshot.trees),
      nodes: byId(snapshot.nodes),
      strands: byId(snapshot.strands),
      crossLinks: byId(snapshot.crossLinks),
      landmarks: snapshot.landmarks,
      dismissals: new Map(snapshot.dismissals.map((d) => [d.key, d])),
      curves: byId(snapshot.curves.map(curveOfBody)),
    },
    pointer: snapshot.pointer,
    operations: new Map(snapshot.operations.map((entry) => [entry.seq, entry])),
    onward: new Map(snapshot.onward),
    marks: snapshot.marks,
    counters: snapshot.counters,
    effort: snapshot.effort,
    changed: snapshot.changed,
  };
}
