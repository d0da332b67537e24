import { type ReadonlySignal, signal } from "@preact/signals";
import type { SnapAnswer, SnapCandidate } from "#shared/api/engine.ts";
import { type PointMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";

/** Where the person aims: a place on the section plane and what the view there is like. */
export interface Aim {
  readonly at: PointMm;
  /** Unit normal of the section, away from the viewer. */
  readonly normal: Vec3;
  readonly slabMm: number;
  /** A few screen pixels, as millimetres. */
  readonly reachMm: number;
  /** False: the place itself is meant (the modifier is held). */
  readonly snap: boolean;
  /** Which candidate in depth, counted from the strongest. */
  readonly candidate: number;
}

export interface Snapped {
  readonly point: PointMm;
  /** Along the normal from the section plane, millimetres; 0 without a candidate. */
  readonly depthMm: number;
  /** Number of candidates along the line of sight; 0 = the place itself. */
  readonly candidates: number;
  /** Which of them this is. */
  readonly candidate: number;
}

export type AskSnap = (aim: Aim) => Promise<SnapAnswer | null>;

/** The place that an answer gives for an aim: the wanted candidate, else the aimed place itself. */
export function choose(aim: Aim, candidates: readonly SnapCandidate[]): Snapped {
  if (!aim.snap || candidates.length === 0) return { point: roundPoint(aim.at), depthMm: 0, candidates: 0, candidate: 0 };
  const candidate = ((aim.candidate % candidates.length) + candidates.length) % candidates.length;
  const chosen = candidates[candidate]!;
  return { point: roundPoint(chosen.point), depthMm: chosen.depthMm, candidates: candidates.length, candidate };
}

/** Follows the pointer and keeps the place it snaps to. */
export class Snapper {
  private readonly snappedSignal = signal<Snapped | null>(null);
  private last: { readonly aim: Aim; readonly snapped: Snapped } | null = null;
  /** Counts departures, so that an answer that comes after one shows nothing. */
  private left = 0;

  constructor(private readonly ask: AskSnap) {}

  get snapped(): ReadonlySignal<Snapped | null> {
    return this.snappedSignal;
  }

  /** The place for an aim; null when a newer aim took over. Without an answer the aimed place stands. */
  async aimAt(aim: Aim): Promise<Snapped | null> {
    if (!aim.snap) return this.keep(aim, choose(aim, []));
    const { left } = this;
    try {
      const answer = await this.ask(aim);
      return answer === null || left !== this.left ? null : this.keep(aim, choose(aim, answer.candidates));
    } catch {
      return left === this.left ? this.keep(aim, choose(aim, [])) : null;
    }
  }

  /** What was found for exactly this aim, if it was the last one answered. */
  known(aim: Aim): Snapped | null {
    return this.last !== null && sameAim(this.last.aim, aim) ? this.last.snapped : null;
  }

  leave(): void {
    this.left += 1;
    this.snappedSignal.value = null;
    this.last = null;
  }

  private keep(aim: Aim, snapped: Snapped): Snapped {
    this.last = { aim, snapped };
    this.snappedSignal.value = snapped;
    return snapped;
  }
}

function sameAim(a: Aim, b: Aim): boolean {
  return (
    a.at.every((value, axis) => value === b.at[axis]) &&
    a.normal.every((value, axis) => value === b.normal[axis]) &&
    a.slabMm === b.slabMm &&
    a.reachMm === b.reachMm &&
    a.snap === b.snap &&
    a.candidate === b.candidate
  );
}
