import type { LeftWaiting } from "#renderer/editor/editor.ts";
import { NOTHING } from "#renderer/editor/tracing/under-way.ts";

const keyOf = (pass: string) => `tautline-waiting-${pass}`;

/** Nothing waits. */
export const NOTHING_LEFT: LeftWaiting = { underWay: NOTHING, waiting: [] };

/**
 * Keeps what waits until it is carried out: over a reload, and for the page of the program's next run. Trees being taken in are
 * left out: their file is still there.
 */
export function keepWaiting(pass: string, left: LeftWaiting): void {
  const waiting = left.waiting.filter((intent) => intent.do !== "take-in");
  if (waiting.length === 0) localStorage.removeItem(keyOf(pass));
  else localStorage.setItem(keyOf(pass), JSON.stringify({ underWay: left.underWay, waiting }));
}

/** What an earlier page left waiting; nothing when it cannot be read. */
export function leftWaiting(pass: string): LeftWaiting {
  try {
    const value = JSON.parse(localStorage.getItem(keyOf(pass)) ?? "null") as LeftWaiting | null;
    return value !== null && Array.isArray(value.waiting) && typeof value.underWay?.kind === "string" ? value : NOTHING_LEFT;
  } catch {
    return NOTHING_LEFT;
  }
}
