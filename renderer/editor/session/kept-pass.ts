import { type ReadonlySignal, type Signal, signal } from "@preact/signals";
import type { PassKeeper, SavedState } from "#renderer/editor/session/pass-keeper.ts";
import type { LogSender } from "#renderer/storage/log-sender.ts";
import { keepSnapshot, openHistory } from "#renderer/storage/open-history.ts";
import { Outbox, type OutboxState } from "#renderer/storage/outbox.ts";
import { PassStore } from "#renderer/storage/pass-store.ts";
import type { KeptBranch, Reconciled } from "#renderer/storage/reconcile.ts";
import type { WindowDatabase } from "#renderer/storage/window-database.ts";
import { IDLE_THRESHOLD_MS } from "#shared/log/effort.ts";
import { PassHistory, type Stamp } from "#shared/log/history.ts";
import type { Curve } from "#shared/trees/document.ts";
import type { Operation } from "#shared/trees/operations.ts";

export interface KeptPassPlaces {
  readonly database: WindowDatabase;
  readonly pass: string;
  readonly sender: LogSender;
  /** UTC milliseconds. */
  readonly now: () => number;
  /** Milliseconds of a clock that never goes back. */
  readonly mono: () => number;
  /** Random, one per opening. */
  readonly session: string;
  readonly wait: (milliseconds: number, signal: AbortSignal) => Promise<void>;
  readonly branchName: (t: number) => string;
  readonly askRebuild: () => Promise<boolean>;
  /** Edits of this window went another way than the journal; they are a pass of their own now. */
  readonly keptBranch: (branch: KeptBranch) => void;
  /** Lines that could not go to the journal any more; they are among this browser's recovered logs under the name. */
  readonly setAside: (name: string, lines: readonly string[]) => void;
}

/** So long without an edit, and the session is noted as idle, milliseconds. */
const IDLE_MS = IDLE_THRESHOLD_MS;

/** A pass that this window writes: history in memory, kept in the browser at once, and sent to the journal on disk. */
export class KeptPass implements PassKeeper {
  readonly readOnly = false;
  readonly saved: ReadonlySignal<SavedState>;
  private readonly savedSignal: Signal<SavedState> = signal<SavedState>({ kind: "saved", at: null });
  private readonly store: PassStore;
  private readonly outbox: Outbox;
  private readonly listeners = new Set<() => void>();
  private readonly openedAt: number;
  private history: PassHistory | null = null;
  private snapshotSeq = 0;
  private idleTimer: ReturnType<typeof setTimeout> | null = null;
  private reopening: Promise<void> = Promise.resolve();

  private constructor(private readonly places: KeptPassPlaces) {
    const { sender, now, wait, branchName, askRebuild } = places;
    this.saved = this.savedSignal;
    this.openedAt = places.mono();
    this.store = new PassStore(places.database, places.pass);
    this.outbox = new Outbox({
      store: this.store,
      sender,
      now,
      wait,
      branchName,
      askRebuild,
      changed: (state) => {
        this.savedSignal.value = savedState(state);
      },
      reconciled: (result) => {
        this.reopening = this.reopen(result);
      },
      setAside: places.setAside,
    });
  }

  /** Opens a pass for writing. @throws what the server or the browser's store throws when there is nothing to open */
  static async open(places: KeptPassPlaces): Promise<KeptPass> {
    const kept = new KeptPass(places);
    const result = await kept.outbox.open();
    if (result.outcome === "replaced" && result.branch !== null) places.keptBranch(result.branch);
    await kept.load();
    kept.put(kept.open.session("opened", kept.stamp()));
    return kept;
  }

  get document() {
    return this.open.document;
  }
  get pointer() {
    return this.open.pointer;
  }
  get canUndo() {
    return this.open.canUndo;
  }
  get canRedo() {
    return this.open.canRedo;
  }
  get edits() {
    return this.open.edits;
  }
  ids() {
    return this.open.ids();
  }
  entries() {
    return this.open.entries();
  }
  path() {
    return this.open.path();
  }

