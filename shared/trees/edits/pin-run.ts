import type { PointMm } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { LegKind, Strand } from "#shared/trees/document.ts";

/** Pins between two nodes and how each stretch between neighbours is made: one more leg than pins. */
export interface PinRun {
  readonly via: readonly PointMm[];
  readonly legs: readonly LegKind[];
}

/** Two pins (or a pin and a node) nearer than this are one place, millimetres; the tolerance of tree files. */
export const SAME_PLACE_MM = 1e-3;

/** True when two places are one. */
export function isSamePlace(a: PointMm, b: PointMm): boolean {
  return distance(a, b) <= SAME_PLACE_MM;
}

/** The run of a line; legs it does not name are guided. */
export function runOf(line: { readonly via: readonly PointMm[]; readonly legs?: readonly LegKind[] }): PinRun {
  return { via: line.via, legs: line.legs ?? [...line.via.map((): LegKind => "guide"), "guide"] };
}

/** The same run from the other end. */
export function reversedRun(run: PinRun): PinRun {
  return { via: [...run.via].reverse(), legs: [...run.legs].reverse() };
}

/**
 * One run out of two that meet at `middle` (pins in order; none: they meet without a pin, the two legs become one, straight
 * only when both were). Legs between middle pins are guided.
 */
export function joinedRun(a: PinRun, middle: readonly PointMm[], b: PinRun): PinRun {
  if (middle.length === 0) {
    const meeting: LegKind = a.legs[a.legs.length - 1] === "straight" && b.legs[0] === "straight" ? "straight" : "guide";
    return { via: [...a.via, ...b.via], legs: [...a.legs.slice(0, -1), meeting, ...b.legs.slice(1)] };
  }
  const between = middle.slice(1).map((): LegKind => "guide");
  return { via: [...a.via, ...middle, ...b.via], legs: [...a.legs, ...between, ...b.legs] };
}

/**
 * The two runs on either side of a place in leg `leg` (0-based). Both halves keep that leg's kind; a pin at the place itself
 * is left out, since a node comes to stand there.
 */
export function splitRun(run: PinRun, leg: number, place: PointMm): readonly [PinRun, PinRun] {
  const first = { via: run.via.slice(0, leg), legs: run.legs.slice(0, leg + 1) };
  const second = { via: run.via.slice(leg), legs: run.legs.slice(leg) };
  while (first.via.length > 0 && isSamePlace(first.via[first.via.length - 1]!, place)) {
    first.via.pop();
    first.legs.pop();
  }
  while (second.via.length > 0 && isSamePlace(second.via[0]!, place)) {
    second.via.shift();
    second.legs.shift();
  }
  return [first, second];
}

/** The strand with another run, untraced; `legs` is left out when all are guided. */
export function strandWithRun(strand: Strand, run: PinRun): Strand {
  const { legs: _, ...rest } = strand;
  const allGuided = run.legs.every((leg) => leg === "guide");
  return { ...rest, curve: null, via: run.via, ...(allGuided ? {} : { legs: run.legs }) };
}
