import { type ReadonlySignal, signal } from "@preact/signals";
import { isServerAway } from "#renderer/client/send-request.ts";
import type { Intent } from "#renderer/editor/session/intent.ts";

export interface QueuedIntent {
  readonly id: number;
  readonly intent: Intent;
}

export interface QueuePlaces {
  /** Carries one intent out; called one at a time, in order. */
  readonly perform: (intent: Intent, signal: AbortSignal) => Promise<void>;
  /** An intent that could not be carried out; it is dropped and the next one follows. */
  readonly failed: (intent: Intent, error: unknown) => void;
  /** Resolves when the server may be asked again. */
  readonly serverBack: () => Promise<void>;
  /** Keeps what waits over a reload. */
  readonly keep: (waiting: readonly Intent[]) => void;
}

/**
 * What the person asked for and the program has not carried out yet, in order. A click is never lost: it waits while an
 * earlier curve is being computed, while the server is away, and over a reload of the page.
 */
export class EditQueue {
  private readonly list = signal<readonly QueuedIntent[]>([]);
  private readonly away = signal(false);
  private nextId = 1;
  private running = false;
  private abort = new AbortController();
  private idle: (() => void)[] = [];

  constructor(private readonly places: QueuePlaces) {}

  /** Waiting intents, the one under way first. */
  get waiting(): ReadonlySignal<readonly QueuedIntent[]> {
    return this.list;
  }

  /** True while the head waits for the server. */
  get serverAway(): ReadonlySignal<boolean> {
    return this.away;
  }

  add(intent: Intent): void {
    this.set([...this.list.value, { id: this.nextId++, intent }]);
    void this.run();
  }

  /** Takes the newest waiting intent back; false when nothing waits. The one under way is stopped. */
  takeBack(): boolean {
    const list = this.list.value;
    if (list.length === 0) return false;
    if (list.length === 1) this.abort.abort();
    this.set(list.slice(0, -1));
    return true;
  }

  /** Resolves when nothing waits. */
  settled(): Promise<void> {
    if (!this.running && this.list.value.length === 0) return Promise.resolve();
    return new Promise((resolve) => this.idle.push(resolve));
  }

  private async run(): Promise<void> {
    if (this.running) return;
    this.running = true;
    try {
      for (;;) {
        const head = this.list.value[0];
        if (head === undefined) break;
        await this.performHead(head);
      }
    } finally {
      this.running = false;
      for (const resolve of this.idle.splice(0)) resolve();
    }
  }

  private async performHead(head: QueuedIntent): Promise<void> {
    this.abort = new AbortController();
    const { signal: stop } = this.abort;
    try {
      await this.places.perform(head.intent, stop);
    } catch (error) {
      if (isServerAway(error) && !stop.aborted) {
        this.away.value = true;
        await Promise.race([this.places.serverBack(), aborted(stop)]);
        this.away.value = false;
        return;
      }
      if (!stop.aborted) this.places.failed(head.intent, error);
    }
    this.set(this.list.value.filter((queued) => queued.id !== head.id));
  }

  private set(list: readonly QueuedIntent[]): void {
    this.list.value = list;
    this.places.keep(list.map((queued) => queued.intent));
  }
}

function aborted(signal: AbortSignal): Promise<void> {
  return new Promise((resolve) => signal.addEventListener("abort", () => resolve(), { once: true }));
}
