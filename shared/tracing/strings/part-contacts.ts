import type { Vec3 } from "#shared/geometry/types.ts";
import { distance, dot, normalise, subtract } from "#shared/geometry/vec3.ts";
import type { ThinPath } from "#shared/tracing/strings/thin-tree.ts";

/** Paths with the contacts of strings parted, and where that was. */
export interface PartedPaths {
  readonly paths: readonly ThinPath[];
  /** Points added for places through which two strings run: number (from the count of points on) to the point it repeats. */
  readonly copies: ReadonlyMap<number, number>;
  /** Places of the contacts, millimetres. */
  readonly contacts: readonly Vec3[];
}

/** Two arms that leave a place at this angle or more are one string that runs through: cosine of 145 degrees. */
const STRAIGHT = -0.82;
/** Two forks joined by a path up to this many of their radii may be one contact. */
const CONTACT_RADII = 3;
/** Arms are looked at over this many radii from where they leave, and some voxels. */
const ARM_RADII = 4;
const ARM_VOXELS = 8;

/**
 * Parts strings that only touch: where four arms leave a place, or two places a few radii apart, in two straight pairs, two strings
 * cross; each keeps its own course and the join between them goes. Real forks have arms that leave to one side.
 * @param places, radii by point number.
 * @source own derivation.
 */
export function partContacts(
  paths: readonly ThinPath[],
  places: readonly Vec3[],
  radii: readonly number[],
  voxelMm: number,
): PartedPaths {
  let current: ThinPath[] = [...paths];
  const copies = new Map<number, number>();
  const contacts: Vec3[] = [];
  const original = (point: number) => copies.get(point) ?? point;
  const placeOf = (point: number) => places[original(point)]!;
  const direction = (path: ThinPath, from: number): Vec3 => {
    const line = path[0] === from ? path : [...path].reverse();
    const start = placeOf(from);
    const reach = ARM_RADII * radii[original(from)]! + ARM_VOXELS * voxelMm;
    let end = line[line.length - 1]!;
    for (const point of line)
      if (distance(placeOf(point), start) >= reach) {
        end = point;
        break;
      }
    return normalise(subtract(placeOf(end), start));
  };
  const armsAt = (node: number) => current.filter((path) => path[0] === node || path.at(-1) === node);
  const isStraight = (a: ThinPath, b: ThinPath, at: number, other = at) => dot(direction(a, at), direction(b, other)) <= STRAIGHT;

  for (let parted = true; parted; ) {
    parted = false;
    const nodes = [...new Set(current.flatMap((path) => [path[0]!, path.at(-1)!]))].sort((a, b) => a - b);
    for (const node of nodes) {
      const arms = armsAt(node);
      if (arms.length === 4) {
        const [first, ...rest] = arms as [ThinPath, ThinPath, ThinPath, ThinPath];
        const mate = rest.find((arm) => isStraight(first, arm, node) && isOtherPair(rest, arm, (a, b) => isStraight(a, b, node)));
        if (mate) {
          const copy = places.length + copies.size;
          copies.set(copy, original(node));
          contacts.push(placeOf(node));
          const others = new Set(rest.filter((arm) => arm !== mate));
          current = current.map((path) => (others.has(path) ? path.map((point) => (point === node ? copy : point)) : path));
          parted = true;
          break;
        }
      }
      if (arms.length !== 3) continue;
      const join = arms.find((path) => {
        const far = path[0] === node ? path.at(-1)! : path[0]!;
        if (far <= node || pathLength(path) > CONTACT_RADII * (radii[original(node)]! + radii[original(far)]!)) return false;
        const near = arms.filter((arm) => arm !== path);
        const beyond = armsAt(far).filter((arm) => arm !== path);
        if (near.length !== 2 || beyond.length !== 2) return false;
        return isStraight(near[0]!, near[1]!, node) && isStraight(beyond[0]!, beyond[1]!, far);
      });
      if (join) {
        contacts.push(placeOf(join[join.length >> 1]!));
        current = current.filter((path) => path !== join);
        parted = true;
        break;
      }
    }
  }
  return { paths: current, copies, contacts };

  function pathLength(path: ThinPath): number {
    let sum = 0;
    for (let i = 1; i < path.length; i++) sum += distance(placeOf(path[i - 1]!), placeOf(path[i]!));
    return sum;
  }
}

/** True when the two that are left make a pair as well. */
function isOtherPair(rest: readonly ThinPath[], mate: ThinPath, isPair: (a: ThinPath, b: ThinPath) => boolean): boolean {
  const left = rest.filter((arm) => arm !== mate);
  return left.length === 2 && isPair(left[0]!, left[1]!);
}

/**
 * The paths without those leaf paths that lie inside another string: at least half of their points within its radius. They are
 * the other crests of a thick string.
 */
export function withoutInnerSpurs(paths: readonly ThinPath[], places: readonly Vec3[], radii: readonly number[]): ThinPath[] {
  const degrees = new Map<number, number>();
  for (const path of paths) for (const end of [path[0]!, path.at(-1)!]) degrees.set(end, (degrees.get(end) ?? 0) + 1);
  return paths.filter((path) => {
    const isLeaf = degrees.get(path[0]!) === 1 || degrees.get(path.at(-1)!) === 1;
    if (!isLeaf || paths.length === 1) return true;
    const own = new Set(path);
    const others = paths.flatMap((other) => (other === path ? [] : other.filter((point) => !own.has(point))));
    const inside = path.filter((point) => others.some((other) => distance(places[point]!, places[other]!) < 0.8 * radii[other]!));
    return inside.length < path.length / 2;
  });
}
