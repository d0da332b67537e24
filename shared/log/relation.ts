import { hashOfLine, parseLine } from "#shared/log/line.ts";
import type { LogHead } from "#shared/log/records.ts";

/** One home of a log: which log it is, its last line, and the hashes of those of its lines that are known here. */
export interface ChainView {
  readonly epoch: string;
  readonly head: LogHead;
  /** Hash of line `seq`; undefined when it is not there or not known. */
  hashAt(seq: number): string | undefined;
}

/**
 * How the window's copy of a log stands to the journal on disk.
 * `same`; `send`: the disk lacks the lines from `from` on; `take`: the window lacks them; `fork`: both went on after `common`
 * (-1: they share nothing), so both are kept and the person is asked.
 */
export type Relation =
  | { readonly relation: "same" }
  | { readonly relation: "send"; readonly from: number }
  | { readonly relation: "take"; readonly from: number }
  | { readonly relation: "fork"; readonly common: number };

/**
 * The relation of the window's log to the disk's. The shorter one's last line decides: when the longer one has it too, the
 * longer one merely went on. A line that the other side cannot show counts as different, so nothing is overwritten on a guess.
 * Complexity: number of lines when they fork, else constant.
 */
export function relationOf(window: ChainView, disk: ChainView): Relation {
  if (window.epoch !== disk.epoch) return { relation: "fork", common: -1 };
  const length = Math.min(window.head.seq, disk.head.seq);
  const ofWindow = hashIn(window, length);
  if (length < 0 || (ofWindow !== undefined && ofWindow === hashIn(disk, length))) {
    if (window.head.seq === disk.head.seq) return { relation: "same" };
    return window.head.seq > disk.head.seq ? { relation: "send", from: length + 1 } : { relation: "take", from: length + 1 };
  }
  return { relation: "fork", common: lastCommon(window, disk, length - 1) };
}

/** The view of a log whose lines from 0 on are all at hand. Hashes every line once. */
export function viewOfLines(epoch: string, lines: readonly string[]): ChainView {
  const hashes = lines.map(hashOfLine);
  const seq = lines.length - 1;
  return { epoch, head: { seq, hash: hashes[seq] ?? "" }, hashAt: (at) => hashes[at] };
}

/**
 * True when lines hold something a person made or chose (edits, moves in the history, marks). Lines that only say when a
 * session opened, or curves that no edit came to name, need no question when they are left behind.
 */
export function holdsWork(lines: readonly string[], firstSeq: number): boolean {
  return lines.some((line, i) => ["op", "at", "mark"].includes(parseLine(line, firstSeq + i + 1, "the window's log").kind));
}

function hashIn(view: ChainView, seq: number): string | undefined {
  return seq === view.head.seq ? view.head.hash : view.hashAt(seq);
}

function lastCommon(a: ChainView, b: ChainView, from: number): number {
  // A chain: once two lines are equal, all before them are.
  for (let seq = from; seq >= 0; seq--) {
    const hash = hashIn(a, seq);
    if (hash !== undefined && hash === hashIn(b, seq)) return seq;
  }
  return -1;
}
