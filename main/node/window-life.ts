export interface WindowLifeOptions {
  readonly graceMs: number;
  /** A window's last event stream has ended. */
  readonly onLeft: (window: string) => void;
  /** The grace period after the last window has passed. */
  readonly onAllLeft: () => void;
}

/** Counts the event streams of each window; a page is open as long as it has one. */
export class WindowLife {
  readonly #options: WindowLifeOptions;
  readonly #streams = new Map<string, number>();
  #timer: NodeJS.Timeout | null = null;

  constructor(options: WindowLifeOptions) {
    this.#options = options;
  }

  get open(): number {
    return this.#streams.size;
  }

  seen(window: string): void {
    this.stop();
    this.#streams.set(window, (this.#streams.get(window) ?? 0) + 1);
  }

  /** Called when a stream ends. */
  left(window: string): void {
    const streams = this.#streams.get(window);
    if (streams === undefined) return;
    if (streams > 1) return void this.#streams.set(window, streams - 1);
    this.#streams.delete(window);
    this.#options.onLeft(window);
    if (this.#streams.size > 0) return;
    this.stop();
    this.#timer = setTimeout(() => this.#options.onAllLeft(), this.#options.graceMs).unref();
  }

  /** Forgets a grace period that is running. */
  stop(): void {
    if (this.#timer) clearTimeout(this.#timer);
    this.#timer = null;
  }
}
