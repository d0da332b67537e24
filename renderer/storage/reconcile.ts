import type { LogSender } from "#renderer/storage/log-sender.ts";
import type { PassStore, StoredLog } from "#renderer/storage/pass-store.ts";
import type { LogAnswer } from "#shared/api/routes.ts";
import type { PassSummary } from "#shared/api/specimen.ts";
import { isTautlineError, TautlineError } from "#shared/errors.ts";
import { hashOfLine } from "#shared/log/line.ts";
import { type ChainView, holdsWork, type Relation, relationOf, viewOfLines } from "#shared/log/relation.ts";

/** What bringing the window's log and the journal together came to. */
export type Reconciled =
  /** Both say the same, or the window has lines still to be sent. */
  | { readonly outcome: "agreed" }
  /** The window took lines from the journal; `added` continue what it had. */
  | { readonly outcome: "taken"; readonly added: readonly string[] }
  /** The window's log was replaced by the journal's. `branch`: the window's edits, kept as a pass of their own. */
  | { readonly outcome: "replaced"; readonly branch: KeptBranch | null }
  /** The journal was lost and written again from the window's lines. */
  | { readonly outcome: "rebuilt" };

/** Edits of this window that forked from the journal, kept as a pass of their own. */
export interface KeptBranch {
  readonly pass: PassSummary;
  readonly name: string;
  /** Last line that both logs have; -1 = none. */
  readonly common: number;
  /** Lines that only the window had. */
  readonly lines: number;
}

export interface ReconcilePlaces {
  readonly store: PassStore;
  readonly sender: LogSender;
  /** UTC milliseconds. */
  readonly now: () => number;
  /** Name of a branch kept at this time. */
  readonly branchName: (t: number) => string;
  /** The journal is gone from the library: shall it be written again from this window's copy? */
  readonly askRebuild: () => Promise<boolean>;
}

/**
 * Brings the window's log and the journal together; the journal is the authority and nothing of either is lost. The window
 * behind: takes the journal's lines. The journal behind: nothing to do, the outbox sends. Both went on: the window's log is
 * kept as a branch on disk (and here until that is done), then the journal's taken.
 * @throws whatever the sender throws; the window's log is then as it was
 */
export async function reconcile(places: ReconcilePlaces): Promise<Reconciled> {
  const { store, sender } = places;
  const stored = await store.loadPass();
  if (stored === null) {
    const disk = await sender.readLog(0);
    await store.replaceWithDisk(disk.epoch, disk.lines);
    return { outcome: "replaced", branch: null };
  }
  const disk = await readFromBase(sender, stored).catch((error: unknown) => {
    if (isTautlineError(error, "not-found")) return null;
    throw error;
  });
  if (disk === null) return rebuild(places, stored);
  const relation = relationOf(viewOfLines(stored.epoch, stored.lines), disk.view);
  return settle(places, stored, disk, relation);
}

async function settle(places: ReconcilePlaces, stored: StoredLog, disk: DiskPart, relation: Relation): Promise<Reconciled> {
  const { store } = places;
  switch (relation.relation) {
    case "same":
      await store.acknowledge(disk.view.head.seq);
      return { outcome: "agreed" };
    case "send":
      // Lines whose answer was lost on the way are on disk already; lines that an older copy of the journal lacks go again.
      await store.acknowledge(disk.view.head.seq);
      await store.unconfirmAfter(disk.view.head.seq);
      return { outcome: "agreed" };
    case "take": {
      const added = disk.lines.slice(relation.from - disk.from);
      await store.acknowledge(relation.from - 1);
      await store.appendFromDisk(added);
      return { outcome: "taken", added };
    }
    case "fork":
      return keepBoth(places, stored, relation.common);
  }
}

/** The journal from a line on, with the hashes it shows. */
interface DiskPart {
  readonly from: number;
  readonly lines: readonly string[];
  readonly view: ChainView;
}

/** The journal from the last confirmed line on; whole when it has not that line (restored from a copy, or another log). */
async function readFromBase(sender: LogSender, stored: StoredLog): Promise<DiskPart> {
  const base = stored.acknowledged;
  const line = stored.lines[base];
  if (line !== undefined) {
    const part = await sender.readLog(base + 1).catch((error: unknown) => {
      // The journal is shorter than what it once confirmed.
      if (isTautlineError(error, "bad-request")) return null;
      throw error;
    });
    if (part !== null && part.epoch === stored.epoch && part.before === hashOfLine(line)) return diskPart(part, base + 1);
  }
  return diskPart(await sender.readLog(0), 0);
}

function diskPart(answer: LogAnswer, from: number): DiskPart {
  const hashes = answer.lines.map(hashOfLine);
  const last = hashes.length === 0 ? answer.before : hashes[hashes.length - 1]!;
  if (last !== answer.head.hash || from + hashes.length - 1 !== answer.head.seq) {
    throw new TautlineError("unreadable-input", "The journal's lines and the end it names do not fit. Open the pass again.", {
      file: "the journal",
      expected: `line ${answer.head.seq} as its last`,
      found: `line ${from + hashes.length - 1}`,
    });
  }
  const hashAt = (seq: number) => (seq === from - 1 ? answer.before : hashes[seq - from]);
  return { from, lines: answer.lines, view: { epoch: answer.epoch, head: answer.head, hashAt } };
}

async function keepBoth(places: ReconcilePlaces, stored: StoredLog, common: number): Promise<Reconciled> {
  const { store, sender, now, branchName } = places;
  const own = stored.lines.slice(common + 1);
  // Read first, so that nothing but this browser's store can fail between keeping the branch and taking the journal.
  const disk = await sender.readLog(0);
  let branch: KeptBranch | null = null;
  let aside: number | undefined;
  if (holdsWork(own, common + 1)) {
    const t = now();
    const name = branchName(t);
    aside = await asideOnce(store, stored, name, t);
    const pass = await sender.keepBranch(stored.lines, name);
    branch = { pass, name, common, lines: own.length };
  }
  await store.replaceWithDisk(disk.epoch, disk.lines);
  // On disk as a pass of its own: the copy here has done its service.
  if (aside !== undefined) await store.dropRecovered(aside);
  return { outcome: "replaced", branch };
}

/** Sets the stored log aside, unless an earlier try did. */
async function asideOnce(store: PassStore, stored: StoredLog, name: string, t: number): Promise<number | undefined> {
  const last = stored.lines[stored.lines.length - 1];
  const same = (await store.recovered()).find(
    ({ lines }) => lines.length === stored.lines.length && lines[lines.length - 1] === last,
  );
  return (same ?? (await store.setAside(name, t))).id;
}

async function rebuild(places: ReconcilePlaces, stored: StoredLog): Promise<Reconciled> {
  const { store, sender, askRebuild } = places;
  if (!(await askRebuild())) {
    throw new TautlineError("not-found", "The library has no such pass any more. This browser still keeps its edits.", {
      what: "pass",
      id: store.pass,
    });
  }
  const { head } = await sender.rebuildLog(stored.lines);
  await store.acknowledge(head.seq);
  return { outcome: "rebuilt" };
}
