import type { Vec3 } from "#shared/geometry/types.ts";
import { normalise, subtract } from "#shared/geometry/vec3.ts";
import type { ThinPath } from "#shared/tracing/strings/thin-tree.ts";

/** A run of points away from a seed, from a fork (or the seed) to the next fork or end. */
export interface OutwardBranch {
  /** Point numbers, the inner end first; a child begins with its parent's last point. */
  readonly points: readonly number[];
  /** Number of the branch it leaves; -1 for those that begin at the seed. */
  readonly parent: number;
}

/** The paths that hang together with the seed, as branches away from it, parents before their children. @param seed number of a point on one of the paths */
export function outwardBranches(paths: readonly ThinPath[], seed: number): OutwardBranch[] {
  const out: OutwardBranch[] = [];
  const atEnd = new Map<number, number[]>();
  paths.forEach((path, n) => {
    for (const end of [path[0]!, path.at(-1)!]) atEnd.set(end, [...(atEnd.get(end) ?? []), n]);
  });
  const used = new Set<number>();
  const queue: { points: number[]; parent: number }[] = [];
  const leave = (node: number, parent: number) => {
    for (const n of atEnd.get(node) ?? []) {
      if (used.has(n)) continue;
      used.add(n);
      const path = paths[n]!;
      queue.push({ points: path[0] === node ? [...path] : [...path].reverse(), parent });
    }
  };
  const within = paths.findIndex((path) => path.indexOf(seed) > 0 && path.indexOf(seed) < path.length - 1);
  if (within >= 0) {
    used.add(within);
    const path = paths[within]!;
    const at = path.indexOf(seed);
    queue.push({ points: path.slice(0, at + 1).reverse(), parent: -1 }, { points: path.slice(at), parent: -1 });
  } else leave(seed, -1);
  for (let n = 0; n < queue.length; n++) {
    const branch = queue[n]!;
    out.push(branch);
    leave(branch.points.at(-1)!, n);
  }
  return out;
}

/** Unit direction of a line of places at one of them, outwards, from the places within `reachMm` on both sides. */
export function directionAt(places: readonly Vec3[], n: number, reachMm: number): Vec3 {
  const far = (step: 1 | -1) => {
    let at = n;
    for (let next = n + step; next >= 0 && next < places.length; next += step) {
      at = next;
      if (Math.hypot(...subtract(places[next]!, places[n]!)) >= reachMm) break;
    }
    return places[at]!;
  };
  return normalise(subtract(far(1), far(-1)));
}
