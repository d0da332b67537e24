import type { SearchPort } from "#main/http/ports.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Jobs, JobWork } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { SearchStore } from "#main/node/search-store.ts";
import type { Engine } from "#shared/api/engine.ts";
import type { ListedStretch, OverlookedAnswer, OverlookedRequest, SearchRequest } from "#shared/api/overlooked.ts";
import { dismissedStretches, overlookedKey } from "#shared/tracing/overlooked/dismissed.ts";
import type { ExplainingLine } from "#shared/tracing/overlooked/find-stretches.ts";
import { blockCounts, blocksInRegion } from "#shared/tracing/overlooked/search-block.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { TreeDocument } from "#shared/trees/document.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/** The protocol's shortest string, unless it says otherwise. */
export const MINIMUM_MM = 1;
/** Blocks asked of the engine at once: one for each worker that may search. */
const AT_ONCE = 2;

export interface SearchesOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly engine: Engine;
  readonly jobs: Jobs;
  /** UTC milliseconds. */
  readonly now: () => number;
  /** @throws held-elsewhere when this process may not write to the library */
  readonly mayWrite: () => Promise<void>;
}

interface Search {
  readonly store: SearchStore;
  readonly level: PyramidLevel;
  readonly total: number;
  /** The job that searches, and its end. */
  job: { readonly id: string; readonly abort: AbortController } | null;
}

/** Searches of scans for strings, one a scan and polarity, and what they found that no strand explains. */
export class Searches implements SearchPort {
  readonly #options: SearchesOptions;
  readonly #open = new Map<string, Promise<Search>>();

  constructor(options: SearchesOptions) {
    this.#options = options;
  }

  async start(specimen: string, { polarity, region }: SearchRequest): Promise<{ job: string }> {
    const search = await this.#search(specimen, polarity);
    if (search.job) return { job: search.job.id };
    const all = Array.from({ length: search.total }, (_, block) => block);
    const wanted = region ? blocksInRegion(search.level, region.from, region.to) : all;
    const abort = new AbortController();
    const { job } = this.#options.jobs.start("search", this.#work(specimen, polarity, search, wanted, abort.signal));
    search.job = { id: job, abort };
    return { job };
  }

  async overlooked(request: OverlookedRequest): Promise<OverlookedAnswer> {
    const { specimen, pass, polarity, minimumMm = MINIMUM_MM, withDismissed = false } = request;
    const search = await this.#search(specimen, polarity);
    const { document } = await this.#options.library.passes.history(specimen, pass);
    const done = search.store.blocks.size;
    // In the order of their numbers, so that the answer does not depend on the order in which blocks were searched.
    const found = [...search.store.blocks].sort(([a], [b]) => a - b).map(([, points]) => points);
    const lines = explainingLines(document);
    const stretches = await this.#options.engine.stretches({ specimen, polarity, found, lines, minimumMm });
    const dismissed = dismissedStretches(document.dismissals.keys());
    const listed = stretches.map((stretch): ListedStretch => {
      const dismissedBy = dismissed.keyOf(stretch);
      const reason = dismissedBy === null ? null : (document.dismissals.get(dismissedBy)?.reason ?? null);
      return { ...stretch, key: overlookedKey(stretch), dismissedBy, reason };
    });
    return {
      stretches: withDismissed ? listed : listed.filter(({ dismissedBy }) => dismissedBy === null),
      search: { polarity, done, total: search.total, job: search.job?.id ?? null },
    };
  }

  /** Stops a specimen's searches and lets go of their files, before its folder is removed. */
  async forget(specimen: string): Promise<void> {
    for (const [key, opening] of [...this.#open]) {
      if (!key.startsWith(`${specimen} `)) continue;
      this.#open.delete(key);
      const search = await opening.catch(() => null);
      search?.job?.abort.abort();
      await search?.store.close().catch(() => undefined);
    }
  }

  /** Stops all searches; what they found stays. */
  stop(): void {
    for (const opening of this.#open.values())
      void opening.then(
        ({ job }) => job && this.#options.jobs.cancel(job.id),
        () => undefined,
      );
  }

  async close(): Promise<void> {
    for (const opening of this.#open.values()) await (await opening.catch(() => null))?.store.close().catch(() => undefined);
    this.#open.clear();
  }

  #search(specimen: string, polarity: Polarity): Promise<Search> {
    const key = `${specimen} ${polarity}`;
    const known = this.#open.get(key);
    if (known) return known;
    const opened = this.#begin(specimen, polarity);
    this.#open.set(key, opened);
    opened.catch(() => this.#open.delete(key));
    return opened;
  }

  async #begin(specimen: string, polarity: Polarity): Promise<Search> {
    const { library, files, engine } = this.#options;
    const { volume } = await library.specimen(specimen);
    const level = await engine.searchLevel(specimen, polarity);
    const total = blockCounts(level).reduce((product, count) => product * count, 1);
    const store = await SearchStore.open(files, library.layout.specimen(specimen), volume.sha256, polarity, total);
    return { store, level, total, job: null };
  }

  /** Searches the wanted blocks that were not searched yet; a stop waits for those under way and keeps them. */
  #work(specimen: string, polarity: Polarity, search: Search, wanted: readonly number[], removed: AbortSignal): JobWork {
    return async (report, signal) => {
      const { engine, now, mayWrite } = this.#options;
      const began = now();
      const left = wanted.filter((block) => !search.store.blocks.has(block));
      const before = wanted.length - left.length;
      let done = 0;
      let next = 0;
      try {
        await mayWrite();
        const turn = async (): Promise<void> => {
          while (next < left.length && !signal.aborted && !removed.aborted) {
            const block = left[next++]!;
            const points = await engine.searchBlock(specimen, polarity, block);
            if (removed.aborted) return;
            await search.store.add(block, points);
            done += 1;
            const seconds = (now() - began) / 1000;
            report({
              progress: (before + done) / wanted.length,
              step: "Searching for strings",
              bytesPerSecond: null,
              secondsLeft: done > 4 ? Math.round((seconds / done) * (left.length - done)) : null,
            });
          }
        };
        await Promise.all(Array.from({ length: AT_ONCE }, turn));
        if (!removed.aborted) await search.store.sync();
      } finally {
        search.job = null;
        engine.endSearch();
      }
      signal.throwIfAborted();
      return { specimen };
    };
  }
}

/** All traced lines of a pass: its strands and cross-links; those without a curve run from pin to pin. */
export function explainingLines(document: TreeDocument): ExplainingLine[] {
  return [...document.strands.values(), ...document.crossLinks.values()].map(({ curve, from, to, via }) => {
    const traced = curve === null ? undefined : document.curves.get(curve);
    if (traced)
      return { points: Array.from(traced.points), radii: Array.from(traced.radii, (r) => (Number.isFinite(r) ? r : null)) };
    const places = [document.nodes.get(from)!.position, ...via, document.nodes.get(to)!.position];
    return { points: places.flat(), radii: places.map(() => null) };
  });
}
