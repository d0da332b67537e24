import type { LogSender } from "#renderer/storage/log-sender.ts";
import type { PassStore, WaitingLines } from "#renderer/storage/pass-store.ts";
import { type Reconciled, type ReconcilePlaces, reconcile } from "#renderer/storage/reconcile.ts";
import { storageFault } from "#renderer/storage/storage-fault.ts";
import { isTautlineError, type TautlineError } from "#shared/errors.ts";
import { hashOfLine } from "#shared/log/line.ts";

/** How safe the edits are. `records`: lines not confirmed by the journal. */
export type OutboxState =
  /** All lines are on disk. `at`: UTC milliseconds of the last answer; null = nothing was sent yet. */
  | { readonly kind: "saved"; readonly at: number | null }
  | { readonly kind: "saving"; readonly records: number }
  /** The server does not answer; tried again by itself. */
  | { readonly kind: "waiting"; readonly records: number }
  /** Refused; the error says why. Tried again by itself unless `final`. */
  | { readonly kind: "stuck"; readonly records: number; readonly error: TautlineError; readonly final: boolean };

export interface OutboxPlaces extends Omit<ReconcilePlaces, "store" | "sender"> {
  readonly store: PassStore;
  readonly sender: LogSender;
  /** Resolves after so many milliseconds, or at once when `signal` aborts. */
  readonly wait: (milliseconds: number, signal: AbortSignal) => Promise<void>;
  readonly changed: (state: OutboxState) => void;
  /** The log was brought together with the journal again while the pass was open: the history is to be opened anew. */
  readonly reconciled: (result: Exclude<Reconciled, { outcome: "agreed" }>) => void;
  /**
   * Lines that came while the log was being replaced follow nothing any more. They are not sent; they are among the store's
   * recovered logs under `name`, and the person is to be told.
   */
  readonly setAside?: (name: string, lines: readonly string[]) => void;
}

const FIRST_WAIT_MS = 500;
const LONGEST_WAIT_MS = 30_000;
/** Answers after which trying again by itself is pointless: somebody must act. */
const FINAL_TAGS = ["held-elsewhere", "token-refused", "not-found", "unreadable-input"] as const;

/**
 * Carries the lines of one pass from the editor to the browser's store (as waiting) and from there to the journal, in order
 * and one request at a time. Only lines that the journal confirmed are marked acknowledged, and only then does the state
 * say `saved`. What could not be sent stays in the store and is sent when the pass is opened again.
 */
export class Outbox {
  private readonly places: OutboxPlaces;
  /** Lines not in the browser's store yet. */
  private fresh: string[] = [];
  private unconfirmed = 0;
  private running: Promise<void> | null = null;
  private again = false;
  private mustReconcile = false;
  /** Lines went past the browser's store, which failed; it is to be given them when it works again. */
  private storeBehind = false;
  private epoch: string | null = null;
  private savedAt: number | null = null;
  private current: OutboxState = { kind: "saved", at: null };
  private readonly closing = new AbortController();
  private wake = new AbortController();
  private idle: (() => void)[] = [];

  constructor(places: OutboxPlaces) {
    this.places = places;
  }

  get state(): OutboxState {
    return this.current;
  }

  /**
   * Brings the stored log and the journal together before the history is opened; sends what waits. When the server does not
   * answer and the browser has the log, the pass opens from there (`offline`), and is brought together later.
   * @throws what the sender throws, when there is nothing to open or somebody must act
   */
  async open(): Promise<Reconciled | { readonly outcome: "offline" }> {
    try {
      const result = await reconcile(this.places);
      await this.begin();
      return result;
    } catch (error) {
      if (isFinal(error) || (await this.places.store.loadPass()) === null) throw error;
      this.mustReconcile = true;
      await this.begin();
      return { outcome: "offline" };
    }
  }

  private async begin(): Promise<void> {
    this.epoch = (await this.places.store.loadPass())?.epoch ?? null;
    await this.countWaiting();
    this.pump();
  }

  /** Takes lines that the history wrote. They are kept and sent in the order given; see {@link state} for how far they are. */
  put(lines: readonly string[]): void {
    if (lines.length === 0) return;
    this.fresh.push(...lines);
    this.unconfirmed += lines.length;
    this.say({ kind: "saving", records: this.unconfirmed });
    this.pump();
  }

  /** Tries again at once (the server is back, somebody acted). */
  retry(): void {
    this.wake.abort();
    this.pump();
  }

  /** Resolves when every line put so far is confirmed, or the outbox is stuck for good or closed. */
  settled(): Promise<void> {
    if (this.running === null) return Promise.resolve();
    return new Promise((resolve) => this.idle.push(resolve));
  }

  /** Stops trying. Lines are in the browser's store by then, as far as it took them. */
  async close(): Promise<void> {
    this.closing.abort();
    this.wake.abort();
    await this.running;
    await this.keepFresh().catch((error: unknown) => this.say(this.stateAfter(error, true)));
  }

  private pump(): void {
    if (this.closing.signal.aborted) return;
    if (this.running !== null) {
      this.again = true;
      return;
    }
    this.again = false;
    this.running = this.work().finally(() => {
      this.running = null;
      if (this.again) this.pump();
      else for (const resolve of this.idle.splice(0)) resolve();
    });
  }

  private async work(): Promise<void> {
    let pause = FIRST_WAIT_MS;
    let conflicts = 0;
    while (!this.closing.signal.aborted) {
      try {
        if (!(await this.step())) return;
        pause = FIRST_WAIT_MS;
      } catch (error) {
        if (isTautlineError(error, "conflict")) {
          // The journal went another way: bring both together, at once the first time.
          this.mustReconcile = true;
          conflicts += 1;
          if (conflicts === 1) continue;
        }
        const final = isFinal(error);
        this.say(this.stateAfter(error, final));
        if (final || this.closing.signal.aborted) return;
        this.wake = new AbortController();
        await this.places.wait(pause, this.wake.signal);
        pause = Math.min(pause * 2, LONGEST_WAIT_MS);
      }
    }
  }

