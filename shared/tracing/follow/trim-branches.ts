import type { Vec3 } from "#shared/geometry/types.ts";
import { add, distance, scale } from "#shared/geometry/vec3.ts";
import type { FollowReason } from "#shared/tracing/follow/proposal.ts";
import { medianOf } from "#shared/tracing/polyline.ts";
import { excessAt, outlineRadius } from "#shared/tracing/strings/bright-share.ts";
import { contactKind } from "#shared/tracing/strings/contact-kind.ts";
import { directionAt, type OutwardBranch } from "#shared/tracing/strings/outward.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** A branch cut where its string is not separate any more, or drawn on to where that is. */
export interface TrimmedBranch {
  /** Number of the branch that it was. */
  readonly number: number;
  /** Places from the inner end outwards, millimetres along the voxel axes. */
  readonly places: readonly Vec3[];
  readonly radii: readonly number[];
  /** Why it ends; null where it parts into others. */
  readonly reason: FollowReason | null;
}

export interface PlacedPoints {
  readonly places: readonly Vec3[];
  readonly radii: readonly number[];
}

/** The outline is not separate any more where it is this many times as wide as it was before, and a part of a voxel besides. */
const JOINED_WIDTH = 1.35;
const JOINED_VOXELS = 0.6;
/** Outlines are looked for this far, in radii of the string, and voxels besides. */
const REACH_RADII = 2.4;
const REACH_VOXELS = 3;
/** Around a fork this many of the thicker string's radii are left out: its other arms stand in the ring. */
const FORK_RADII = 2.2;
/** The string's own radius is the median over this length before a place, in radii, and at least this many millimetres. */
const MEMORY_RADII = 8;
const LEAST_MEMORY_MM = 1;
/** An end is looked for this far beyond the last point, in radii, and voxels besides. */
const BEYOND_RADII = 3;
const BEYOND_VOXELS = 4;
/** The string has faded where less than this share of its excess is left. */
const FADED_SHARE = 0.45;
/** How deep into the tissue at an end is looked. */
const DEEPEST_MM = 3;

/**
 * Cuts branches at the last place where the string's outline is separate from muscle and leaflet, and draws those that end before
 * such a place on to it. What hangs on a cut branch is dropped.
 * @param branches parents before children, as from `outwardBranches`.
 */
export function trimBranches(context: TraceContext, points: PlacedPoints, branches: readonly OutwardBranch[]): TrimmedBranch[] {
  const voxelMm = Math.min(...context.pyramid.grid.spacing);
  const isParent = new Set(branches.map(({ parent }) => parent));
  const out: TrimmedBranch[] = [];
  const gone = new Set<number>();
  branches.forEach((branch, number) => {
    if (gone.has(branch.parent)) {
      gone.add(number);
      return;
    }
    const places = branch.points.map((n) => points.places[n]!);
    const radii = branch.points.map((n) => points.radii[n]!);
    const reachesFork = isParent.has(number);
    const memory = new BranchMemory(context, places, radii, branch.parent >= 0, reachesFork);
    const cut = joinedFrom(memory);
    if (cut >= 0) {
      gone.add(number);
      const last = Math.max(cut - 1, 0);
      const radius = memory.radiusAt(last);
      const inward = directionAt(places, Math.max(last, 1), 3 * radius);
      const reason = kindBeyond(context, places[last]!, inward, radius, memory.excessAt(last), voxelMm);
      // A branch of which nothing is left was no branch; its parent ends here unless other branches remain.
      out.push({ number, places: places.slice(0, last + 1), radii: radii.slice(0, last + 1), reason });
    } else if (reachesFork) out.push({ number, places, radii, reason: null });
    else out.push({ number, ...drawnOn(context, memory, voxelMm) });
  });
  return out;
}

/** A branch with what is known of its string from the places before each place. */
class BranchMemory {
  readonly arc: Float64Array;
  private readonly excesses: number[];
  /** Radius of the outline about each place. */
  readonly outlines: number[] = [];
  /** Length from the inner end along which the fork there is seen and not this string alone. */
  readonly forkMm: number;
  readonly outerForkMm: number;

  constructor(
    private readonly context: TraceContext,
    readonly places: readonly Vec3[],
    readonly radii: readonly number[],
    leavesFork: boolean,
    reachesFork: boolean,
  ) {
    this.arc = new Float64Array(places.length);
    for (let i = 1; i < places.length; i++) this.arc[i] = this.arc[i - 1]! + distance(places[i - 1]!, places[i]!);
    const own = medianOf([...radii].slice(radii.length >> 1));
    this.forkMm = leavesFork ? Math.min(FORK_RADII * Math.max(radii[0]!, own), this.arc[this.arc.length - 1]! / 2) : 0;
    this.outerForkMm = reachesFork ? FORK_RADII * radii[radii.length - 1]! : 0;
    this.excesses = places.map((at, i) => excessAt(context, at, radii[i]!));
    places.forEach((at, i) => {
      this.outlines.push(this.outlineAt(at, directionAt(places, i, Math.max(2 * radii[i]!, 3 * this.voxelMm)), i));
    });
  }

