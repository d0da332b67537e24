import { randomUUID } from "node:crypto";
import { availableParallelism } from "node:os";
import { type CacheFigures, createCacheMemory, MOST_WORKERS } from "#main/engine/brick-cache.ts";
import { Calls } from "#main/engine/calls.ts";
import {
  checkFilm,
  checkImpassable,
  checkInScan,
  checkParameters,
  checkPoint,
  checkSection,
  checkSnap,
  checkSolve,
  checkStrip,
  checkTicket,
  checkTraced,
  checkWhole,
} from "#main/engine/check-request.ts";
import { ended } from "#main/engine/follow-sessions.ts";
import { DEFAULT_MEMORY_MB, MOST_THREADS, planMemory, shareOut } from "#main/engine/memory-plan.ts";
import { createRidgeMemory } from "#main/engine/ridge-store.ts";
import type { EngineTasks, FollowRef, GuideRef, StoreRef, TaskKind } from "#main/engine/tasks.ts";
import { WorkerPool } from "#main/engine/worker-pool.ts";
import type { Engine, HistogramAnswer, Ticket } from "#shared/api/engine.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { TautlineError } from "#shared/errors.ts";

/** What the engine needs to know of a specimen. */
export type OpenedRecord = Pick<SpecimenRecord, "volume" | "polarity">;

export interface EngineOptions {
  /** Folder and record of a specimen. @throws not-found */
  readonly library: (specimen: string) => Promise<{ readonly folder: string; readonly record: OpenedRecord }>;
  /** The built worker, `engine-worker.mjs`. */
  readonly workerUrl: URL;
  /** Most resident memory of the whole program while nothing is being taken in; 512 MB when not given. See `memory-plan.ts`. */
  readonly memoryBytes?: number;
  /** For tests: most memory for bricks, ridge tiles and fronts together, instead of what `memoryBytes` leaves for them. */
  readonly cacheBytes?: number;
  /** Threads; as many as there are cores when not given, and then three or four; two are the least. */
  readonly workers?: number;
}

/** The engine of this process. */
export interface LocalEngine extends Engine {
  /** Lets go of a specimen's files and sessions, before its folder is removed or made anew. */
  forget(specimen: string): Promise<void>;
  /** For reports and tests: the cache, and what is queued or running now. */
  figures(): Promise<CacheFigures & { readonly waiting: number; readonly running: number }>;
  /** Ends a worker where it stands; it is started again. For tests. */
  kill(worker: number): Promise<void>;
}

/** One to guide, one to solve, one to show. */
const LEAST_THREADS = 3;
/** A guide session ends when nobody asked it for anything this long. */
const IDLE_MS = 120_000;
const MOST_SESSIONS = 64;

interface OpenSession {
  readonly ref: GuideRef;
  readonly specimen: string;
  used: number;
}

interface OpenRun {
  readonly specimen: string;
  readonly window: string;
  used: number;
}

/**
 * Starts the engine: worker threads over one brick cache.
 *
 * Supersession: requests of one window, one lane *and one kind* (section, strip, snap, preview ...) form a line, whose numbers
 * count up. A newer one drops the older ones that are not answered yet, at once and with `superseded`; one that comes after a
 * newer one still under way is dropped itself. Kinds do not drop each other, so that a window may count each of them by
 * itself. In the lane `job` nothing is ever dropped.
 *
 * Workers: with two, one traces (guides, snapping, solving, surfaces, histograms) and one shows (sections, strips, films,
 * values). With more, solving, surfaces and histograms have one to themselves, and the others show. Three are started on two
 * cores as well: a solve of a second or more must not stop the guide, and the system shares the cores fairly.
 */