  /** One step on the way to the journal. @returns false when nothing is left to do */
  private async step(): Promise<boolean> {
    if (this.storeBehind) await this.catchUp();
    if (!this.storeBehind) {
      try {
        await this.keepFresh();
      } catch (error) {
        if (!isTautlineError(error, "write-failed")) throw error;
        await this.sendPastStore(error);
        return true;
      }
    }
    if (this.mustReconcile) return this.reconcileAgain();
    if (this.storeBehind) {
      if (this.fresh.length === 0) return this.allSaved();
      await this.sendPastStore();
      return true;
    }
    const waiting = await this.places.store.waiting();
    if (waiting !== null) {
      this.say({ kind: "saving", records: this.unconfirmed });
      await this.send(waiting);
      await this.places.store.acknowledge(waiting.base.seq + waiting.lines.length);
      return true;
    }
    return this.fresh.length > 0 || this.allSaved();
  }

  private allSaved(): false {
    this.unconfirmed = 0;
    this.say({ kind: "saved", at: this.savedAt });
    return false;
  }

  private async send(request: WaitingLines): Promise<void> {
    const { head } = await this.places.sender.appendLog(request);
    // Somebody else wrote on: the history here is to follow.
    if (head.seq !== request.base.seq + request.lines.length) this.mustReconcile = true;
    this.epoch = request.epoch;
    this.unconfirmed = Math.max(0, this.unconfirmed - request.lines.length);
    this.savedAt = this.places.now();
  }

  private async reconcileAgain(): Promise<boolean> {
    // What comes meanwhile follows the log as it is now, which may be gone afterwards.
    const before = (await this.places.store.loadPass())?.lines ?? [];
    const result = await reconcile(this.places);
    this.mustReconcile = false;
    if (result.outcome === "replaced" || result.outcome === "taken") await this.strandFresh(before);
    await this.countWaiting();
    if (result.outcome !== "agreed") this.places.reconciled(result);
    return true;
  }

  private async keepFresh(): Promise<void> {
    if (this.fresh.length === 0) return;
    const { store } = this.places;
    const lines = [...this.fresh];
    try {
      await store.appendWaiting(lines);
    } catch (error) {
      if (!isTautlineError(error, "held-elsewhere")) throw storageFault(error);
      await this.strandFresh((await store.loadPass())?.lines ?? []);
      throw error;
    }
    this.fresh.splice(0, lines.length);
  }

  /** Lines that follow nothing that is kept here any more: not sent, but not thrown away either. `log`: what they may follow. */
  private async strandFresh(log: readonly string[]): Promise<void> {
    const lines = [...this.fresh];
    if (lines.length === 0) return;
    const { store, branchName, now, setAside } = this.places;
    const name = branchName(now());
    await store.setAside(name, now(), lines, linesBefore(lines[0]!, log));
    this.fresh.splice(0, lines.length);
    setAside?.(name, lines);
  }

  /** The browser's store fails (full, or switched off): lines go straight to the journal, which is the authority. */
  private async sendPastStore(fault?: TautlineError): Promise<void> {
    const { store } = this.places;
    if (fault) {
      const inStore = await store.waiting().catch(() => null);
      // Lines that wait in the store come first.
      if (inStore !== null) {
        await this.send(inStore);
        await store.acknowledge(inStore.base.seq + inStore.lines.length).catch(() => undefined);
      }
      if (this.epoch === null) throw fault;
    }
    const lines = [...this.fresh];
    const first = JSON.parse(lines[0]!) as { seq: number; prev: string };
    await this.send({ epoch: this.epoch!, base: { seq: first.seq - 1, hash: first.prev }, lines });
    this.fresh.splice(0, lines.length);
    this.storeBehind = true;
  }

  /** Lets the browser's store have what went past it, when it works again. */
  private async catchUp(): Promise<void> {
    try {
      const result = await reconcile(this.places);
      this.storeBehind = false;
      // Lines merely taken are those that this window sent past its store.
      if (result.outcome === "replaced" || result.outcome === "rebuilt") this.places.reconciled(result);
    } catch {
      // Still failing; the journal has the lines.
    }
  }

  private async countWaiting(): Promise<void> {
    this.unconfirmed = ((await this.places.store.waiting())?.lines.length ?? 0) + this.fresh.length;
    this.say(this.unconfirmed === 0 ? { kind: "saved", at: this.savedAt } : { kind: "saving", records: this.unconfirmed });
  }

  private stateAfter(error: unknown, final: boolean): OutboxState {
    const records = this.unconfirmed;
    // Anything that is no tagged answer, and a fault on the other side, passes by itself.
    if (!isTautlineError(error) || error.tag === "internal" || error.tag === "cancelled") return { kind: "waiting", records };
    return { kind: "stuck", records, error, final };
  }

  private say(state: OutboxState): void {
    this.current = state;
    this.places.changed(state);
  }
}

function isFinal(error: unknown): boolean {
  return FINAL_TAGS.some((tag) => isTautlineError(error, tag));
}

/** The part of a log that a line follows; undefined when it follows none of it. */
function linesBefore(line: string, log: readonly string[]): readonly string[] | undefined {
  const { seq, prev } = JSON.parse(line) as { seq: number; prev: string };
  const last = log[seq - 1];
  return last !== undefined && hashOfLine(last) === prev ? log.slice(0, seq) : undefined;
}
