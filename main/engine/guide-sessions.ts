import { performance } from "node:perf_hooks";
import type { GuideRef } from "#main/engine/tasks.ts";
import type { TraceContexts } from "#main/engine/trace-contexts.ts";
import type { GuidePreviewAnswer } from "#shared/api/engine.ts";
import { isTautlineError } from "#shared/errors.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { type GuideFronts, growGuideFronts, isAwaited, openGuideFronts } from "#shared/tracing/guide/guide-fronts.ts";
import { previewGuide } from "#shared/tracing/guide/guide-preview.ts";
import { type StopSignal, stoppable } from "#shared/tracing/stop-switch.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** How long a preview may wait for each front, finest first; together well under what feels slow. */
const PATIENCE_MS = [25, 40, 40];
/** How long fronts grow between two looks for messages. */
const SLICE_MS = 6;

interface Session {
  readonly guide: GuideFronts;
  readonly store: number;
  growing: boolean;
}

/**
 * The guide session of a worker. Only the session used last keeps its fronts, since they take the worker's whole share of
 * memory; another one that is used again grows anew from its pin.
 */
export class GuideSessions {
  readonly #contexts: TraceContexts;
  readonly #bytes: number;
  #name = "";
  #session: Session | null = null;

  constructor(contexts: TraceContexts, bytes: number) {
    this.#contexts = contexts;
    this.#bytes = bytes;
  }

  /** True while fronts can grow between messages. */
  get growing(): boolean {
    return this.#session?.growing ?? false;
  }

  /** True while the pointer waits for what grows. */
  get awaited(): boolean {
    return this.#session !== null && isAwaited(this.#session.guide);
  }

  open(store: number, pyramid: VoxelPyramid, ref: GuideRef, signal: StopSignal): Session {
    if (this.#session && this.#name === ref.session) return this.#session;
    // Let go before the next fronts are made, so that both are not held at once.
    this.#session = null;
    const context = this.#contexts.of(store, pyramid, ref.parameters.polarity);
    const open = () => openGuideFronts(context, ref.from, this.#bytes, ref.impassable);
    this.#session = { guide: stoppable(context.stop, signal, open), store, growing: true };
    this.#name = ref.session;
    return this.#session;
  }

  preview(store: number, pyramid: VoxelPyramid, ref: GuideRef, to: PointMm, signal: StopSignal): GuidePreviewAnswer {
    const { guide } = this.open(store, pyramid, ref, signal);
    const until: number[] = [];
    const isLate = (front: number) => {
      until[front] ??= performance.now() + (PATIENCE_MS[front] ?? 0);
      return signal.aborted || performance.now() > until[front]!;
    };
    return stoppable(guide.context.stop, signal, () => previewGuide(guide, to, isLate));
  }

  /** Lets go of the fronts' memory; they grow anew when the session is used again. */
  rest(): void {
    this.#session = null;
  }

  /** Lets the fronts grow for some milliseconds, or until `signal`. */
  grow(signal: StopSignal): void {
    const session = this.#session;
    if (!session?.growing) return;
    const until = performance.now() + SLICE_MS;
    // A fault stops the growth; the next preview meets it again and reports it to the person who asked.
    session.growing = false;
    const isOver = () => signal.aborted || performance.now() > until;
    try {
      session.growing = stoppable(session.guide.context.stop, signal, () => growGuideFronts(session.guide, isOver));
    } catch (error) {
      // Called away in the middle of a ridge tile: it grows on later.
      session.growing = isTautlineError(error, "cancelled");
      if (!session.growing) throw error;
    }
  }

  close(session: string): void {
    if (this.#name === session) this.#session = null;
  }

  forget(store: number): void {
    if (this.#session?.store === store) this.#session = null;
  }
}
