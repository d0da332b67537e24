import type { LogRecord } from "#shared/log/records.ts";

/**
 * A gap between two records of a session that is longer than this counts as absence, not as work. Two minutes: long enough
 * to look for the next string, short enough not to count a coffee. Common practice, no source.
 */
export const IDLE_THRESHOLD_MS = 120_000;

/** Time at work so far, and the last record's place on the session's clock. */
export interface Effort {
  readonly workMs: number;
  readonly sessions: number;
  readonly last: { readonly session: string; readonly mono: number; readonly away: boolean } | null;
}

/** Before the first record. */
export const NO_EFFORT: Effort = { workMs: 0, sessions: 0, last: null };

/**
 * Effort after one more record: the time since the last record of the same session counts as work, by the session's own
 * monotonic clock, unless it is longer than {@link IDLE_THRESHOLD_MS} or the last record said idle or closed.
 */
export function effortAfter(effort: Effort, record: LogRecord): Effort {
  const { last } = effort;
  const away = record.kind === "session" && record.body.state !== "opened";
  const next = { session: record.session, mono: record.mono, away };
  if (!last || last.session !== record.session) return { workMs: effort.workMs, sessions: effort.sessions + 1, last: next };
  const gap = record.mono - last.mono;
  const counts = !last.away && gap > 0 && gap <= IDLE_THRESHOLD_MS;
  return { workMs: effort.workMs + (counts ? gap : 0), sessions: effort.sessions, last: next };
}

/** Time at work over a whole log, milliseconds. */
export function workMsOf(records: Iterable<LogRecord>): number {
  let effort = NO_EFFORT;
  for (const record of records) effort = effortAfter(effort, record);
  return effort.workMs;
}