  async commit(operation: Operation, label: string, curves: readonly Curve[]): Promise<void> {
    await this.reopening;
    this.put(this.open.commit(operation, label, curves, this.stamp()));
  }
  async undo(): Promise<void> {
    await this.reopening;
    this.put(this.open.undo(this.stamp()));
  }
  async redo(): Promise<void> {
    await this.reopening;
    this.put(this.open.redo(this.stamp()));
  }
  async jump(seq: number): Promise<void> {
    await this.reopening;
    this.put(this.open.jump(seq, this.stamp()));
  }
  async mark(name: string): Promise<void> {
    await this.reopening;
    this.put(this.open.mark(name, this.stamp()));
  }

  onChange(listener: () => void): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  /** Tries to send at once: the server is back. */
  retry(): void {
    this.outbox.retry();
  }

  /** Resolves when every edit made so far is on disk, or cannot be. */
  settled(): Promise<void> {
    return this.outbox.settled();
  }

  async close(): Promise<void> {
    if (this.idleTimer !== null) clearTimeout(this.idleTimer);
    this.outbox.put(this.open.session("closed", this.stamp()));
    await this.outbox.close();
  }

  private get open(): PassHistory {
    return this.history!;
  }

  private stamp(): Stamp {
    const { now, mono, session } = this.places;
    return { t: now(), mono: Math.round(mono() - this.openedAt), session };
  }

  private put(lines: readonly string[]): void {
    this.outbox.put(lines);
    if (this.idleTimer !== null) clearTimeout(this.idleTimer);
    this.idleTimer = setTimeout(() => this.outbox.put(this.open.session("idle", this.stamp())), IDLE_MS);
    void keepSnapshot(this.store, this.open, this.snapshotSeq)
      .then((seq) => {
        this.snapshotSeq = seq;
      })
      // A snapshot is a cache: the lines say the same.
      .catch(() => undefined);
    for (const listener of this.listeners) listener();
  }

  private async load(): Promise<void> {
    const log = await this.store.loadPass();
    this.history = await openHistory(this.store, log!);
  }

  private async reopen(result: Exclude<Reconciled, { outcome: "agreed" }>): Promise<void> {
    if (result.outcome === "replaced" && result.branch !== null) this.places.keptBranch(result.branch);
    await this.load();
    for (const listener of this.listeners) listener();
  }
}

/** A pass that another window writes: shown as it grows, changed by nothing here. */
export class WatchedPass implements PassKeeper {
  readonly readOnly = true;
  readonly saved: ReadonlySignal<SavedState> = signal<SavedState>({ kind: "saved", at: null });
  private readonly listeners = new Set<() => void>();

  private constructor(
    private readonly history: PassHistory,
    private readonly sender: LogSender,
  ) {}

  static async open(sender: LogSender): Promise<WatchedPass> {
    return new WatchedPass(PassHistory.fromLines((await sender.readLog(0)).lines, "the journal"), sender);
  }

  get document() {
    return this.history.document;
  }
  get pointer() {
    return this.history.pointer;
  }
  get canUndo() {
    return false;
  }
  get canRedo() {
    return false;
  }
  get edits() {
    return this.history.edits;
  }
  ids = () => this.history.ids();
  entries = () => this.history.entries();
  path = () => this.history.path();
  commit = refuse;
  undo = refuse;
  redo = refuse;
  jump = refuse;
  mark = refuse;
  settled = async () => undefined;
  close = async () => undefined;

  onChange(listener: () => void): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  /** Takes what the writer added since. */
  async follow(): Promise<void> {
    const { lines } = await this.sender.readLog(this.history.head.seq + 1);
    this.history.absorb(lines, "the journal");
    for (const listener of this.listeners) listener();
  }
}

function refuse(): Promise<void> {
  return Promise.reject(new Error("a pass open for reading only was to be changed"));
}

function savedState(state: OutboxState): SavedState {
  return state.kind === "stuck" ? { kind: "stuck", records: state.records, message: state.error.message } : state;
}
