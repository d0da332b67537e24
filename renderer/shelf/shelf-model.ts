import { type ReadonlySignal, signal } from "@preact/signals";
import type { Client } from "#renderer/client/client.ts";
import type { JobState, ShelfAnswer } from "#shared/api/routes.ts";
import type { StudiesAnswer } from "#shared/api/study.ts";

/** Where the shelf's messages go. */
export interface ShelfMessages {
  failed(error: unknown): void;
  news(text: string): void;
}

/** What the shelf asks of the server. */
export type ShelfClient = Pick<Client, "shelf" | "onEvent" | "openDemo" | "openDemoStudy" | "cancelJob"> & {
  readonly studies: Pick<Client["studies"], "all">;
};

/** The shelf's contents and running jobs, kept up to date by the server's events. */
export class ShelfModel {
  private readonly answerSignal = signal<ShelfAnswer | null>(null);
  private readonly studiesSignal = signal<StudiesAnswer | null>(null);
  private readonly failureSignal = signal<string | null>(null);
  private readonly jobsSignal = signal<readonly JobState[]>([]);
  /** The specimen that a finished job made last; its row is shown first to the person. */
  private readonly madeSignal = signal<string | null>(null);
  /** The study that a finished job made last; the shelf goes there when it is looked at. */
  private readonly madeStudySignal = signal<string | null>(null);
  private readonly putAway = new Set<string>();
  /** Jobs that this page began or saw running: only their ends are news. */
  private readonly seenRunning = new Set<string>();
  private loading = false;
  private again = false;

  constructor(
    private readonly client: ShelfClient,
    private readonly messages: ShelfMessages,
  ) {}

  get answer(): ReadonlySignal<ShelfAnswer | null> {
    return this.answerSignal;
  }
  /** Studies that this library leads, and assignments that it has taken in. */
  get studies(): ReadonlySignal<StudiesAnswer | null> {
    return this.studiesSignal;
  }
  /** Why the shelf could not be read; null while it could. */
  get failure(): ReadonlySignal<string | null> {
    return this.failureSignal;
  }
  /** Jobs under way, and failed ones until they are put away. */
  get jobs(): ReadonlySignal<readonly JobState[]> {
    return this.jobsSignal;
  }
  get made(): ReadonlySignal<string | null> {
    return this.madeSignal;
  }

  get madeStudy(): ReadonlySignal<string | null> {
    return this.madeStudySignal;
  }

  /** Loads, and follows the events; the returned function stops. */
  start(): () => void {
    void this.load();
    return this.client.onEvent((event) => {
      if (event.event === "shelf" || event.event === "studies") void this.load();
      else if (event.event === "job") this.take(event.job);
    });
  }

  /** The person has gone on: what was made last is no news any more. */
  forgetMade(): void {
    this.madeSignal.value = null;
    this.madeStudySignal.value = null;
  }

  /** Reads the shelf again; a call while one is under way makes one more afterwards. */
  async load(): Promise<void> {
    if (this.loading) {
      this.again = true;
      return;
    }
    this.loading = true;
    try {
      const [answer, studies] = await Promise.all([this.client.shelf(), this.client.studies.all()]);
      this.answerSignal.value = answer;
      this.studiesSignal.value = studies;
      this.failureSignal.value = null;
    } catch (error) {
      this.failureSignal.value = error instanceof Error ? error.message : String(error);
    } finally {
      this.loading = false;
    }
    if (!this.again) return;
    this.again = false;
    await this.load();
  }

  async openDemo(): Promise<void> {
    try {
      const { job } = await this.client.openDemo();
      this.begun(job);
    } catch (error) {
      this.messages.failed(error);
    }
  }

  async openDemoStudy(): Promise<void> {
    try {
      const { job } = await this.client.openDemoStudy();
      this.begun(job);
    } catch (error) {
      this.messages.failed(error);
    }
  }

  /** A job that this page began; its end is shown even when its events come before this call. */
  begun(job: string): void {
    this.seenRunning.add(job);
    const early = this.jobsSignal.value.find(({ id }) => id === job);
    if (early !== undefined && early.state !== "running") this.take(early);
  }

  async cancel(job: string): Promise<void> {
    try {
      await this.client.cancelJob(job);
    } catch (error) {
      this.messages.failed(error);
    }
  }

  dismiss(job: string): void {
    this.putAway.add(job);
    this.jobsSignal.value = this.jobsSignal.value.filter(({ id }) => id !== job);
  }

  private take(job: JobState): void {
    // A look is told in the sheet that asked for it.
    if (job.what === "export" || job.what === "look" || this.putAway.has(job.id)) return;
    const others = this.jobsSignal.value.filter(({ id }) => id !== job.id);
    const ours = this.seenRunning.has(job.id);
    if (job.state === "running") this.seenRunning.add(job.id);
    else if (ours && job.state === "done") {
      this.madeSignal.value = job.result?.specimen ?? null;
      this.madeStudySignal.value = job.result?.study ?? null;
      void this.load();
    } else if (ours && job.state === "cancelled") {
      this.messages.news("Stopped. Nothing of it is left in the library.");
    }
    // A finished job of which this page knows nothing is kept: `begun` may come a moment later.
    const keep = job.state === "running" || job.state === "failed" || !ours;
    this.jobsSignal.value = keep ? [...others, job] : others;
  }
}
