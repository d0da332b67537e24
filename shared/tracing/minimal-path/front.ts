import {
  type BoxOfVoxels,
  createFrontMemory,
  type FrontMemory,
  type FrontRoom,
} from "#shared/tracing/minimal-path/front-memory.ts";

const SETTLED = 32;
const CODE = 31;
/**
 * Share of the least cost that a front with a goal counts on for the way still to go. The rest is the smallest edge that is
 * left, and with it the width of the buckets.
 */
const FORESIGHT = 0.9;
/** Costs may lie below the least one by their rounding to float32. */
const ROUNDING = 0.999;
/** Source mark: a label that came from nowhere. */
const FROM_NOWHERE = 27;
/** Voxels that the compiled code settles at a time: between two calls it may be replaced by a better compiled one. */
const STRIDE = 65536;

/** The voxels a front may enter: a box of a level's grid, and their costs, filled when the front first arrives. */
export interface FrontDomain extends BoxOfVoxels {
  /**
   * shape [nz, ny, nx], cost per millimetre; 0 = not known yet, Infinity = impassable; shared between fronts. A view on the
   * memory of now: ask again after a front has grown.
   */
  readonly cost: Float32Array;
  readonly leastCost: number;
  readonly mostCost: number;
  readonly memory: FrontMemory;
}

/** A front that has left its source: exact distances, settled in order, kept while it grows. */
export interface Front {
  readonly domain: FrontDomain;
  readonly source: number;
  /** shape [nz, ny, nx]; cost of the cheapest known path from the source; meaningless where `mark` is 0. A view on the memory of now. */
  readonly distance: Float64Array;
  /** shape [nz, ny, nx]; 0 = not seen; low five bits = 1 + neighbour it came from (27 = source); 32 = settled. A view on the memory of now. */
  readonly mark: Uint8Array;
  /** Number of settled voxels. */
  settled: number;
  /** No label is left to settle. */
  exhausted: boolean;
  /** Labels are settled in the order of their distance, with a goal of distance + foresight; those below this are final. */
  reach: number;
  readonly goal: Goal | null;
  /** Width of the buckets that labels wait in. */
  readonly width: number;
  readonly room: FrontRoom;
}

/**
 * Where a front is wanted. Its labels are settled in the order of distance + perMm / 2 (way to the goal - way from the source -
 * way from source to goal), ways as the crow flies: those that lead away wait. Distances stay exact.
 */
interface Goal {
  /** Cost per millimetre that every way is sure to have. */
  readonly perMm: number;
  /** Way from source to goal as the crow flies, millimetres. */
  readonly apartMm: number;
}

/** Offsets of the 26 neighbours, x, y, z, in the order of the neighbour codes 1 to 26. */
const STEPS: readonly (readonly [number, number, number])[] = (() => {
  const steps: [number, number, number][] = [];
  for (let z = -1; z <= 1; z++)
    for (let y = -1; y <= 1; y++) for (let x = -1; x <= 1; x++) if (x !== 0 || y !== 0 || z !== 0) steps.push([x, y, z]);
  return steps;
})();

/**
 * A domain over a box of voxels. Memory: 4 bytes a voxel for the costs.
 * @param cost shape [nz, ny, nx]; copied; left out, all are 0 and come by `fill`.
 */
export function createFrontDomain(
  box: BoxOfVoxels & { readonly leastCost: number; readonly mostCost: number },
  cost?: Float32Array,
): FrontDomain {
  const memory = createFrontMemory(box);
  if (cost) memory.cost.set(cost);
  const { size, spacing, leastCost, mostCost } = box;
  return {
    size,
    spacing,
    leastCost,
    mostCost,
    memory,
    get cost() {
      return memory.cost;
    },
  };
}

/**
 * A front at its source, ready to be expanded. Memory: 9 bytes a voxel of the box (touched only where the front goes).
 * @param goal voxel that the front is wanted at, or -1; two fronts with each other's source as goal suit `meetFronts`.
 * @throws RangeError when the source lies outside the box.
 * @source the order with a goal: Ikeda et al. 1994 (two fronts with one consistent estimate), own share.
 */
