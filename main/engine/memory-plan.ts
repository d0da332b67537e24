import { TautlineError } from "#shared/errors.ts";

/** MB here are 2^20 bytes. */
const MB = 2 ** 20;
/** The engine's limit when nothing is set. */
export const DEFAULT_MEMORY_MB = 512;
/** With less there is no room for what a solve and the program itself take. */
export const LEAST_MEMORY_MB = 448;
export const MOST_MEMORY_MB = 65_536;

/** What is not the engine's to choose: the program's code and heap with answers under way, and those of each thread. */
const PROGRAM_BYTES = 70 * MB;
const THREAD_BYTES = 16 * MB;
/** What a search of the scan keeps in each thread but the guide's. */
const SEARCH_BYTES = 20 * MB;
/** A solve's boxes: what it needs follows from its pins, never from a setting, so that the same pins give the same curve. */
const SOLVE_BYTES = 120 * MB;

/** Threads that are started by themselves: one to guide, one to solve, two to show. More would take memory and bring little. */
export const MOST_THREADS = 4;

/** How a limit is shared out, bytes. */
export interface MemoryPlan {
  /** Bricks, kept by all threads together. */
  readonly bricks: number;
  /** Ridge tiles, kept by all threads together. */
  readonly ridges: number;
  /** Ridge tiles and grey values of each thread that guides or solves. */
  readonly ownRidges: number;
  /** Fronts of the guide. */
  readonly fronts: number;
}

/** Shares of what may be kept. */
const BRICKS = 0.3;
const RIDGES = 0.12;
const OWN_RIDGES = 0.18;
const FRONTS = 0.4;

/**
 * Shares a limit on the whole resident memory of the program (while nothing is being taken in) among what the engine keeps.
 * @param limitBytes at least {@link LEAST_MEMORY_MB}. @param threads at most {@link MOST_THREADS}.
 * @param tracing threads that guide or solve.
 */
export function planMemory(limitBytes: number, threads: number, tracing: number): MemoryPlan {
  const taken = PROGRAM_BYTES + threads * THREAD_BYTES + (threads - 1) * SEARCH_BYTES + SOLVE_BYTES;
  return shareOut(limitBytes - taken, tracing);
}

/** Shares out what may be kept, without the rest of the program. */
export function shareOut(keptBytes: number, tracing: number): MemoryPlan {
  return {
    bricks: BRICKS * keptBytes,
    ridges: RIDGES * keptBytes,
    ownRidges: (OWN_RIDGES * keptBytes) / tracing,
    fronts: FRONTS * keptBytes,
  };
}

/**
 * The engine's limit, bytes: the one given, else `TAUTLINE_MEMORY`, else {@link DEFAULT_MEMORY_MB}; both are whole MB.
 * @throws misuse
 */
export function memoryLimit(given: string | undefined, env: Readonly<Record<string, string | undefined>>): number {
  const text = given ?? env.TAUTLINE_MEMORY;
  if (text === undefined || text === "") return DEFAULT_MEMORY_MB * MB;
  const limit = /^\d{1,6}$/.test(text) ? Number(text) : Number.NaN;
  if (limit >= LEAST_MEMORY_MB && limit <= MOST_MEMORY_MB) return limit * MB;
  const name = given === undefined ? "TAUTLINE_MEMORY" : "--memory";
  const what = `${name} must be a whole number of MB from ${LEAST_MEMORY_MB} to ${MOST_MEMORY_MB}, found '${text}'.`;
  throw new TautlineError("misuse", what, { what });
}