  get voxelMm(): number {
    return Math.min(...this.context.pyramid.grid.spacing);
  }

  /** Radius of the outline about any place, looked for as at place `i`. */
  outlineAt(at: Vec3, direction: Vec3, i: number): number {
    const radius = this.radiusAt(i);
    return outlineRadius(
      this.context,
      at,
      direction,
      radius,
      this.excessAt(i),
      REACH_RADII * radius + REACH_VOXELS * this.voxelMm,
    );
  }

  /** True where the outline is that of a fork, whose other arms widen it. */
  isAtFork(i: number): boolean {
    return this.arc[i]! < this.forkMm || this.arc[i]! > this.arc[this.arc.length - 1]! - this.outerForkMm;
  }

  /** True when an outline is wider than that of the string before place `i`. */
  isJoined(outline: number, i: number): boolean {
    return outline > JOINED_WIDTH * this.medianBefore(i, this.outlines) + JOINED_VOXELS * this.voxelMm;
  }

  /** Median radius over the stretch before a place (of the branch's beginning, where there is none). */
  radiusAt(i: number): number {
    return this.medianBefore(i, this.radii);
  }

  excessAt(i: number): number {
    return this.medianBefore(i, this.excesses);
  }

  private medianBefore(i: number, values: readonly number[]): number {
    const window = Math.max(LEAST_MEMORY_MM, MEMORY_RADII * this.radii[0]!);
    // At the beginning there is nothing before: the stretch is taken to both sides until it is long enough.
    const from = Math.max(this.forkMm, this.arc[i]! - window);
    const to = Math.max(this.arc[i]!, Math.min(this.forkMm + window / 2, this.arc[this.arc.length - 1]!));
    const taken: number[] = [];
    for (let n = 0; n < values.length; n++) if (this.arc[n]! >= from && this.arc[n]! <= to) taken.push(values[n]!);
    return medianOf(taken);
  }
}

/** Number of the first place from which on the string is not separate from what surrounds it; -1 when it is throughout. */
function joinedFrom(memory: BranchMemory): number {
  const { outlines, arc } = memory;
  let first = -1;
  for (let i = 0; i < arc.length; i++) {
    if (memory.isAtFork(i)) continue;
    if (memory.isJoined(outlines[i]!, i)) {
      if (first < 0) first = i;
      if (arc[i]! - arc[first]! >= memory.radiusAt(i) || i === arc.length - 1) return first;
    } else first = -1;
  }
  return first;
}

/** The branch drawn on from its last point, straight, to where its outline is not separate any more or the string has faded. */
function drawnOn(
  context: TraceContext,
  memory: BranchMemory,
  voxelMm: number,
): { places: readonly Vec3[]; radii: readonly number[]; reason: FollowReason } {
  const { places, radii } = memory;
  const n = places.length;
  const radius = memory.radiusAt(n - 1);
  const excess = memory.excessAt(n - 1);
  const direction = directionAt(places, n - 1, Math.max(4 * radius, 6 * voxelMm));
  const step = voxelMm / 2;
  const steps = Math.ceil((BEYOND_RADII * radius + BEYOND_VOXELS * voxelMm) / step);
  const further: Vec3[] = [];
  let reason: FollowReason = "faint";
  for (let s = 1; s <= steps; s++) {
    const at = add(places[n - 1]!, scale(direction, s * step));
    if (!isInScan(context, at)) {
      reason = "scan-edge";
      break;
    }
    if (excessAt(context, at, radius) < FADED_SHARE * excess) break;
    if (memory.isJoined(memory.outlineAt(at, direction, n - 1), n - 1)) {
      reason = kindBeyond(context, at, direction, radius, excess, voxelMm);
      break;
    }
    further.push(at);
  }
  const last = further.at(-1);
  if (!last) return { places, radii, reason };
  return { places: [...places, ...further], radii: [...radii, ...further.map(() => radius)], reason };
}

/** What lies beyond an end: looks along the string into the tissue, to the middle of it or 1.5 mm deep. */
function kindBeyond(
  context: TraceContext,
  at: Vec3,
  direction: Vec3,
  radius: number,
  excess: number,
  voxelMm: number,
): FollowReason {
  let deep = 0;
  for (let far = voxelMm; far <= DEEPEST_MM; far += voxelMm) {
    const place = add(at, scale(direction, far));
    if (!isInScan(context, place) || excessAt(context, place, radius) < FADED_SHARE * excess) break;
    deep = far;
  }
  return contactKind(context, add(at, scale(direction, deep / 2)), radius);
}

function isInScan({ pyramid }: TraceContext, at: Vec3): boolean {
  const { size, spacing } = pyramid.grid;
  return at.every((mm, axis) => mm >= -spacing[axis]! / 2 && mm <= (size[axis]! - 0.5) * spacing[axis]!);
}
