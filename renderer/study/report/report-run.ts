import { type ReadonlySignal, signal } from "@preact/signals";
import type { MadeReport, ReportMessage, ReportOrder, ReportStep } from "#renderer/study/report/report-messages.ts";

/** What of a worker is used; a test gives a fake one. */
export interface ReportWorker {
  onmessage: ((event: { readonly data: ReportMessage }) => void) | null;
  onerror: ((event: { readonly message?: string }) => void) | null;
  postMessage(order: ReportOrder): void;
  terminate(): void;
}

/** What the report is doing now. `of` is what it was made of, for telling whether it is old. */
export type ReportState =
  | { readonly kind: "none" }
  | { readonly kind: "reading" }
  | { readonly kind: "running"; readonly step: ReportStep; readonly done: number; readonly of: number }
  | { readonly kind: "made"; readonly made: MadeReport; readonly from: string }
  | { readonly kind: "failed"; readonly message: string };

const STOPPED = "The part of the page that makes the report stopped without an answer.";

/** Makes reports in a thread of its own, one at a time; the last one made stays. */
export class ReportRun {
  private readonly stateSignal = signal<ReportState>({ kind: "none" });
  private worker: ReportWorker | null = null;
  private turn = 0;

  constructor(private readonly makeWorker: () => ReportWorker) {}

  get state(): ReadonlySignal<ReportState> {
    return this.stateSignal;
  }

  /** Makes a report. @param read gathers what it is made of. @param from names what that is; see {@link ReportState} */
  async start(read: () => Promise<ReportOrder>, from: string): Promise<void> {
    this.end();
    const turn = this.turn;
    this.stateSignal.value = { kind: "reading" };
    try {
      const order = await read();
      if (turn !== this.turn) return;
      this.begin(order, from);
    } catch (error) {
      if (turn === this.turn) this.settle({ kind: "failed", message: error instanceof Error ? error.message : String(error) });
    }
  }

  /** Stops what is under way. */
  cancel(): void {
    this.settle({ kind: "none" });
  }

  dispose(): void {
    this.end();
  }

  private begin(order: ReportOrder, from: string): void {
    const worker = this.makeWorker();
    this.worker = worker;
    worker.onmessage = ({ data }) => {
      if (data.kind === "progress") this.stateSignal.value = { kind: "running", step: data.step, done: data.done, of: data.of };
      else if (data.kind === "made") this.settle({ kind: "made", made: data.made, from });
      else this.settle({ kind: "failed", message: data.message });
    };
    worker.onerror = ({ message }) => this.settle({ kind: "failed", message: message || STOPPED });
    worker.postMessage(order);
  }

  private settle(state: ReportState): void {
    this.end();
    this.stateSignal.value = state;
  }

  private end(): void {
    this.turn += 1;
    if (this.worker === null) return;
    this.worker.onmessage = null;
    this.worker.onerror = null;
    this.worker.terminate();
    this.worker = null;
  }
}

/** The page's own worker file. */
export function pageReportWorker(): ReportWorker {
  return new Worker(new URL("./report-worker.ts", import.meta.url), { type: "module" }) as ReportWorker;
}
