import type { Intent } from "#renderer/editor/session/intent.ts";

const keyOf = (pass: string) => `tautline-waiting-${pass}`;

/**
 * Keeps what waits until it is carried out: over a reload, and for the page of the program's next run. Trees being taken in are
 * left out: their file is still there.
 */
export function keepWaiting(pass: string, waiting: readonly Intent[]): void {
  const plain = waiting.filter((intent) => intent.do !== "take-in");
  if (plain.length === 0) localStorage.removeItem(keyOf(pass));
  else localStorage.setItem(keyOf(pass), JSON.stringify(plain));
}

/** What an earlier page left waiting; nothing when it cannot be read. */
export function leftWaiting(pass: string): Intent[] {
  try {
    const value: unknown = JSON.parse(localStorage.getItem(keyOf(pass)) ?? "[]");
    return Array.isArray(value) ? (value as Intent[]) : [];
  } catch {
    return [];
  }
}
