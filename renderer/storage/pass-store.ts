import type { RecoveredLog, StoredLine, WindowDatabase } from "#renderer/storage/window-database.ts";
import { TautlineError } from "#shared/errors.ts";
import { hashOfLine } from "#shared/log/line.ts";
import type { LogHead } from "#shared/log/records.ts";
import type { PassSnapshot } from "#shared/log/snapshot.ts";

/** A pass as this window last had it. */
export interface StoredLog {
  readonly epoch: string;
  /** All lines, from 0 on. */
  readonly lines: readonly string[];
  /** Seq of the last line that the journal confirmed; -1 = none. Later lines are waiting. */
  readonly acknowledged: number;
}

/** Lines that the journal has not confirmed, and the line that they follow. */
export interface WaitingLines {
  readonly epoch: string;
  readonly base: LogHead;
  readonly lines: readonly string[];
}

/** The log of one pass in the window's database. Every method is one transaction: all of it happens or nothing does. */
export class PassStore {
  private readonly database: WindowDatabase;
  readonly pass: string;

  constructor(database: WindowDatabase, pass: string) {
    this.database = database;
    this.pass = pass;
  }

  /** The pass's whole log; null when this window never had it. */
  async loadPass(): Promise<StoredLog | null> {
    const { passes, lines } = this.database;
    return this.database.transaction("r", passes, lines, async () => {
      const known = await passes.get(this.pass);
      if (!known) return null;
      const rows = await this.rows();
      return { epoch: known.epoch, lines: rows.map((row) => row.line), acknowledged: lastAcknowledged(rows) };
    });
  }

  /**
   * Keeps new lines as waiting. @throws held-elsewhere when they do not follow the last line kept: another window of this
   * browser wrote meanwhile
   */
  async appendWaiting(lines: readonly string[]): Promise<void> {
    await this.append(lines, "waiting");
  }

  /** Keeps lines that the journal had and this window had not; they follow the last line kept. @throws held-elsewhere */
  async appendFromDisk(lines: readonly string[]): Promise<void> {
    await this.append(lines, "acknowledged");
  }

  /** Marks all lines up to `seq` as confirmed by the journal. */
  async acknowledge(seq: number): Promise<void> {
    const first = [this.pass, "waiting", 0];
    const last = [this.pass, "waiting", seq];
    await this.database.lines.where("[pass+state+seq]").between(first, last, true, true).modify({ state: "acknowledged" });
  }

  /** Marks all lines after `seq` as waiting again: the journal has lost them (an older copy was put back). */
  async unconfirmAfter(seq: number): Promise<void> {
    const first = [this.pass, "acknowledged", seq + 1];
    const last = [this.pass, "acknowledged", Infinity];
    await this.database.lines.where("[pass+state+seq]").between(first, last, true, true).modify({ state: "waiting" });
  }

  /** The outbox: lines that wait, with the line they follow. Null when none do. */
  async waiting(): Promise<WaitingLines | null> {
    const { passes, lines } = this.database;
    return this.database.transaction("r", passes, lines, async () => {
      const known = await passes.get(this.pass);
      const rows = await lines
        .where("[pass+state+seq]")
        .between([this.pass, "waiting", 0], [this.pass, "waiting", Infinity])
        .toArray();
      if (!known || rows.length === 0) return null;
      const seq = rows[0]!.seq - 1;
      const before = seq < 0 ? undefined : await lines.get([this.pass, seq]);
      const base: LogHead = { seq, hash: before ? hashOfLine(before.line) : "" };
      return { epoch: known.epoch, base, lines: rows.map((row) => row.line) };
    });
  }

  /** Puts the journal's lines (from 0 on) in place of whatever was kept; all count as confirmed. */
  async replaceWithDisk(epoch: string, diskLines: readonly string[]): Promise<void> {
    const { passes, lines, snapshots } = this.database;
    await this.database.transaction("rw", passes, lines, snapshots, async () => {
      await this.removeLines();
      await snapshots.delete(this.pass);
      await passes.put({ pass: this.pass, epoch });
      await lines.bulkAdd(diskLines.map((line, seq): StoredLine => ({ pass: this.pass, seq, line, state: "acknowledged" })));
    });
  }

