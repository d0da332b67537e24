import Dexie, { type Table } from "dexie";

/** One line of a pass's log as this window keeps it. Key: pass and seq. */
export interface StoredLine {
  readonly pass: string;
  readonly seq: number;
  readonly line: string;
  /** `waiting`: the journal on disk has not confirmed it; such lines are the outbox. */
  readonly state: "waiting" | "acknowledged";
}

/** Which log the lines of a pass belong to. Key: pass. */
export interface StoredPass {
  readonly pass: string;
  readonly epoch: string;
}

/** The latest snapshot of a pass (a cache). Key: pass. */
export interface StoredSnapshot {
  readonly pass: string;
  readonly seq: number;
  readonly hash: string;
  readonly snapshot: unknown;
}

/** Lines of this window that the journal did not take: a whole log, or its last part with the lines before it. Key: counted up. */
export interface RecoveredLog {
  readonly id?: number;
  readonly pass: string;
  readonly name: string;
  /** UTC milliseconds. */
  readonly t: number;
  readonly epoch: string;
  readonly lines: readonly string[];
  /** The lines from 0 on that `lines` follow, when they were set aside without them and were still known. */
  readonly before?: readonly string[];
}

export interface StoredSetting {
  readonly key: string;
  readonly value: unknown;
}

/** One version of the window's database: its tables and what brings older data to it. */
export interface SchemaVersion {
  readonly version: number;
  readonly stores: Readonly<Record<string, string>>;
}

/**
 * All versions ever shipped, oldest first. Only ever append: a version that people have must stay as it was, and a test opens
 * each one with the current program.
 */
export const SCHEMA_VERSIONS: readonly SchemaVersion[] = [
  {
    version: 1,
    stores: {
      passes: "pass",
      lines: "[pass+seq], [pass+state+seq]",
      snapshots: "pass",
      recovered: "++id, pass",
      settings: "key",
    },
  },
];

export const DATABASE_NAME = "tautline";

/** The window's own store (IndexedDB): the whole log of each pass it has opened, and its settings. */
export class WindowDatabase extends Dexie {
  declare readonly passes: Table<StoredPass, string>;
  declare readonly lines: Table<StoredLine, [string, number]>;
  declare readonly snapshots: Table<StoredSnapshot, string>;
  declare readonly recovered: Table<RecoveredLog, number>;
  declare readonly settings: Table<StoredSetting, string>;

  constructor(name: string = DATABASE_NAME, versions: readonly SchemaVersion[] = SCHEMA_VERSIONS) {
    // Strict: a transaction is done when the browser has asked the disk to keep it.
    super(name, { chromeTransactionDurability: "strict" });
    for (const { version, stores } of versions) this.version(version).stores({ ...stores });
  }
}
