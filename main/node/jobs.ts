import type { JobResult, JobState, ServerEvent } from "#shared/api/routes.ts";
import { encodeError, isTautlineError, TautlineError } from "#shared/errors.ts";

/** Finished jobs that are still told to a page that was reloaded. */
const KEPT = 20;
/** Progress goes out at most this often. */
const TELL_EVERY_MS = 200;

/** How far a job is; rate and time left are null until they can be told. */
export type Progress = Pick<JobState, "progress" | "step" | "bytesPerSecond" | "secondsLeft">;

/** The work of a job: reports as it goes, stops at the signal, gives what it made. */
export type JobWork = (report: (progress: Progress) => void, signal: AbortSignal) => Promise<JobResult | undefined>;

interface Job {
  state: JobState;
  told: number;
  readonly abort: AbortController;
  readonly ended: Promise<void>;
}

export interface JobsOptions {
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly newId: () => string;
  readonly emit: (event: ServerEvent) => void;
  /** Called with failures that are the program's own fault. */
  readonly onFault: (error: unknown) => void;
}

/** Long work with progress, rate, time left and cancel. */
export class Jobs {
  readonly #options: JobsOptions;
  readonly #jobs = new Map<string, Job>();

  constructor(options: JobsOptions) {
    this.#options = options;
  }

  /** Begins work; its states go out as events. */
  start(what: JobState["what"], work: JobWork): { job: string } {
    const id = this.#options.newId();
    const abort = new AbortController();
    const state: JobState = {
      id,
      what,
      state: "running",
      progress: 0,
      step: "Beginning",
      bytesPerSecond: null,
      secondsLeft: null,
    };
    let settle = () => {};
    const ended = new Promise<void>((resolve) => {
      settle = resolve;
    });
    const job: Job = { state, told: 0, abort, ended };
    this.#jobs.set(id, job);
    this.#tell(job);
    void this.#run(job, work).finally(settle);
    return { job: id };
  }

  states(): readonly JobState[] {
    return [...this.#jobs.values()].map(({ state }) => state);
  }

  /** True while any job runs. */
  get busy(): boolean {
    return [...this.#jobs.values()].some(({ state }) => state.state === "running");
  }

  /** Asks a job to stop; nothing happens when it has ended. @throws not-found */
  cancel(id: string): void {
    const job = this.#jobs.get(id);
    if (!job) throw new TautlineError("not-found", "There is no such job.", { what: "job", id });
    job.abort.abort();
  }

  /** Resolves once no job runs. */
  async idle(): Promise<void> {
    while (this.busy) await Promise.all([...this.#jobs.values()].map(({ ended }) => ended));
  }

  /** Stops all jobs and waits for their ends. */
  async close(): Promise<void> {
    for (const { abort } of this.#jobs.values()) abort.abort();
    await Promise.all([...this.#jobs.values()].map(({ ended }) => ended));
  }

  async #run(job: Job, work: JobWork): Promise<void> {
    const { now, onFault } = this.#options;
    try {
      const result = await work((progress) => {
        if (job.state.state !== "running") return;
        const { step, bytesPerSecond, secondsLeft } = progress;
        job.state = { ...job.state, progress: clamp(progress.progress), step, bytesPerSecond, secondsLeft };
        if (now() - job.told >= TELL_EVERY_MS) this.#tell(job);
      }, job.abort.signal);
      this.#end(job, { state: "done", progress: 1, step: "Done", ...(result ? { result } : {}) });
    } catch (error) {
      if (job.abort.signal.aborted) return this.#end(job, { state: "cancelled", step: "Stopped" });
      if (!isTautlineError(error) || error.tag === "internal") onFault(error);
      const { tag, message } = encodeError(error);
      this.#end(job, { state: "failed", step: "Failed", error: { tag, message } });
    }
  }

  #end(job: Job, last: Partial<JobState>): void {
    job.state = { ...job.state, ...last, bytesPerSecond: null, secondsLeft: null };
    this.#tell(job);
    const ended = [...this.#jobs].filter(([, { state }]) => state.state !== "running");
    for (const [id] of ended.slice(0, Math.max(0, ended.length - KEPT))) this.#jobs.delete(id);
  }

  #tell(job: Job): void {
    job.told = this.#options.now();
    this.#options.emit({ event: "job", job: job.state });
  }
}

function clamp(progress: number): number {
  return Math.min(1, Math.max(0, progress));
}
