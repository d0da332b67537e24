import { type ReadonlySignal, signal } from "@preact/signals";
import { isTautlineError } from "#shared/errors.ts";

export interface NoticeAction {
  readonly label: string;
  readonly run: () => void;
}

/** A message to the person. Errors stay until they are put away; news goes by itself. */
export interface Notice {
  readonly id: number;
  readonly kind: "error" | "news";
  readonly text: string;
  readonly actions: readonly NoticeAction[];
  /** How often the same sentence came; one row counts instead of many rows. */
  readonly times: number;
}

const NEWS_STAYS_MS = 8_000;

/** The messages on screen. */
export class Notices {
  private readonly list = signal<readonly Notice[]>([]);
  private nextId = 1;

  get shown(): ReadonlySignal<readonly Notice[]> {
    return this.list;
  }

  news(text: string, actions: readonly NoticeAction[] = []): void {
    const id = this.add("news", text, actions);
    setTimeout(() => this.putAway(id), NEWS_STAYS_MS);
  }

  error(text: string, actions: readonly NoticeAction[] = []): void {
    this.add("error", text, actions);
  }

  /** Shows a failure. Cancelled and superseded work is no failure; a fault of the program is also logged with its trace. */
  failed(error: unknown, actions: readonly NoticeAction[] = []): void {
    if (isTautlineError(error)) {
      if (error.tag !== "superseded" && error.tag !== "cancelled") this.error(error.message, actions);
      return;
    }
    console.error(error);
    this.error(`The program met a fault of its own (${String(error)}). Nothing that was saved is lost.`, actions);
  }

  putAway(id: number): void {
    this.list.value = this.list.value.filter((notice) => notice.id !== id);
  }

  private add(kind: Notice["kind"], text: string, actions: readonly NoticeAction[]): number {
    const same = this.list.value.find((notice) => notice.kind === kind && notice.text === text);
    if (same !== undefined) {
      this.list.value = this.list.value.map((notice) => (notice === same ? { ...same, times: same.times + 1, actions } : notice));
      return same.id;
    }
    const id = this.nextId++;
    this.list.value = [...this.list.value, { id, kind, text, actions, times: 1 }];
    return id;
  }
}
