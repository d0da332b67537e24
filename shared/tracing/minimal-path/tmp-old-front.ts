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

/** The voxels a front may enter: a box of a level's grid, and their costs, filled when the front first arrives. */
export interface FrontDomain {
  /** nx, ny, nz. */
  readonly size: readonly [number, number, number];
  /** Millimetres between voxel centres, x, y, z. */
  readonly spacing: readonly [number, number, number];
  /** shape [nz, ny, nx], cost per millimetre; 0 = not known yet, Infinity = impassable; shared between fronts. */
  readonly cost: Float32Array;
  readonly leastCost: number;
  readonly mostCost: number;
  /** Fills the costs of the 32-voxel tile that holds `voxel`, all above 0. Never called when no cost is 0. */
  readonly fill?: (voxel: number) => void;
}

/** A front that has left its source: exact distances, settled in order, kept while it grows. */
export interface Front {
  readonly domain: FrontDomain;
  readonly source: number;
  /** shape [nz, ny, nx]; cost of the cheapest known path from the source; meaningless where `mark` is 0. */
  readonly distance: Float64Array;
  /** shape [nz, ny, nx]; 0 = not seen; low five bits = 1 + neighbour it came from (27 = source); 32 = settled. */
  readonly mark: Uint8Array;
  /** Number of settled voxels. */
  settled: number;
  /** No label is left to settle. */
  exhausted: boolean;
  /** Labels are settled in the order of their distance, with a goal of distance + foresight; those below this are final. */
  reach: number;
  readonly goal: Goal | null;
  readonly queue: BucketQueue;
}

/**
 * Where a front is wanted. Its labels are settled in the order of distance + perMm / 2 (way to the goal - way from the source -
 * way from source to goal), ways as the crow flies: those that lead away wait. Distances stay exact.
 */
interface Goal {
  /** Source and goal: x, y, z in voxels of the box, each. */
  readonly source: readonly [number, number, number];
  readonly voxel: readonly [number, number, number];
  /** Cost per millimetre that every way is sure to have. */
  readonly perMm: number;
  /** Way from source to goal as the crow flies, millimetres. */
  readonly apartMm: number;
}

/** Buckets of labels in a ring; a label may wait in several buckets, only its first arrival counts. */
interface BucketQueue {
  readonly width: number;
  readonly heads: Int32Array;
  voxels: Int32Array;
  next: Int32Array;
  /** First free entry, or -1. */
  free: number;
  used: number;
  waiting: number;
  /** Number of the bucket being emptied; its place in the ring is the remainder. */
  current: number;
}

/** Offsets of the 26 neighbours, x, y, z, in the order of the neighbour codes 1 to 26. */
const STEPS: readonly (readonly [number, number, number])[] = (() => {
  const steps: [number, number, number][] = [];
  for (let z = -1; z <= 1; z++)
    for (let y = -1; y <= 1; y++) for (let x = -1; x <= 1; x++) if (x !== 0 || y !== 0 || z !== 0) steps.push([x, y, z]);
  return steps;
})();

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
  const front: Front = {
    domain,
    source,
    distance: new Float64Array(voxels),
    mark: new Uint8Array(voxels),
    settled: 0,
    exhausted: false,
    reach: 0,
    goal: goal < 0 ? null : goalOf(domain, source, goal),
    queue: {
      width,
      heads: new Int32Array(ring).fill(-1),
      voxels: new Int32Array(4096),
      next: new Int32Array(4096),
      free: -1,
      used: 1,
      waiting: 1,
      current: 0,
    },
  };
  front.mark[source] = FROM_NOWHERE;
  front.queue.voxels[0] = source;
  front.queue.next[0] = -1;
  front.queue.heads[0] = 0;
  return front;
}

function goalOf(domain: FrontDomain, source: number, goal: number): Goal {
  const [nx, ny] = domain.size;
  const placeOf = (voxel: number) => [voxel % nx, Math.floor(voxel / nx) % ny, Math.floor(voxel / (nx * ny))] as const;
  const [a, b] = [placeOf(source), placeOf(goal)];
  const apartMm = Math.hypot(...domain.spacing.map((mm, axis) => (a[axis]! - b[axis]!) * mm));
  return { source: a, voxel: b, perMm: FORESIGHT * domain.leastCost * ROUNDING, apartMm };
}

/** What a label at a voxel of the box has to wait for, beside its distance; not below 0 together with the distance. */
function foresight(
  { source, voxel, perMm, apartMm }: Goal,
  spacing: FrontDomain["spacing"],
  x: number,
  y: number,
  z: number,
): number {
  const [sx, sy, sz] = spacing;
  const toX = (x - voxel[0]) * sx;
  const toY = (y - voxel[1]) * sy;
  const toZ = (z - voxel[2]) * sz;
  const fromX = (x - source[0]) * sx;
  const fromY = (y - source[1]) * sy;
  const fromZ = (z - source[2]) * sz;
  const to = Math.sqrt(toX * toX + toY * toY + toZ * toZ);
  const from = Math.sqrt(fromX * fromX + fromY * fromY + fromZ * fromZ);
  return (perMm / 2) * (to - from - apartMm);
}

