import { arcLengths, nearestOnPolyline, pointAt, resample } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, distance, dot, normalise, scale, subtract } from "#shared/geometry/vec3.ts";

/** A strand already traced, as the warnings of a guide need it. */
export interface TracedString {
  readonly strand: string;
  /** From node to node, millimetres. */
  readonly line: readonly Vec3[];
  /** Its typical radius, millimetres. */
  readonly radiusMm: number;
}

/** Something about a guide that a person should look at before the next pin, with its place. */
export type GuideWarning =
  /** It runs inside a traced string for `lengthMm`. */
  | { readonly kind: "rides"; readonly strand: string; readonly at: Vec3; readonly lengthMm: number }
  /** It begins inside a traced string and leaves it: the fork belongs at `at`, a place on that string. */
  | { readonly kind: "leaves"; readonly strand: string; readonly at: Vec3; readonly lengthMm: number }
  /** It arrives inside a traced string: the two meet at `at`, a place on that string. */
  | { readonly kind: "meets"; readonly strand: string; readonly at: Vec3; readonly lengthMm: number }
  /** The image does not show it for a stretch between two that it shows: it may go from one string to another. */
  | { readonly kind: "jumps"; readonly at: Vec3; readonly lengthMm: number }
  /** It crosses a traced string where both would run straighter with their tails exchanged. */
  | { readonly kind: "tails"; readonly strand: string; readonly at: Vec3; readonly bendDegrees: number };

// All limits: common practice, no source. They only tell when a person is asked to look.
/** The guide is looked at in steps of so much. */
const STEP_MM = 0.1;
/** A guide rides a string when it is inside for two of its diameters, and at least so far. */
const LEAST_RIDE_MM = 0.5;
/** Outside by this much after a ride, the guide has left. */
const LEAST_AWAY_MM = 0.3;
/** A stretch that the image does not show is a jump up to this length; longer ones are told as such. */
const LONGEST_JUMP_MM = 1.5;
/** So much that the image shows must lie on both sides of a jump. */
const LEAST_SHOWN_MM = 0.5;
/** Exchanged tails are told when both strings together would bend less by so much. */
const LEAST_STRAIGHTER_DEGREES = 30;
/** Directions are taken between one and three local diameters from the place. */
const DIRECTION_FROM_DIAMETERS = 1;
const DIRECTION_TO_DIAMETERS = 3;

/**
 * What a person should look at along a guide, in order of their place along it.
 * @param guide from the last pin to the pointer, millimetres.
 * @param doubtful first and last point of each stretch of the guide that the image does not show.
 * @param strings the strands traced before, without the one under way.
 */
export function guideWarnings(
  guide: readonly Vec3[],
  doubtful: readonly (readonly [number, number])[],
  strings: readonly TracedString[],
): GuideWarning[] {
  if (guide.length < 2) return [];
  const line = resample(guide, STEP_MM);
  const found = strings
    .filter((string) => string.line.length > 1 && mayTouch(line, string))
    .flatMap((string) => besideString(line, string));
  return [...found, ...jumps(guide, doubtful)].sort((a, b) => along(guide, a.at) - along(guide, b.at));
}

function along(line: readonly Vec3[], at: Vec3): number {
  return nearestOnPolyline(line, at).at;
}

/** Boxes first: most strings are nowhere near. */
function mayTouch(line: readonly Vec3[], { line: other, radiusMm }: TracedString): boolean {
  return ([0, 1, 2] as const).every((axis) => {
    const [low, high] = range(line, axis);
    const [otherLow, otherHigh] = range(other, axis);
    return low <= otherHigh + 2 * radiusMm && otherLow - 2 * radiusMm <= high;
  });
}

function range(line: readonly Vec3[], axis: 0 | 1 | 2): [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const point of line) {
    low = Math.min(low, point[axis]);
    high = Math.max(high, point[axis]);
  }
  return [low, high];
}