export function createEngine(options: EngineOptions): LocalEngine {
  const usual = Math.min(Math.max(availableParallelism(), LEAST_THREADS), MOST_THREADS);
  const workers = Math.min(Math.max(options.workers ?? usual, 2), MOST_WORKERS);
  const alone = workers > 2;
  const tracing = alone ? 2 : 1;
  const limit = options.memoryBytes ?? DEFAULT_MEMORY_MB * 2 ** 20;
  const plan = options.cacheBytes === undefined ? planMemory(limit, workers, tracing) : shareOut(options.cacheBytes, tracing);
  const memory = createCacheMemory(plan.bricks, workers);
  const calls = Calls.forWorkers(workers);
  const guide = [0];
  const job = [tracing - 1];
  const show = Array.from({ length: workers - tracing }, (_, n) => n + tracing);
  // Alone, a thread needs no store to share its tiles through.
  const ridges = alone ? createRidgeMemory(plan.ridges, workers) : null;
  const ownRidges = plan.ownRidges + (ridges ? 0 : plan.ridges / tracing);
  const pool = new WorkerPool(options.workerUrl, workers, calls, (worker) => ({
    worker,
    memory,
    ridges,
    calls: calls.memory,
    ridgeBytes: worker < tracing ? ownRidges : 0,
    frontBytes: worker === 0 ? plan.fronts : 0,
  }));

  const stores = new Map<string, Promise<StoreRef>>();
  const histograms = new Map<string, Promise<HistogramAnswer>>();
  const sessions = new Map<string, OpenSession>();
  const runs = new Map<string, OpenRun>();
  let storeNumbers = 0;

  const sweep = setInterval(() => {
    for (const [session, { used }] of sessions) if (performance.now() - used > IDLE_MS) endSession(session);
    for (const [session, { used }] of runs) if (performance.now() - used > IDLE_MS) endRun(session);
  }, IDLE_MS / 4);
  sweep.unref();

  /** A specimen's store; known ones are answered without asking the library again. */
  function storeOf(specimen: string): Promise<StoreRef> {
    const known = stores.get(specimen);
    if (known) return known;
    const opened = options.library(specimen).then(({ folder, record }): StoreRef => {
      storeNumbers++;
      return { number: storeNumbers, folder, volume: record.volume, polarity: record.polarity };
    });
    stores.set(specimen, opened);
    opened.catch(() => stores.delete(specimen));
    return opened;
  }

  async function onLine<K extends TaskKind>(
    kind: K,
    able: readonly number[],
    ticket: Ticket,
    specimen: string,
    input: EngineTasks[K]["input"],
    check?: (store: StoreRef) => void,
  ): Promise<EngineTasks[K]["answer"]> {
    const store = await storeOf(specimen);
    check?.(store);
    const { window, lane, number } = ticket;
    const line = lane === "job" ? {} : { line: `${window} ${lane} ${kind}`, lane, number };
    return pool.run(kind, store, input, { workers: able, ...line });
  }

  function endSession(session: string): void {
    if (sessions.delete(session)) pool.tell({ type: "close-guide", session }, guide[0]);
  }

  function endRun(session: string): void {
    if (runs.delete(session)) pool.tell({ type: "close-follow", session }, job[0]);
  }

  function sessionOf(name: string): OpenSession {
    const session = sessions.get(name);
    if (session) {
      session.used = performance.now();
      return session;
    }
    throw new TautlineError("not-found", `The guide session ${name} is not open any more. Set out from the last pin again.`, {
      what: "guide session",
      id: name,
    });
  }

  return {
    async section(request) {
      checkSection(request);
      return onLine("section", show, request.ticket, request.specimen, request);
    },
    async strip(request) {
      checkStrip(request);
      return onLine("strip", show, request.ticket, request.specimen, request);
    },
    async film(request) {
      checkFilm(request);
      return onLine("film", show, request.ticket, request.specimen, request);
    },
    async surface(request) {
      checkTicket(request.ticket);
      checkWhole("limit", request.limit, 1, 2_000_000);
      checkParameters({ polarity: request.polarity, blurFwhmMm: null });
      return onLine("surface", job, request.ticket, request.specimen, request);
    },
    async value(specimen, at) {
      checkPoint("at", at);
      return pool.run("value", await storeOf(specimen), at, { workers: show, urgent: true });
    },
    async histogram(specimen) {
      const known = histograms.get(specimen);
      if (known) return known;
      const made = storeOf(specimen).then((store) => {
        const answer = pool.run("histogram", store, null, { workers: job });
        // Who asks for the histogram opens a desk, and will trace: the tracing workers get ready. Faults show when they are asked.
        pool.run("warm", store, { backwards: false }, { workers: guide }).catch(() => {});
        if (ridges) pool.run("warm", store, { backwards: true }, { workers: job }).catch(() => {});
        return answer;
      });
      histograms.set(specimen, made);
      made.catch(() => histograms.delete(specimen));
      return made;
    },
    async snap(request) {
      checkSnap(request);
      checkParameters({ polarity: request.polarity, blurFwhmMm: null });
      return onLine("snap", guide, request.ticket, request.specimen, request);
    },
    async openGuide({ ticket, specimen, from, parameters, impassable = [] }) {
      checkTicket(ticket);
      checkParameters(parameters);
      const store = await storeOf(specimen);
      checkInScan("from", from, store.volume);
      checkImpassable(impassable);
      if (sessions.size >= MOST_SESSIONS) endSession(sessions.keys().next().value!);
      const ref: GuideRef = { session: randomUUID(), from, parameters, impassable };
      sessions.set(ref.session, { ref, specimen, used: performance.now() });
      // Not waited for: the session is made while its first preview is on its way, which meets the same fault if there is one.
      pool.run("open-guide", store, ref, { workers: guide }).catch(() => {});
      return { session: ref.session };
    },
    async previewGuide({ ticket, session, to }) {
      checkTicket(ticket);
      checkPoint("to", to);
      const { ref, specimen } = sessionOf(session);
      return onLine("preview-guide", guide, ticket, specimen, { guide: ref, to });
    },
    async closeGuide(session) {
      endSession(session);
    },
    async solve(request) {
      checkTicket(request.ticket);
      return onLine("solve", job, request.ticket, request.specimen, request, ({ volume }) => checkSolve(request, volume));
    },
    async openFollow({ ticket, specimen, at, parameters, traced = [] }) {
      checkTicket(ticket);
      checkParameters(parameters);
      checkTraced(traced);
      const store = await storeOf(specimen);
      checkInScan("at", at, store.volume);
      // A newer run of a window takes the place of its older one.
      for (const [session, run] of runs) if (run.window === ticket.window) endRun(session);
      const ref: FollowRef = { session: randomUUID(), at, parameters, traced };
      runs.set(ref.session, { specimen, window: ticket.window, used: performance.now() });
      await pool.run("open-follow", store, ref, { workers: job });
      return { session: ref.session };
    },
    async moreFollow({ ticket, session }) {
      checkTicket(ticket);
      const run = runs.get(session);
      if (!run) throw ended(session);
      run.used = performance.now();
      try {
        const answer = await pool.run("more-follow", await storeOf(run.specimen), { session }, { workers: job });
        if (answer.done) runs.delete(session);
        return answer;
      } catch (error) {
        runs.delete(session);
        throw error;
      }
    },
    async closeFollow(session) {
      endRun(session);
    },
    async searchLevel(specimen, polarity) {
      checkParameters({ polarity, blurFwhmMm: null });
      return pool.run("search-level", await storeOf(specimen), polarity, { workers: job });
    },
    async searchBlock(specimen, polarity, block) {
      checkWhole("block", block, 0, Number.MAX_SAFE_INTEGER);
      const input = { polarity, block };
      // Guides keep their worker; the others search when nobody else wants them.
      const order = { workers: alone ? [job[0]!, ...show] : job, background: true };
      return pool.run("search-block", await storeOf(specimen), input, order);
    },
    async stretches({ specimen, polarity, found, lines, minimumMm }) {
      return pool.run("stretches", await storeOf(specimen), { polarity, found, lines, minimumMm }, { workers: job });
    },
    endSearch() {
      pool.tell({ type: "end-search" });
    },
    async forget(specimen) {
      const opened = stores.get(specimen);
      stores.delete(specimen);
      histograms.delete(specimen);
      for (const [name, session] of sessions) if (session.specimen === specimen) endSession(name);
      for (const [name, run] of runs) if (run.specimen === specimen) endRun(name);
      if (!opened) return;
      const store = await opened;
      await Promise.all(Array.from({ length: workers }, (_, worker) => pool.run("forget", store, null, { workers: [worker] })));
    },
    async figures() {
      const cache = await pool.run("figures", null, null, { workers: show, urgent: true });
      return { ...cache, waiting: pool.load.waiting, running: pool.load.running };
    },
    load: () => pool.load,
    kill: (worker) => pool.kill(worker),
    async close() {
      clearInterval(sweep);
      sessions.clear();
      runs.clear();
      await pool.close();
    },
  };
}