/** Where two fronts met: the cheapest sum so far and the voxel it runs through. */
export interface Meeting {
  readonly other: Front;
  best: number;
  voxel: number;
}

/**
 * Settles up to `budget` more voxels (at least the rest of the bucket at hand), in exact order of distance; stops early
 * when `target` is settled. An edge costs the mean of its two voxels' costs times its length in millimetres.
 * @param target voxel to stop at, or -1.
 * @param meeting kept up to date with the cheapest path through the other front; see `meetFronts`.
 * @returns number of voxels settled by this call.
 * @source Dijkstra 1959; buckets no wider than the smallest edge, Dial 1969, Dinic 1978.
 */
export function expandFront(front: Front, budget: number, target = -1, meeting: Meeting | null = null): number {
  const { distance, mark, queue, domain, goal } = front;
  const { cost, fill } = domain;
  const [nx, ny, nz] = domain.size;
  const plane = nx * ny;
  const offsets = new Int32Array(26);
  const halves = new Float64Array(26);
  STEPS.forEach(([x, y, z], code) => {
    offsets[code] = x + y * nx + z * plane;
    halves[code] = Math.hypot(x * domain.spacing[0], y * domain.spacing[1], z * domain.spacing[2]) / 2;
  });
  const { heads, width } = queue;
  const ringMask = heads.length - 1;
  const perWidth = 1 / width;
  const otherMark = meeting?.other.mark ?? null;
  const otherDistance = meeting?.other.distance ?? null;
  let { voxels, next } = queue;
  const before = front.settled;
  const last = before + budget;
  let settled = before;
  let found = false;
  while (queue.waiting > 0 && settled < last && !found) {
    let entry = heads[queue.current & ringMask]!;
    if (entry < 0) {
      queue.current++;
      continue;
    }
    while (entry >= 0) {
      const v = voxels[entry]!;
      heads[queue.current & ringMask] = next[entry]!;
      next[entry] = queue.free;
      queue.free = entry;
      queue.waiting--;
      if (mark[v]! < SETTLED) {
        mark[v] = mark[v]! | SETTLED;
        settled++;
        const d = distance[v]!;
        if (v === target) found = true;
        if (otherMark !== null && otherMark[v] !== 0) {
          const sum = d + otherDistance![v]!;
          if (sum < meeting!.best) {
            meeting!.best = sum;
            meeting!.voxel = v;
          }
        }
        let c = cost[v]!;
        if (c === 0) {
          fill!(v);
          c = cost[v]!;
        }
        const x = v % nx;
        const y = ((v - x) / nx) % ny;
        const z = (v - x - y * nx) / plane;
        const border = x === 0 || y === 0 || z === 0 || x === nx - 1 || y === ny - 1 || z === nz - 1;
        for (let code = 0; code < 26; code++) {
          if (border && !inBox(x, y, z, code, nx, ny, nz)) continue;
          const u = v + offsets[code]!;
          const seen = mark[u]!;
          if (seen >= SETTLED) continue;
          let cu = cost[u]!;
          if (cu === 0) {
            fill!(u);
            cu = cost[u]!;
          }
          const candidate = d + (c + cu) * halves[code]!;
          if ((seen === 0 && candidate < Number.POSITIVE_INFINITY) || candidate < distance[u]!) {
            distance[u] = candidate;
            mark[u] = code + 1;
            let slot = queue.free;
            if (slot >= 0) queue.free = next[slot]!;
            else {
              slot = queue.used++;
              if (slot >= voxels.length) {
                voxels = grown(voxels);
                next = grown(next);
                queue.voxels = voxels;
                queue.next = next;
              }
            }
            let key = candidate;
            if (goal !== null) {
              const [stepX, stepY, stepZ] = STEPS[code]!;
              // The source alone stands at 0; rounding must not put a label beside it below.
              key = Math.max(0, candidate + foresight(goal, domain.spacing, x + stepX, y + stepY, z + stepZ));
            }
            const place = Math.floor(key * perWidth) & ringMask;
            voxels[slot] = u;
            next[slot] = heads[place]!;
            heads[place] = slot;
            queue.waiting++;
          }
        }
      }
      entry = heads[queue.current & ringMask]!;
    }
  }
  front.settled = settled;
  front.exhausted = queue.waiting === 0;
  front.reach = queue.current * width;
  return settled - before;
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

function inBox(x: number, y: number, z: number, code: number, nx: number, ny: number, nz: number): boolean {
  const [dx, dy, dz] = STEPS[code]!;
  const ux = x + dx;
  const uy = y + dy;
  const uz = z + dz;
  return ux >= 0 && uy >= 0 && uz >= 0 && ux < nx && uy < ny && uz < nz;
}

function grown(array: Int32Array): Int32Array<ArrayBuffer> {
  const larger = new Int32Array(array.length * 2);
  larger.set(array);
  return larger;
}
