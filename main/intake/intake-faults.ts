import { basename } from "node:path";
import { TautlineError, unreadable } from "#shared/errors.ts";

/** The disk has not the room an intake will need; nothing was written. */
export function fullDisk(library: string, needed: number, free: number): TautlineError<"disk-full"> {
  const message =
    `The library '${basename(library)}' needs ${inWords(needed)} of free disk for this scan, and ${inWords(free)} are free. ` +
    "Nothing was written; free some space or use a library on another disk.";
  return new TautlineError("disk-full", message, { file: basename(library), needed, free });
}

/** The scan's files are not what they were when the intake began. */
export function sourceChanged(name: string): TautlineError<"unreadable-input"> {
  return unreadable(
    name,
    "a scan that stays as it is while it is taken in",
    "that its files changed meanwhile",
    undefined,
    "Nothing was kept; take it in again once it is complete.",
  );
}

function inWords(bytes: number): string {
  if (bytes >= 1e9) return `${(bytes / 1e9).toFixed(1)} GB`;
  return `${Math.ceil(bytes / 1e6)} MB`;
}
