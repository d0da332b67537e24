import type { PassStore, StoredLog } from "#renderer/storage/pass-store.ts";
import { isTautlineError } from "#shared/errors.ts";
import { PassHistory } from "#shared/log/history.ts";
import { hashOfLine } from "#shared/log/line.ts";
import { historyFromSnapshot, RECORDS_PER_SNAPSHOT, snapshotOf } from "#shared/log/snapshot.ts";

/**
 * The history of a stored log, from its latest snapshot when that stands on the log's chain, else from the lines alone.
 * @throws unreadable-input where the log itself is broken
 */
export async function openHistory(store: PassStore, log: StoredLog): Promise<PassHistory> {
  const kept = await store.latestSnapshot();
  const line = kept === undefined ? undefined : log.lines[kept.seq];
  if (kept !== undefined && line !== undefined && hashOfLine(line) === kept.hash) {
    try {
      return historyFromSnapshot(kept.snapshot, log.lines.slice(kept.seq + 1), "the snapshot in this browser");
    } catch (error) {
      // A cache that does not hold: the lines say the same, or say themselves what is wrong.
      if (!isTautlineError(error)) throw error;
    }
  }
  return PassHistory.fromLines(log.lines, "the log in this browser");
}

/** Keeps a snapshot when one is due. @returns the seq of the latest snapshot now */
export async function keepSnapshot(store: PassStore, history: PassHistory, latestSeq: number): Promise<number> {
  if (history.head.seq - latestSeq < RECORDS_PER_SNAPSHOT) return latestSeq;
  await store.saveSnapshot(snapshotOf(history));
  return history.head.seq;
}
