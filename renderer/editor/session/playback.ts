import { type ReadonlySignal, signal } from "@preact/signals";
import type { LoggedOperation } from "#shared/log/history-tree.ts";
import { PathReplay } from "#shared/log/path-replay.ts";
import type { TreeDocument } from "#shared/trees/document.ts";

/** What the playback shows now. */
export interface Played {
  readonly document: TreeDocument;
  /** So many edits of the path are shown; 0 = before the first. */
  readonly at: number;
  readonly count: number;
  /** The edit shown last; null = before the first. */
  readonly edit: LoggedOperation | null;
  readonly isRunning: boolean;
}

/** Edits a second that can be chosen. */
export const PACES = [1, 2, 5, 20] as const;
export type Pace = (typeof PACES)[number];

/** Where the playback gets its path from; a history as it stands. */
export interface PlayedHistory {
  readonly document: TreeDocument;
  readonly pointer: number;
  path(): readonly LoggedOperation[];
}

/** Shows the edits of the current path one after another. Only looks: the history is read once, at the start, and never moved. */
export class Playback {
  private readonly played = signal<Played | null>(null);
  private readonly chosenPace = signal<Pace>(2);
  private replay: PathReplay | null = null;
  private timer: ReturnType<typeof setTimeout> | null = null;

  /** Null while nothing is played back. */
  get shown(): ReadonlySignal<Played | null> {
    return this.played;
  }
  get pace(): ReadonlySignal<Pace> {
    return this.chosenPace;
  }

  /**
   * Shows the document right after an edit of the current path. @param seq of that edit; left out or elsewhere, the first one
   * @param isRunning goes on by itself from there
   */
  start(history: PlayedHistory, seq: number | null, isRunning: boolean): void {
    const path = history.path();
    if (path.length === 0) return;
    this.replay = new PathReplay(path, history.document, history.pointer);
    const from = path.findIndex((step) => step.seq === seq);
    this.show(from === -1 ? 1 : from + 1, isRunning);
  }

  /** Goes on by itself, from the first edit when it stands at the newest; or rests. */
  toggle(): void {
    const now = this.played.value;
    if (now === null) return;
    if (now.isRunning) this.show(now.at, false);
    else this.show(now.at === now.count ? 1 : now.at, true);
  }

  /** So many edits forward or, below 0, back; it rests then. */
  step(by: number): void {
    const now = this.played.value;
    if (now !== null) this.show(now.at + by, false);
  }

  setPace(pace: Pace): void {
    this.chosenPace.value = pace;
    const now = this.played.value;
    if (now?.isRunning) this.show(now.at, true);
  }

  stop(): void {
    this.rest();
    this.replay = null;
    this.played.value = null;
  }

  private show(at: number, isRunning: boolean): void {
    const replay = this.replay;
    if (replay === null) return;
    this.rest();
    const document = replay.goTo(at);
    const count = replay.path.length;
    const goesOn = isRunning && replay.at < count;
    this.played.value = { document, at: replay.at, count, edit: replay.path[replay.at - 1] ?? null, isRunning: goesOn };
    // One at a time, so that a slow machine plays slower and never falls behind.
    if (goesOn) this.timer = setTimeout(() => this.show(replay.at + 1, true), 1000 / this.chosenPace.value);
  }

  private rest(): void {
    if (this.timer !== null) clearTimeout(this.timer);
    this.timer = null;
  }
}