  /**
   * Copies lines to the recovered ones, under a name: those given, else the whole log as it is kept here.
   * @param t UTC milliseconds
   * @param before the lines from 0 on that those given follow, when they are known
   */
  async setAside(name: string, t: number, only?: readonly string[], before?: readonly string[]): Promise<RecoveredLog> {
    const { passes, lines, recovered } = this.database;
    return this.database.transaction("rw", passes, lines, recovered, async () => {
      const known = await passes.get(this.pass);
      const kept = only ?? (await this.rows()).map((row) => row.line);
      const base = before === undefined ? {} : { before };
      const log: RecoveredLog = { pass: this.pass, name, t, epoch: known?.epoch ?? "", lines: kept, ...base };
      return { ...log, id: await recovered.add(log) };
    });
  }

  /** Logs set aside, oldest first. */
  async recovered(): Promise<RecoveredLog[]> {
    return this.database.recovered.where("pass").equals(this.pass).sortBy("id");
  }

  /** Forgets a log that was set aside (it is safe elsewhere, or the person does not want it). */
  async dropRecovered(id: number): Promise<void> {
    await this.database.recovered.delete(id);
  }

  /** Keeps the latest snapshot; a cache, so the one before goes. */
  async saveSnapshot(snapshot: PassSnapshot): Promise<void> {
    const { seq, hash } = snapshot;
    await this.database.snapshots.put({ pass: this.pass, seq, hash, snapshot });
  }

  /** The latest snapshot; undefined when there is none. Its shape is checked where it is used. */
  async latestSnapshot(): Promise<{ readonly seq: number; readonly hash: string; readonly snapshot: unknown } | undefined> {
    return this.database.snapshots.get(this.pass);
  }

  /** Removes all that this window keeps of the pass, except logs set aside. */
  async forget(): Promise<void> {
    const { passes, lines, snapshots } = this.database;
    await this.database.transaction("rw", passes, lines, snapshots, async () => {
      await this.removeLines();
      await snapshots.delete(this.pass);
      await passes.delete(this.pass);
    });
  }

  private async append(added: readonly string[], state: StoredLine["state"]): Promise<void> {
    const { lines } = this.database;
    await this.database.transaction("rw", lines, async () => {
      const last = await lines.where("[pass+seq]").between([this.pass, -1], [this.pass, Infinity]).last();
      const next = (last?.seq ?? -1) + 1;
      const prev = last ? hashOfLine(last.line) : "";
      const first = added[0] === undefined ? null : (JSON.parse(added[0]) as { seq: number; prev: string });
      if (first && (first.seq !== next || first.prev !== prev)) throw gap(this.pass, next, first.seq);
      await lines.bulkAdd(added.map((line, i): StoredLine => ({ pass: this.pass, seq: next + i, line, state })));
    });
  }

  private rows(): Promise<StoredLine[]> {
    return this.database.lines.where("[pass+seq]").between([this.pass, -1], [this.pass, Infinity]).toArray();
  }

  private removeLines(): Promise<number> {
    return this.database.lines.where("[pass+seq]").between([this.pass, -1], [this.pass, Infinity]).delete();
  }
}

function lastAcknowledged(rows: readonly StoredLine[]): number {
  const firstWaiting = rows.findIndex((row) => row.state === "waiting");
  return (firstWaiting === -1 ? rows.length : firstWaiting) - 1;
}

function gap(pass: string, expected: number, found: number): TautlineError<"held-elsewhere"> {
  return new TautlineError(
    "held-elsewhere",
    `Another window of this browser went on with the pass (line ${expected} was to follow, not ${found}). Close it, and open the pass again here.`,
    { what: pass, holder: "another window of this browser" },
  );
}
