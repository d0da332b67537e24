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

/** The box to be kept does not lie in the scan. */
export function badCrop(
  name: string,
  size: readonly [number, number, number],
  fault: { readonly expected: string; readonly found: string },
): TautlineError<"misuse"> {
  const what = `${name} has ${size.join(" x ")} voxels; a crop needs ${fault.expected}, found ${fault.found}.`;
  const next = "Give x0,y0,z0,x1,y1,z1 in voxels from 0; x0 is in, x1 is out.";
  return new TautlineError("misuse", `${what} ${next}`, { what, next });
}

function inWords(bytes: number): string {
  if (bytes >= 1e9) return `${(bytes / 1e9).toFixed(1)} GB`;
  return `${Math.ceil(bytes / 1e6)} MB`;
}
