import { createFront, expandFront, type FrontDomain, type Meeting, walkBack } from "#shared/tracing/minimal-path/front.ts";

/** Voxels settled between two looks at the other front and at `shouldStop`. */
const BITE = 4096;

/** The cheapest path between two voxels, or why there is none. */
export type MeetResult =
  | { readonly kind: "met"; readonly path: Int32Array; readonly cost: number; readonly settled: number }
  | { readonly kind: "blocked" | "over-budget" | "stopped"; readonly settled: number };

/**
 * The exact cheapest path between two voxels by two fronts that grow towards each other: they visit far fewer voxels than
 * one, since each needs to reach only half the cost, and leave what leads away from the other for later. The path runs from `from` to `to`, both included.
 * Ends when the two reaches together exceed the cheapest meeting.
 * @param budget most voxels to settle on both sides together.
 * @throws RangeError when a voxel lies outside the box.
 * @source Pohl 1971 (bi-directional search), Ikeda et al. 1994 (with one consistent estimate for both).
 */
export function meetFronts(
  domain: FrontDomain,
  from: number,
  to: number,
  budget: number,
  shouldStop: () => boolean = () => false,
): MeetResult {
  const a = createFront(domain, from, to);
  if (from === to) return { kind: "met", path: Int32Array.of(from), cost: 0, settled: 0 };
  const b = createFront(domain, to, from);
  // Both count on the same way between them: the two orders of a voxel add up to its path's cost less this.
  const counted = a.goal!.perMm * a.goal!.apartMm;
  const meetingOfA: Meeting = { other: b, best: Number.POSITIVE_INFINITY, voxel: -1 };
  const meetingOfB: Meeting = { other: a, best: Number.POSITIVE_INFINITY, voxel: -1 };
  for (;;) {
    const best = Math.min(meetingOfA.best, meetingOfB.best);
    if (a.reach + b.reach >= best - counted || (best < Number.POSITIVE_INFINITY && (a.exhausted || b.exhausted))) break;
    const settled = a.settled + b.settled;
    if (a.exhausted || b.exhausted) return { kind: "blocked", settled };
    if (settled >= budget) return { kind: "over-budget", settled };
    if (shouldStop()) return { kind: "stopped", settled };
    if (a.reach <= b.reach) expandFront(a, BITE, -1, meetingOfA);
    else expandFront(b, BITE, -1, meetingOfB);
  }
  const { best, voxel } = meetingOfA.best <= meetingOfB.best ? meetingOfA : meetingOfB;
  const head = walkBack(a, voxel)!;
  const tail = walkBack(b, voxel)!;
  const path = new Int32Array(head.length + tail.length - 1);
  for (let i = 0; i < head.length; i++) path[i] = head[head.length - 1 - i]!;
  path.set(tail.subarray(1), head.length);
  return { kind: "met", path, cost: best, settled: a.settled + b.settled };
}
