import { type ReadonlySignal, signal } from "@preact/signals";
import type { AtMerge, CompareMessage, CompareOrder } from "#renderer/study/side-by-side/compare-messages.ts";
import type { CompareProgress, Comparison } from "#shared/compare/comparison.ts";

/** What of a worker is used; a test gives a fake one. */
export interface CompareWorker {
  onmessage: ((event: { readonly data: CompareMessage }) => void) | null;
  onerror: ((event: { readonly message?: string }) => void) | null;
  postMessage(order: CompareOrder): void;
  terminate(): void;
}

/** What the comparison is doing now. */
export type RunState =
  | { readonly kind: "idle" }
  | { readonly kind: "running"; readonly progress: CompareProgress }
  | { readonly kind: "done"; readonly comparison: Comparison }
  | { readonly kind: "failed"; readonly message: string }
  | { readonly kind: "cancelled" };

const STOPPED = "The part of the page that compares stopped without an answer.";

/** Comparisons in a thread of their own, one at a time: a new one ends the one before. */
export class CompareRun {
  private readonly stateSignal = signal<RunState>({ kind: "idle" });
  private worker: CompareWorker | null = null;

  constructor(private readonly makeWorker: () => CompareWorker) {}

  get state(): ReadonlySignal<RunState> {
    return this.stateSignal;
  }

  start(order: Omit<CompareOrder, "what" | "merges">): void {
    this.end();
    this.stateSignal.value = { kind: "running", progress: { stage: "matching", begun: 0, of: 0 } };
    const settle = (state: RunState) => {
      if (state.kind !== "running") this.end();
      this.stateSignal.value = state;
    };
    try {
      this.worker = this.makeWorker();
    } catch (error) {
      settle({ kind: "failed", message: error instanceof Error ? error.message : String(error) });
      return;
    }
    listen(this.worker, {
      heard: (message) => {
        if (message.kind === "progress") settle({ kind: "running", progress: message.progress });
        else if (message.kind === "compared") settle({ kind: "done", comparison: message.comparison });
      },
      failed: (message) => settle({ kind: "failed", message }),
    });
    this.worker.postMessage({ ...order, what: "compare", merges: [] });
  }

  /** Stops the comparison under way; without one, nothing. */
  cancel(): void {
    if (this.stateSignal.value.kind !== "running") return;
    this.end();
    this.stateSignal.value = { kind: "cancelled" };
  }

  /** The result repeated at other merge tolerances, beside whatever else runs. */
  atMerges(order: Omit<CompareOrder, "what">): Promise<readonly AtMerge[]> {
    return new Promise((resolve, reject) => {
      const worker = this.makeWorker();
      listen(worker, {
        heard: (message) => {
          if (message.kind !== "merges") return;
          worker.terminate();
          resolve(message.merges);
        },
        failed: (message) => {
          worker.terminate();
          reject(new Error(message));
        },
      });
      worker.postMessage({ ...order, what: "merges" });
    });
  }

  dispose(): void {
    this.end();
  }

  private end(): void {
    if (this.worker === null) return;
    this.worker.onmessage = null;
    this.worker.onerror = null;
    this.worker.terminate();
    this.worker = null;
  }
}

interface Listener {
  heard(message: CompareMessage): void;
  failed(message: string): void;
}

function listen(worker: CompareWorker, to: Listener): void {
  worker.onmessage = ({ data }) => {
    if (data.kind === "failed") to.failed(data.message);
    else to.heard(data);
  };
  worker.onerror = ({ message }) => to.failed(message === undefined || message === "" ? STOPPED : message);
}

/** The page's own worker file. */
export function pageWorker(): CompareWorker {
  return new Worker(new URL("./compare-worker.ts", import.meta.url), { type: "module" }) as CompareWorker;
}
