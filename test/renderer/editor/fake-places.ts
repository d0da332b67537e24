import { signal } from "@preact/signals";
import { Editor, type EditorPlaces, type LeftWaiting } from "#renderer/editor/editor.ts";
import type { PassKeeper, SavedState } from "#renderer/editor/session/pass-keeper.ts";
import { NOTHING } from "#renderer/editor/tracing/under-way.ts";
import type { Pointing, Under } from "#renderer/editor/view-control.ts";
import type { SolvedCurve } from "#shared/api/engine.ts";
import { TautlineError } from "#shared/errors.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { PassHistory } from "#shared/log/history.ts";
import type { StrandRequest } from "#shared/tracing/strand-request.ts";

const NOTHING_LEFT: LeftWaiting = { underWay: NOTHING, waiting: [] };

/** A pass kept in memory over the real history, its lines with it. */
export class MemoryKeeper implements PassKeeper {
  readonly saved = signal<SavedState>({ kind: "saved", at: null });
  readonly lines: string[];
  readOnly = false;
  private readonly history: PassHistory;
  private readonly listeners = new Set<() => void>();
  private clock = 0;

  constructor(lines?: readonly string[]) {
    if (lines === undefined) {
      const fields = { pass: "p".repeat(16), specimen: "s".repeat(16), annotator: "AN-1", number: 1, epoch: "e".repeat(16) };
      const begun = PassHistory.begin(fields, this.stamp());
      this.history = begun.history;
      this.lines = begun.lines;
    } else {
      this.history = PassHistory.fromLines(lines);
      this.lines = [...lines];
    }
  }

  get document() {
    return this.history.document;
  }
  get pointer() {
    return this.history.pointer;
  }
  get canUndo() {
    return this.history.canUndo;
  }
  get canRedo() {
    return this.history.canRedo;
  }
  get edits() {
    return this.history.edits;
  }
  ids = () => this.history.ids();
  entries = () => this.history.entries();
  path = () => this.history.path();
  commit: PassKeeper["commit"] = async (operation, label, curves) =>
    this.took(this.history.commit(operation, label, curves, this.stamp()));
  undo = async () => this.took(this.history.undo(this.stamp()));
  redo = async () => this.took(this.history.redo(this.stamp()));
  jump = async (seq: number) => this.took(this.history.jump(seq, this.stamp()));
  mark = async (name: string) => this.took(this.history.mark(name, this.stamp()));
  settled = async () => undefined;
  close = async () => undefined;
  onChange(listener: () => void) {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  private stamp() {
    this.clock += 1000;
    return { t: this.clock, mono: this.clock, session: "z".repeat(16) };
  }

  private took(lines: readonly string[]): void {
    this.lines.push(...lines);
    for (const listener of this.listeners) listener();
  }
}

/** A curve that runs straight from pin to pin: what an engine would answer on an empty scan. */
export function straightCurve(request: StrandRequest): SolvedCurve {
  const pins: Vec3[] = [request.from, ...request.via, request.to];
  return {
    points: pins.flatMap((pin) => [...pin]),
    radii: pins.map(() => 0.2),
    madeBy: [[0, pins.length - 1, "guide"]],
    imageFit: 0.9,
    followed: true,
  };
}

/** The server as a test plays it. */
export class FakeServer {
  /** Strands asked for, one list per request. */
  readonly asked: (readonly StrandRequest[])[] = [];
  readonly failures: unknown[] = [];
  kept: LeftWaiting = NOTHING_LEFT;
  away = false;
  /** Set: requests wait until `release` is called. */
  held = false;
  private waiting: (() => void)[] = [];
  private back: (() => void)[] = [];

  release(): void {
    this.held = false;
    for (const go of this.waiting.splice(0)) go();
  }

  comeBack(): void {
    this.away = false;
    for (const go of this.back.splice(0)) go();
  }

  places(keeper: PassKeeper, leftWaiting: LeftWaiting = NOTHING_LEFT): EditorPlaces {
    return {
      keeper,
      leftWaiting,
      solve: async (strands) => {
        this.asked.push(strands);
        if (this.held) await new Promise<void>((go) => this.waiting.push(go));
        if (this.away) throw new TautlineError("internal", "away", { what: "server away" });
        return strands.map(straightCurve);
      },
      snap: async () => ({ candidates: [] }),
      guide: {
        open: async () => ({ session: "g1" }),
        preview: async (_, to) => ({ points: [0, 0, 0, ...to], coarse: false, imageFit: 0.9, doubtful: [] }),
        close: async () => undefined,
      },
      follow: {
        open: async () => ({ session: "f1" }),
        more: async () => ({ done: true, growing: [], lengthMm: 0, proposal: null }),
        close: async () => undefined,
      },
      serverBack: () => new Promise<void>((go) => this.back.push(go)),
      failed: (error) => void this.failures.push(error),
      keepWaiting: (left) => {
        this.kept = left;
      },
    };
  }
}

/** The pointer at a place on a flat section of 0.05 mm a pixel. */
export function at(x: number, y: number, z = 0, under: Under | null = null): Pointing {
  return { at: pointMm(x, y, z), normal: [0, 0, 1], mmPerPx: 0.05, slabMm: 0.4, under, released: false };
}

export function newEditor(server = new FakeServer(), keeper = new MemoryKeeper(), leftWaiting: LeftWaiting = NOTHING_LEFT) {
  return { server, keeper, editor: new Editor(server.places(keeper, leftWaiting)) };
}
