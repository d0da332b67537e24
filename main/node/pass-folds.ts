import { join } from "node:path";
import type { FilePort } from "#main/node/file-port.ts";
import type { Journal } from "#main/node/journal.ts";
import { Turns } from "#main/node/turns.ts";
import { readJsonFile, writeWhole } from "#main/node/whole-file.ts";
import { PassHistory } from "#shared/log/history.ts";
import { historyFromSnapshot, RECORDS_PER_SNAPSHOT, snapshotOf } from "#shared/log/snapshot.ts";

/** Histories kept in memory: the passes that are open in windows. */
const KEPT = 4;
/** Snapshots kept on disk for each pass. */
const SNAPSHOTS_KEPT = 2;
const SNAPSHOT_NAME = /^snapshot-(\d{1,12})\.json$/;

/**
 * Folds journals to histories, with snapshots on disk so that a long log need not be folded from its beginning. Snapshots are
 * a cache: one that cannot be read, written or found on the chain is passed over, and the journal alone says the same.
 */
export class PassFolds {
  readonly #files: FilePort;
  readonly #kept = new Map<string, PassHistory>();
  readonly #turns = new Turns();

  constructor(files: FilePort) {
    this.#files = files;
  }

  /** The history of the journal as it stands. @param folder the pass's folder */
  history(folder: string, journal: Journal): Promise<PassHistory> {
    return this.#turns.take(async () => {
      const kept = this.#kept.get(folder);
      const history = kept && journal.hashAt(kept.head.seq) === kept.head.hash ? kept : await this.#fold(folder, journal);
      if (history.head.seq < journal.head.seq) history.absorb((await journal.read(history.head.seq + 1)).lines, "journal.jsonl");
      this.#kept.delete(folder);
      this.#kept.set(folder, history);
      for (const [oldest] of [...this.#kept].slice(0, Math.max(0, this.#kept.size - KEPT))) this.#kept.delete(oldest);
      return history;
    });
  }

  /** Writes a snapshot when one is due. Never fails: what could not be written is only slower to read. */
  async snapshot(folder: string, journal: Journal): Promise<void> {
    const newest = (await this.#snapshots(folder).catch(() => []))[0] ?? 0;
    if (journal.head.seq - newest < RECORDS_PER_SNAPSHOT) return;
    try {
      const snapshot = snapshotOf(await this.history(folder, journal));
      const bytes = new TextEncoder().encode(JSON.stringify(snapshot));
      await writeWhole(this.#files, join(folder, `snapshot-${snapshot.seq}.json`), bytes);
      for (const seq of (await this.#snapshots(folder)).slice(SNAPSHOTS_KEPT)) {
        await this.#files.remove(join(folder, `snapshot-${seq}.json`));
      }
    } catch {
      // A cache that could not be written; the next append tries again.
    }
  }

  /** Forgets what is in memory of the passes below a folder. */
  forget(folder: string): void {
    for (const key of this.#kept.keys()) if (key.startsWith(folder)) this.#kept.delete(key);
  }

  async #fold(folder: string, journal: Journal): Promise<PassHistory> {
    for (const seq of await this.#snapshots(folder)) {
      if (seq > journal.head.seq) continue;
      try {
        const snapshot = await readJsonFile(this.#files, join(folder, `snapshot-${seq}.json`), `snapshot-${seq}.json`);
        const history = historyFromSnapshot(snapshot, (await journal.read(seq + 1)).lines);
        if (journal.hashAt(seq) === (snapshot as { hash: string }).hash && history.head.seq === journal.head.seq) return history;
      } catch {
        // Damaged: the next one, or the whole log.
      }
    }
    return PassHistory.fromLines((await journal.read(0)).lines, "journal.jsonl");
  }

  /** Seqs of the snapshots on disk, newest first. */
  async #snapshots(folder: string): Promise<number[]> {
    const names = ((await this.#files.list(folder)) ?? []).map(({ name }) => SNAPSHOT_NAME.exec(name)?.[1]);
    return names
      .filter((seq) => seq !== undefined)
      .map(Number)
      .sort((a, b) => b - a);
  }
}
