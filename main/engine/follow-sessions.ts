import { performance } from "node:perf_hooks";
import type { FollowRef } from "#main/engine/tasks.ts";
import type { TraceContexts } from "#main/engine/trace-contexts.ts";
import type { FollowAnswer } from "#shared/api/follow.ts";
import { TautlineError } from "#shared/errors.ts";
import { type FollowGrowth, followString } from "#shared/tracing/follow/follow-string.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import { arcLengths } from "#shared/tracing/polyline.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** How long one request lets a run go on: short enough to be seen growing and to make way for a solve. */
const SLICE_MS = 120;
/** Runs kept at once: one each of two windows. */
const MOST_RUNS = 2;

interface Run {
  readonly steps: Generator<FollowGrowth, FollowProposal | null>;
  readonly store: number;
  readonly signal: { aborted: boolean };
}

/** The follow sessions of a worker: runs that go on for a moment whenever they are asked for. */
export class FollowSessions {
  readonly #contexts: TraceContexts;
  readonly #runs = new Map<string, Run>();

  constructor(contexts: TraceContexts) {
    this.#contexts = contexts;
  }

  open(store: number, pyramid: VoxelPyramid, { session, at, parameters, traced }: FollowRef): void {
    const context = this.#contexts.of(store, pyramid, parameters.polarity);
    const signal = { aborted: false };
    this.#runs.set(session, { steps: followString(pyramid, context, parameters, at, { traced, signal }), store, signal });
    for (const oldest of [...this.#runs.keys()].slice(0, Math.max(0, this.#runs.size - MOST_RUNS))) this.close(oldest);
  }

  /** Lets a run go on for a moment, or until `stop`; its end closes it. @throws not-found */
  more(session: string, stop: { readonly aborted: boolean }): FollowAnswer {
    const run = this.#runs.get(session);
    if (!run) throw ended(session);
    const until = performance.now() + SLICE_MS;
    try {
      for (;;) {
        const step = run.steps.next();
        if (step.done) {
          this.#runs.delete(session);
          const growing = step.value?.strands.map(({ points }) => points) ?? [];
          return { done: true, growing, lengthMm: step.value?.lengthMm ?? 0, proposal: step.value };
        }
        if (!stop.aborted && performance.now() < until) continue;
        const growing = step.value.lines();
        const lengthMm = growing.reduce((sum, flat) => sum + (arcLengths(Float64Array.from(flat)).at(-1) ?? 0), 0);
        return { done: false, growing, lengthMm, proposal: null };
      }
    } catch (error) {
      this.#runs.delete(session);
      throw error;
    }
  }

  close(session: string): void {
    const run = this.#runs.get(session);
    if (!run) return;
    run.signal.aborted = true;
    this.#runs.delete(session);
  }

  forget(store: number): void {
    for (const [session, run] of this.#runs) if (run.store === store) this.close(session);
  }
}

/** What a window hears that asks for a run which has ended, or made way for a newer one. */
export function ended(session: string): TautlineError<"not-found"> {
  return new TautlineError("not-found", "This run along a string is over. Click the string again.", {
    what: "follow session",
    id: session,
  });
}