/** Runs of the guide inside one string, told by where they begin and end. */
function besideString(line: readonly Vec3[], string: TracedString): GuideWarning[] {
  const { strand, radiusMm } = string;
  const away = line.map((point) => nearestOnPolyline(string.line, point).distance);
  const step = arcLengths(line)[1]!;
  const found: GuideWarning[] = [];
  for (let first = 0; first < line.length; first++) {
    if (away[first]! >= radiusMm) continue;
    let last = first;
    while (last + 1 < line.length && away[last + 1]! < radiusMm) last++;
    const lengthMm = step * (last - first);
    const isRide = lengthMm >= Math.max(LEAST_RIDE_MM, 4 * radiusMm);
    const clearBefore = step * first >= LEAST_AWAY_MM;
    const clearAfter = step * (line.length - 1 - last) >= LEAST_AWAY_MM + radiusMm;
    if (isRide && !clearBefore && clearAfter)
      found.push({ kind: "leaves", strand, at: partingPlace(line.slice(last), string, line[last]!), lengthMm });
    else if (!clearAfter && clearBefore && last === line.length - 1)
      found.push({ kind: "meets", strand, at: partingPlace(line.slice(0, first + 1).reverse(), string, line[first]!), lengthMm });
    else if (isRide) found.push({ kind: "rides", strand, at: line[Math.floor((first + last) / 2)]!, lengthMm });
    else if (clearBefore && clearAfter) {
      const bendDegrees = gainOfExchange(line, string, line[Math.floor((first + last) / 2)]!);
      if (bendDegrees >= LEAST_STRAIGHTER_DEGREES)
        found.push({ kind: "tails", strand, at: line[Math.floor((first + last) / 2)]!, bendDegrees });
    }
    first = last;
  }
  return found;
}

/**
 * The place on a string from which a line parts, as a fork is defined: nearest to the parting line's own direction, taken
 * between one and three diameters outside, carried back.
 * @param parting begins where the line comes out of the string.
 */
function partingPlace(parting: readonly Vec3[], { line, radiusMm }: TracedString, exit: Vec3): Vec3 {
  const a = pointAt(parting, 2 * radiusMm * DIRECTION_FROM_DIAMETERS);
  const b = pointAt(parting, 2 * radiusMm * DIRECTION_TO_DIAMETERS);
  const onString = nearestOnPolyline(line, exit);
  if (distance(a, b) === 0) return pointAt(line, onString.at);
  const back = normalise(subtract(a, b));
  const reach = 2 * radiusMm * DIRECTION_TO_DIAMETERS;
  let best = { at: onString.at, distance: Number.POSITIVE_INFINITY };
  for (let s = onString.at - reach; s <= onString.at + reach; s += STEP_MM / 4) {
    const place = pointAt(line, s);
    const ahead = Math.max(0, dot(subtract(place, a), back));
    const off = distance(place, add(a, scale(back, ahead)));
    if (off < best.distance) best = { at: s, distance: off };
  }
  return pointAt(line, best.at);
}

/** Degrees that guide and string would bend less in sum at a crossing with their tails exchanged; negative when more. */
function gainOfExchange(guide: readonly Vec3[], { line, radiusMm }: TracedString, at: Vec3): number {
  const [g1, g2] = legsFrom(guide, at, radiusMm);
  const [s1, s2] = legsFrom(line, at, radiusMm);
  if (!g1 || !g2 || !s1 || !s2) return Number.NEGATIVE_INFINITY;
  const drawn = bend(g1, g2) + bend(s1, s2);
  return drawn - Math.min(bend(g1, s1) + bend(g2, s2), bend(g1, s2) + bend(g2, s1));
}

/** Unit directions away from a place towards both ends of a line; null where the line ends too soon. */
function legsFrom(line: readonly Vec3[], at: Vec3, radiusMm: number): [Vec3 | null, Vec3 | null] {
  const { at: here } = nearestOnPolyline(line, at);
  const total = arcLengths(line).at(-1)!;
  const leg = (sign: 1 | -1): Vec3 | null => {
    const near = here + sign * 2 * radiusMm * DIRECTION_FROM_DIAMETERS;
    const far = here + sign * 2 * radiusMm * DIRECTION_TO_DIAMETERS;
    return far < 0 || far > total ? null : normalise(subtract(pointAt(line, far), pointAt(line, near)));
  };
  return [leg(-1), leg(1)];
}

/** Degrees by which a line turns that comes along one leg and goes on along the other; 0 = straight on. */
function bend(a: Vec3, b: Vec3): number {
  return (Math.acos(Math.max(-1, Math.min(1, -dot(a, b)))) * 180) / Math.PI;
}

function jumps(guide: readonly Vec3[], doubtful: readonly (readonly [number, number])[]): GuideWarning[] {
  const arcs = arcLengths(guide);
  const total = arcs.at(-1)!;
  return doubtful.flatMap(([first, last], i) => {
    const [from, to] = [arcs[first] ?? total, arcs[last] ?? total];
    const before = from - (i === 0 ? 0 : arcs[doubtful[i - 1]![1]]!);
    const after = (i === doubtful.length - 1 ? total : arcs[doubtful[i + 1]![0]]!) - to;
    const isJump = to - from <= LONGEST_JUMP_MM && before >= LEAST_SHOWN_MM && after >= LEAST_SHOWN_MM;
    return isJump ? [{ kind: "jumps" as const, at: pointAt(guide, (from + to) / 2), lengthMm: to - from }] : [];
  });
}