export function createFront(domain: FrontDomain, source: number, goal = -1): Front {
  const voxels = domain.size[0] * domain.size[1] * domain.size[2];
  if (!(source >= 0 && source < voxels)) throw new RangeError(`a source below ${voxels} expected, found ${source}`);
  // Just below the smallest edge: a label that is settled can then never improve another of its own bucket.
  const share = goal < 0 ? 0 : FORESIGHT;
  const width = (1 - share) * domain.leastCost * Math.min(...domain.spacing) * ROUNDING;
  const longest = (domain.mostCost + share * domain.leastCost) * Math.hypot(...domain.spacing);
  let ring = 4;
  while (ring < longest / width + 3) ring *= 2;
  const placeOf = (voxel: number): [number, number, number] => {
    const [nx, ny] = domain.size;
    return [voxel % nx, Math.floor(voxel / nx) % ny, Math.floor(voxel / (nx * ny))];
  };
  const [a, b] = [placeOf(source), placeOf(goal)];
  const perMm = FORESIGHT * domain.leastCost * ROUNDING;
  const apartMm = Math.hypot(...domain.spacing.map((mm, axis) => (a[axis]! - b[axis]!) * mm));
  const room = domain.memory.addFront(source, ring, width, goal < 0 ? null : Float64Array.of(...a, ...b, perMm / 2, apartMm));
  room.mark[source] = FROM_NOWHERE;
  return {
    domain,
    source,
    get distance() {
      return room.distance;
    },
    get mark() {
      return room.mark;
    },
    settled: 0,
    exhausted: false,
    reach: 0,
    goal: goal < 0 ? null : { perMm, apartMm },
    width,
    room,
  };
}

/** Where two fronts met: the cheapest sum so far and the voxel it runs through. */
export interface Meeting {
  readonly other: Front;
  best: number;
  voxel: number;
}

/**
 * Settles up to `budget` more voxels, in exact order of distance; stops early when `target` is settled and, with a finite
 * budget, after a voxel whose surroundings had no costs yet, since filling them takes long. An edge costs the mean of its two
 * voxels' costs times its length in millimetres. The search itself is compiled, see `wasm/front.wat`.
 * @param target voxel to stop at, or -1.
 * @param meeting kept up to date with the cheapest path through the other front, of the same domain; see `meetFronts`.
 * @returns number of voxels settled by this call.
 * @throws what filling the costs throws; the front then stands as before that voxel, and can be expanded again.
 * @source Dijkstra 1959; buckets no wider than the smallest edge, Dial 1969, Dinic 1978.
 */
export function expandFront(front: Front, budget: number, target = -1, meeting: Meeting | null = null): number {
  const { domain, room } = front;
  const { memory } = domain;
  if (meeting) {
    if (meeting.other.domain !== domain) throw new RangeError("two fronts that meet belong to one domain");
    memory.setMeeting(room, meeting.best, meeting.voxel);
  }
  const before = front.settled;
  const brief = budget !== Number.POSITIVE_INFINITY;
  for (let left = budget; left > 0; ) {
    const bite = Math.min(left, STRIDE);
    try {
      memory.expand(room, bite, target, meeting?.other.room.address ?? 0, brief);
    } finally {
      front.settled += memory.settled(room);
      front.exhausted = memory.waiting(room) === 0;
      front.reach = memory.bucketOf(room) * front.width;
    }
    left -= memory.settled(room);
    if (memory.settled(room) < bite || (target >= 0 && hasReached(front, target))) break;
  }
  if (meeting) Object.assign(meeting, memory.meeting(room));
  return front.settled - before;
}

/** True when the voxel's cheapest path is final. */
export function hasReached(front: Front, voxel: number): boolean {
  return (front.mark[voxel] ?? 0) >= SETTLED;
}

/**
 * Fills `out` with the cheapest path from `voxel` back to the source, both included, as voxel numbers of the box.
 * @returns its length, or -1 when the voxel has no path yet or `out` is too short (a path never has more voxels than the box).
 */
export function walkBackInto(front: Front, voxel: number, out: Int32Array): number {
  const { mark, domain } = front;
  const [nx, ny] = domain.size;
  let v = voxel;
  for (let count = 0; count < out.length; count++) {
    const code = (mark[v] ?? 0) & CODE;
    if (code === 0) return -1;
    out[count] = v;
    if (code === FROM_NOWHERE) return count + 1;
    const [x, y, z] = STEPS[code - 1]!;
    v -= x + y * nx + z * nx * ny;
  }
  return -1;
}

/** The cheapest path from `voxel` back to the source, as voxel numbers; null when there is none yet. */
export function walkBack(front: Front, voxel: number): Int32Array | null {
  for (let room = 1024; ; room *= 4) {
    const out = new Int32Array(room);
    const count = walkBackInto(front, voxel, out);
    if (count >= 0) return out.slice(0, count);
    if ((front.mark[voxel] ?? 0) === 0 || room > front.mark.length) return null;
  }
}
