import type { ReadonlySignal } from "@preact/signals";
import type { LeavePlace, StrandPlace } from "#renderer/editor/session/intent.ts";
import type { IntentPlace } from "#renderer/editor/tracing/intent-place.ts";
import { passing, type Sight } from "#renderer/editor/tracing/passing.ts";
import type { Aim, Snapper } from "#renderer/editor/tracing/snapper.ts";
import type { Pointing, Under } from "#renderer/editor/view-control.ts";
import { type PointMm, roundPoint } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { StrandId, TreeDocument } from "#shared/trees/document.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";

/** The pointer snaps to strings within so many screen pixels. */
const REACH_PX = 9;
/** Nearer to the last pin than this on the screen, an end key means that pin itself. */
const AT_PIN_PX = 10;

/** Where the pointer or keyboard cursor is, and what is meant by it: a place in depth, a place on a strand, somewhere to attach to. */
export class Aiming {
  private now: Pointing | null = null;
  /** The document in which the pointer's surroundings were seen. */
  private seenIn: TreeDocument | null = null;
  /** Which candidate in depth, and where the pointer was when it was chosen. */
  private candidate: { readonly index: number; readonly at: Pointing } | null = null;

  constructor(
    private readonly document: ReadonlySignal<TreeDocument>,
    private readonly snapper: Snapper,
  ) {}

  /** Null = not on the section. */
  get pointing(): Pointing | null {
    return this.now;
  }

  look(pointing: Pointing | null): void {
    this.now = pointing;
    this.seenIn = this.document.value;
  }

  /** @param isGuided false: the place itself is meant, whatever string lies there. */
  aim(pointing: Pointing, isGuided: boolean): Aim {
    return {
      at: pointing.at,
      normal: pointing.normal,
      slabMm: pointing.slabMm,
      reachMm: REACH_PX * pointing.mmPerPx,
      snap: !pointing.released && isGuided,
      candidate: this.candidateFor(pointing) ?? 0,
    };
  }

  /** The place meant: what the pointer has snapped to there, else what is still to be snapped. */
  placeOf(pointing: Pointing, isGuided: boolean): IntentPlace {
    const aim = this.aim(pointing, isGuided);
    if (!aim.snap) return { point: roundPoint(pointing.at) };
    const known = this.snapper.known(aim);
    return known === null ? { aim } : { point: known.point };
  }

  /** Takes the next candidate along the line of sight; false when the pointer is nowhere. */
  next(): boolean {
    if (this.now === null) return false;
    this.candidate = { index: (this.candidateFor(this.now) ?? 0) + 1, at: this.now };
    return true;
  }

  /** True when the pointer is so near to a pin on the screen, or nowhere, that the pin itself is meant. */
  isAtPin(pin: PointMm): boolean {
    return this.now === null || distance(this.now.at, pin) <= AT_PIN_PX * this.now.mmPerPx;
  }

  /**
   * What a branch, join or link would be attached to: what lies under the pointer, else what passes nearest to it (at a fork the
   * traced curve cuts the corner); null when nothing does.
   * @param isLater edits wait: what is there is decided when its turn comes.
   */
  attachTo(isLater: boolean): LeavePlace | null {
    if (this.now === null) return null;
    const sight = sightOf(this.now);
    if (isLater) return { passing: sight };
    const here = this.now.under === null || !this.isCurrent ? null : anchorOf(this.now.under, this.now);
    return here ?? passing(this.document.value, sight);
  }

  /**
   * The strand under the pointer and the place on it; when it may have been divided since it was seen, the sight of it, by which
   * it is found again when its turn comes. Null when the pointer is on none.
   */
  strandPlace(isLater: boolean): StrandPlace | null {
    const under = this.now?.under;
    if (this.now === null || under?.kind !== "strand" || !under.id.startsWith("s")) return null;
    return !isLater && this.isCurrent ? { strand: under.id as StrandId, near: under.point } : { passing: sightOf(this.now) };
  }

  /** What was seen under the pointer holds for the document it was seen in: a strand's id may stand for half of it since. */
  private get isCurrent(): boolean {
    return this.seenIn === this.document.value;
  }

  /** The chosen candidate holds while the pointer stays where it was chosen. */
  private candidateFor(pointing: Pointing): number | null {
    const chosen = this.candidate;
    if (chosen === null) return null;
    return distance(chosen.at.at, pointing.at) <= REACH_PX * pointing.mmPerPx ? chosen.index : null;
  }
}

/** The place looked at and how, without what lies there. */
export function sightOf({ at, normal, mmPerPx, slabMm }: Pointing): Sight {
  return { at, normal, mmPerPx, slabMm };
}

/** The place to attach something at what lies under the pointer; null on a cross-link, which carries no branches. */
function anchorOf(under: Under, pointing: Pointing): Anchor | null {
  if (under.kind === "node") return { node: under.id };
  const line = under.kind === "strand" ? under.id : under.strand;
  if (!line.startsWith("s")) return null;
  return { strand: line as StrandId, near: under.kind === "strand" ? under.point : pointing.at };
}
