import { type ReadonlySignal, signal } from "@preact/signals";
import type { Client } from "#renderer/client/client.ts";
import type { ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type { JobState } from "#shared/api/routes.ts";

export type LookClient = Pick<Client, "startProjections" | "projections" | "cancelJob" | "onEvent">;

/** How far a look through a scan is. */
export type LookState =
  | { readonly state: "none" }
  | { readonly state: "running"; readonly progress: number; readonly secondsLeft: number | null }
  | { readonly state: "stopped" }
  | { readonly state: "failed"; readonly message: string }
  | { readonly state: "done"; readonly answer: ProjectionsAnswer };

/** One look through a scan at a time: begun, told how far it is, stopped, its pictures fetched. */
export class LookThrough {
  private readonly shownSignal = signal<LookState>({ state: "none" });
  private readonly stopListening: () => void;
  /** States of looks by job; an end may come before the answer that names the job. */
  private readonly told = new Map<string, JobState>();
  private turn = 0;
  private job: string | null = null;

  constructor(private readonly client: LookClient) {
    this.stopListening = client.onEvent((event) => {
      if (event.event !== "job" || event.job.what !== "look") return;
      this.told.set(event.job.id, event.job);
      if (event.job.id === this.job) this.follow(event.job);
    });
  }

  get shown(): ReadonlySignal<LookState> {
    return this.shownSignal;
  }

  /** Begins a look; one under way is stopped first. */
  async begin(request: ProjectionsRequest): Promise<void> {
    this.leave();
    const turn = ++this.turn;
    this.shownSignal.value = { state: "running", progress: 0, secondsLeft: null };
    try {
      const { job } = await this.client.startProjections(request);
      if (turn !== this.turn) return void this.client.cancelJob(job).catch(() => {});
      this.job = job;
      const early = this.told.get(job);
      if (early) this.follow(early);
    } catch (error) {
      if (turn === this.turn) this.fail(error);
    }
  }

  /** The person does not want to wait for it. */
  stop(): void {
    this.leave();
    this.turn++;
    this.shownSignal.value = { state: "stopped" };
  }

  /** Pictures of another scan, or of another reading of it, say nothing any more. */
  forget(): void {
    this.leave();
    this.turn++;
    this.shownSignal.value = { state: "none" };
  }

  /** The sheet is gone. */
  close(): void {
    this.leave();
    this.turn++;
    this.stopListening();
  }

  private leave(): void {
    const running = this.job;
    this.job = null;
    if (running !== null && this.shownSignal.value.state === "running") this.client.cancelJob(running).catch(() => {});
  }

  private follow(job: JobState): void {
    if (job.state === "running") {
      this.shownSignal.value = { state: "running", progress: job.progress, secondsLeft: job.secondsLeft };
    } else if (job.state === "failed") {
      this.shownSignal.value = { state: "failed", message: job.error?.message ?? "The look failed." };
    } else if (job.state === "cancelled") this.shownSignal.value = { state: "stopped" };
    else void this.take(job.id);
  }

  private async take(job: string): Promise<void> {
    const turn = this.turn;
    try {
      const answer = await this.client.projections(job);
      if (turn === this.turn) this.shownSignal.value = { state: "done", answer };
    } catch (error) {
      if (turn === this.turn) this.fail(error);
    }
  }

  private fail(error: unknown): void {
    this.shownSignal.value = { state: "failed", message: error instanceof Error ? error.message : String(error) };
  }
}
