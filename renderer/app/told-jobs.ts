import { type ReadonlySignal, signal } from "@preact/signals";

const told = signal<ReadonlySet<string>>(new Set());

/** Jobs that a screen follows by itself; other screens need not show them. */
export const toldJobs: ReadonlySignal<ReadonlySet<string>> = told;

/** A screen follows this job until the returned function is called; what has ended by then was told by it. */
export function tellJob(job: string, hasEnded: () => boolean): () => void {
  told.value = new Set([...told.value, job]);
  return () => {
    if (hasEnded()) return;
    told.value = new Set([...told.value].filter((other) => other !== job));
  };
}
