import { computed, type ReadonlySignal, signal } from "@preact/signals";

import type { FollowAnswer } from "#shared/api/follow.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { ProposedLine } from "#shared/marks/proposed-line.ts";
import { keptStrands } from "#shared/tracing/follow/part-of-proposal.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";

/** A strand that is traced already: the run stops where it meets one. */
export interface TracedLine {
  readonly id: string;
  /** Flat xyz, millimetres. */
  readonly points: readonly number[];
}

/** What the follower asks of the engine; null = a newer request took over. */
export interface FollowSource {
  open(at: PointMm, traced: readonly (readonly number[])[]): Promise<{ session: string } | null>;
  more(session: string): Promise<FollowAnswer | null>;
  close(session: string): Promise<unknown>;
}

export type Following =
  | { readonly kind: "none" }
  | {
      readonly kind: "growing";
      readonly at: PointMm;
      readonly lines: readonly (readonly number[])[];
      readonly lengthMm: number;
    }
  | {
      readonly kind: "ready";
      readonly proposal: FollowProposal;
      /** Strands that the person left out; what hangs on them goes with them. */
      readonly leftOut: ReadonlySet<string>;
      /** Ids of the traced lines by their number in the proposal. */
      readonly traced: readonly string[];
    };

const NONE: Following = { kind: "none" };

/** Keeps one proposal: it grows while the engine follows the string, then waits until the person takes it or puts it away. */
export class Follower {
  private readonly state = signal<Following>(NONE);
  /** Counts starts and stops, so that answers to an older run show nothing. */
  private run = 0;
  private session: string | null = null;
  readonly lines: ReadonlySignal<readonly ProposedLine[]>;

  /** @param failed told of what went wrong; the proposal is gone then. */
  constructor(
    private readonly source: FollowSource,
    private readonly failed: (error: unknown) => void,
  ) {
    this.lines = computed(() => linesOf(this.state.value));
  }

  get following(): ReadonlySignal<Following> {
    return this.state;
  }

  /** Follows the string through a place; settles when it is ready, when there is none, or when it was stopped. */
  async start(at: PointMm, traced: readonly TracedLine[]): Promise<"ready" | "none" | "stopped"> {
    this.stop();
    const { run } = this;
    this.state.value = { kind: "growing", at, lines: [], lengthMm: 0 };
    try {
      const opened = await this.source.open(
        at,
        traced.map(({ points }) => points),
      );
      if (run !== this.run) {
        if (opened !== null) void this.source.close(opened.session).catch(() => undefined);
        return "stopped";
      }
      this.session = opened?.session ?? null;
      while (this.session !== null) {
        const answer = await this.source.more(this.session);
        if (run !== this.run) return "stopped";
        if (answer === null) break;
        if (!answer.done) {
          this.state.value = { kind: "growing", at, lines: answer.growing, lengthMm: answer.lengthMm };
          continue;
        }
        this.session = null;
        if (answer.proposal === null) {
          this.state.value = NONE;
          return "none";
        }
        const ids = traced.map(({ id }) => id);
        this.state.value = { kind: "ready", proposal: answer.proposal, leftOut: new Set(), traced: ids };
        return "ready";
      }
      this.stop();
      return "stopped";
    } catch (error) {
      if (run !== this.run) return "stopped";
      this.session = null;
      this.state.value = NONE;
      this.failed(error);
      return "stopped";
    }
  }

  /** Puts the proposal away, or stops following. */
  stop(): void {
    this.run += 1;
    const { session } = this;
    this.session = null;
    this.state.value = NONE;
    if (session !== null) void this.source.close(session).catch(() => undefined);
  }

  /** Leaves a strand out with what hangs on it, or puts it back; the strand that was clicked stays. */
  toggle(strand: string): void {
    const now = this.state.value;
    if (now.kind !== "ready" || strand === now.proposal.clicked.strand) return;
    const leftOut = new Set(now.leftOut);
    if (!leftOut.delete(strand)) leftOut.add(strand);
    this.state.value = { ...now, leftOut };
  }
}

function linesOf(following: Following): readonly ProposedLine[] {
  switch (following.kind) {
    case "none":
      return [];
    case "growing":
      return following.lines.map((points) => ({ points, kept: true, doubtful: [] }));
    case "ready": {
      const kept = keptStrands(following.proposal, following.leftOut);
      return following.proposal.strands.map(({ id, points, doubtful }) => ({
        points,
        kept: kept.has(id),
        doubtful: doubtful.map(({ first, last }) => [first, last] as const),
      }));
    }
  }
}
