import type { BrickCache } from "#main/engine/brick-cache.ts";
import { type CachedPyramid, cachedPyramid } from "#main/engine/cached-pyramid.ts";
import { FollowSessions } from "#main/engine/follow-sessions.ts";
import { GuideSessions } from "#main/engine/guide-sessions.ts";
import { PlanesAhead } from "#main/engine/planes-ahead.ts";
import type { RidgeStore } from "#main/engine/ridge-store.ts";
import { RidgesAhead } from "#main/engine/ridges-ahead.ts";
import { Searches } from "#main/engine/searches.ts";
import type { EngineTasks, StoreRef, TaskKind } from "#main/engine/tasks.ts";
import { TraceContexts } from "#main/engine/trace-contexts.ts";
import type { SolvedCurve } from "#shared/api/engine.ts";
import { TautlineError } from "#shared/errors.ts";
import { snap } from "#shared/tracing/guide/snap.ts";
import { searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import { stoppable } from "#shared/tracing/stop-switch.ts";
import type { TracedCurve } from "#shared/tracing/strand-request.ts";
import { scanHistogram } from "#shared/volume/scan-histogram.ts";
import { section } from "#shared/volume/section.ts";
import { film, strip } from "#shared/volume/strip.ts";
import { surfacePoints } from "#shared/volume/surface-points.ts";
import { valueAt } from "#shared/volume/value-at.ts";

/** Bins of the histogram that is shown. */
const BINS = 256;

type Signal = { readonly aborted: boolean };
type Input<K extends TaskKind> = EngineTasks[K]["input"];

/** A worker's bench: its open stores and sessions, and what it does for each kind of task. */
export class TaskRunner {
  readonly #cache: BrickCache;
  readonly #stores = new Map<number, CachedPyramid>();
  readonly #contexts: TraceContexts;
  readonly guides: GuideSessions;
  readonly follows: FollowSessions;
  readonly searches = new Searches();
  readonly planes = new PlanesAhead();
  readonly ridges = new RidgesAhead();

  constructor(cache: BrickCache, ridges: RidgeStore | null, ridgeBytes: number, frontBytes: number) {
    this.#cache = cache;
    this.#contexts = new TraceContexts(ridgeBytes, ridges);
    this.guides = new GuideSessions(this.#contexts, frontBytes);
    this.follows = new FollowSessions(this.#contexts);
  }

  run(kind: TaskKind, store: StoreRef | null, input: unknown, signal: Signal): EngineTasks[TaskKind]["answer"] {
    if (kind === "figures") return this.#cache.figures();
    if (store === null) throw new TautlineError("internal", "A task came without its scan.", { what: `${kind} without store` });
    if (kind === "forget") return this.#forget(store.number);
    const pyramid = this.#pyramid(store);
    switch (kind) {
      case "section": {
        const shown = section(pyramid, input as Input<"section">, signal);
        this.planes.shown(pyramid, store.number, input as Input<"section">);
        return shown;
      }
      case "strip":
        return strip(pyramid, input as Input<"strip">, signal);
      case "film":
        return film(pyramid, input as Input<"film">, signal);
      case "surface":
        return surfacePoints(pyramid, input as Input<"surface">, signal);
      case "value":
        return valueAt(pyramid, input as Input<"value">);
      case "histogram":
        return scanHistogram(pyramid, store.volume.range, BINS, signal);
      case "snap": {
        const request = input as Input<"snap">;
        const context = this.#contexts.of(store.number, pyramid, request.polarity);
        const found = stoppable(context.stop, signal, () => snap(context, request, signal));
        this.ridges.around(context, request.at);
        return found;
      }
      case "solve": {
        const { strands, parameters } = input as Input<"solve">;
        // Solving needs fronts of its own; both at once would not fit the limit.
        this.guides.rest();
        const context = this.#contexts.of(store.number, pyramid, parameters.polarity);
        return { curves: strands.map((strand) => curveOf(solveStrand(pyramid, strand, parameters, signal, context))) };
      }
      case "open-follow":
        this.follows.open(store.number, pyramid, input as Input<"open-follow">);
        return null;
      case "more-follow":
        // Its strands are solved with fronts of their own; both at once would not fit the limit.
        this.guides.rest();
        return this.follows.more((input as Input<"more-follow">).session, signal);
      case "search-level": {
        const { pyramid: searched } = this.searches.context(store.number, pyramid, input as Input<"search-level">);
        return searched.levels[searchLevel(searched)]!;
      }
      case "search-block": {
        const { polarity, block } = input as Input<"search-block">;
        return this.searches.block(store.number, pyramid, polarity, block, signal);
      }
      case "stretches": {
        const { polarity, found, lines, minimumMm } = input as Input<"stretches">;
        return this.searches.stretches(store.number, pyramid, polarity, found, lines, minimumMm);
      }
      case "warm":
        this.ridges.warm(this.#contexts.of(store.number, pyramid, store.polarity), (input as Input<"warm">).backwards);
        return null;
      case "open-guide":
        this.guides.open(store.number, pyramid, input as Input<"open-guide">, signal);
        return null;
      case "preview-guide": {
        const { guide, to } = input as Input<"preview-guide">;
        return this.guides.preview(store.number, pyramid, guide, to, signal);
      }
    }
  }

  /** Closes a store's files and drops what was made of it. */
  #forget(store: number): null {
    this.guides.forget(store);
    this.follows.forget(store);
    this.searches.rest();
    this.planes.forget();
    this.ridges.forget();
    this.#contexts.forget(store);
    this.#stores.get(store)?.close();
    this.#stores.delete(store);
    return null;
  }

  #pyramid(store: StoreRef): CachedPyramid {
    let pyramid = this.#stores.get(store.number);
    if (!pyramid) {
      pyramid = cachedPyramid(this.#cache, store.folder, store.volume, store.number);
      this.#stores.set(store.number, pyramid);
    }
    return pyramid;
  }
}

function curveOf(curve: TracedCurve): SolvedCurve {
  return {
    points: Array.from(curve.points),
    radii: Array.from(curve.radii, (radius) => (Number.isNaN(radius) ? null : radius)),
    madeBy: curve.madeBy,
    imageFit: curve.imageFit,
    followed: curve.followed,
  };
}
