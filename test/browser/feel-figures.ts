import type { Logged } from "#test/browser/request-log.ts";

/** Median and 95th percentile with the count. */
export function figures(times: readonly number[]): string {
  const sorted = times.filter(Number.isFinite).sort((a, b) => a - b);
  if (sorted.length === 0) return "nothing to measure";
  const at = (share: number) => sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))]!.toFixed(0);
  return `${at(0.5)} / ${at(0.95)} ms (${sorted.length})`;
}

/** Previews shown, each with the age of the pointer's place that it answers: that of the last snap answered before it was asked. */
export function shownPreviews(log: readonly Logged[]): { readonly age: number; readonly coarse: boolean }[] {
  const moves = log.filter(({ what }) => what === "pointermove");
  const snaps = log.filter(({ what }) => what === "snap");
  return log.flatMap((preview) => {
    if (preview.what !== "guide/preview" || preview.coarse === null || preview.status !== 200) return [];
    const snap = snaps.filter(({ answered }) => answered <= preview.sent + 0.5).at(-1);
    const move = snap && moves.filter(({ sent }) => sent <= snap.sent + 0.5).at(-1);
    return move ? [{ age: preview.painted - move.sent, coarse: preview.coarse }] : [];
  });
}

/** A table of what was measured, each line printed as soon as it is known, with its goal. */
export class FeelTable {
  constructor(private readonly print: (line: string) => void) {
    print("| what | goal | reached: median / 95th (count) |");
    print("| --- | --- | --- |");
  }

  note(what: string, goal: string, reached: string): void {
    this.print(`| ${[what, goal, reached].join(" | ")} |`);
  }
}
