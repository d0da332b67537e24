import type { Vec3 } from "#shared/geometry/types.ts";
import { distance, dot, normalise, subtract } from "#shared/geometry/vec3.ts";
import { excessAt } from "#shared/tracing/strings/bright-share.ts";
import type { StringField, StringPoint } from "#shared/tracing/strings/string-field.ts";

/** All points that hang together with a seed, and how. */
export interface GrownString {
  readonly points: readonly StringPoint[];
  /** Point ids, cost in millimetres; `bridge` true where the two lie apart and only the brightness between them joins them. */
  readonly links: readonly StringLink[];
}

export interface StringLink {
  readonly a: number;
  readonly b: number;
  readonly cost: number;
  readonly bridge: boolean;
}

/** Points this many voxels apart, on each axis, are neighbours on one string. */
const STEP_VOXELS = 2;
/** A bridge leaves at most this much off the direction in which its string ends: cosine of 75 degrees. */
const LEAST_ALONG = 0.25;
/** The brightness between the ends of a bridge, as a share of the fainter end's, at least. */
const BRIDGE_BRIGHTNESS = 0.5;
/** A bridge costs this many times its length: neighbours come first. */
const BRIDGE_COST = 4;
/** Longest bridge, millimetres, beside the strings' own radii. */
const MOST_BRIDGE_VOXELS = 3;
const RADII_OF_TARGET = 1.4;
/** Two strings side by side are at least this share of their radii apart. */
const RIPPLE_REACH = 0.8;

/**
 * Grows the string that a point lies on, step by step: neighbouring points first; then, where a string ends beside another (at a
 * fork, where the flank of the thicker one hides the thinner one's crest) or in a short gap, the bridge between them when it is
 * bright all along. What is grown does not depend on the order. Yields after each piece of work, so that a caller can stop or show it.
 * @param allowed false for points that are not to be entered.
 */
export function* growString(
  field: StringField,
  seed: StringPoint,
  mostPoints: number,
  allowed: (point: StringPoint) => boolean = () => true,
): Generator<GrownString, GrownString> {
  const finest = Math.min(...field.spacing);
  const inside = new Set<number>([seed.id]);
  const points: StringPoint[] = [seed];
  const links: StringLink[] = [];
  const tips = new Map<number, Vec3 | null>();
  const result: GrownString = { points, links };
  const ripples = new Map<number, boolean>();
  const usable = (point: StringPoint): boolean => {
    let ripple = ripples.get(point.id);
    if (ripple === undefined) {
      ripple = near(point, RIPPLE_REACH * 2 * point.radiusMm).some((other) => isRippleOf(point, other));
      ripples.set(point.id, ripple);
    }
    return !ripple && allowed(point);
  };
  /** Everything of a voxel box about a point, tiles found where needed. */
  const near = (point: StringPoint, reachMm: number) => {
    const reach = field.spacing.map((mm) => Math.max(STEP_VOXELS, Math.ceil(reachMm / mm))) as [number, number, number];
    field.load(
      [point.voxel[0] - reach[0], point.voxel[1] - reach[1], point.voxel[2] - reach[2]],
      [point.voxel[0] + reach[0], point.voxel[1] + reach[1], point.voxel[2] + reach[2]],
    );
    return field.around(point.voxel, reach);
  };

  const spread = function* (from: number): Generator<GrownString> {
    for (let n = from; n < points.length && points.length < mostPoints; n++) {
      const point = points[n]!;
      for (const other of near(point, 0)) {
        if (other === point || !usable(other)) continue;
        if (inside.has(other.id)) {
          if (other.id < point.id) links.push(linkOf(point, other, false));
          continue;
        }
        inside.add(other.id);
        points.push(other);
        if (other.id < point.id) links.push(linkOf(point, other, false));
      }
      if (n % 64 === 63) yield result;
    }
  };

  /** Where the string ends at a point: the direction it ends in; null when it goes on. Looks at grown points and others alike. */
  const tipAt = (point: StringPoint): Vec3 | null => {
    let known = tips.get(point.id);
    if (known === undefined) {
      const reach = Math.max(4 * finest, point.radiusMm);
      // Only what hangs together with the point: the string beside it says nothing of where this one ends.
      const own = [point];
      const seen = new Set([point.id]);
      for (const one of own)
        for (const other of near(one, 0)) {
          if (seen.has(other.id) || distance(other.at, point.at) > reach || !usable(other)) continue;
          seen.add(other.id);
          own.push(other);
        }
      const mean = [0, 0, 0];
      for (const { at } of own) for (let c = 0; c < 3; c++) mean[c] = mean[c]! + at[c]! / own.length;
      const away = subtract(point.at, [mean[0]!, mean[1]!, mean[2]!]);
      known = Math.hypot(...away) > 0.3 * reach ? normalise(away) : null;
      tips.set(point.id, known);
    }
    return known;
  };

  const bridges = function* (): Generator<GrownString, boolean> {
    const found: { tip: StringPoint; target: StringPoint; cost: number }[] = [];
    let looked = 0;
    for (const point of points) {
      const reach = MOST_BRIDGE_VOXELS * finest + (tipAt(point) ? 4 : RADII_OF_TARGET + 1) * point.radiusMm;
      for (const other of near(point, reach)) {
        if (inside.has(other.id) || !usable(other)) continue;
        for (const [tip, target] of [
          [point, other],
          [other, point],
        ] as const) {
          const direction = tipAt(tip);
          if (!direction) continue;
          const apart = distance(tip.at, target.at);
          if (apart > MOST_BRIDGE_VOXELS * finest + tip.radiusMm + RADII_OF_TARGET * target.radiusMm) continue;
          const along = dot(normalise(subtract(target.at, tip.at)), direction);
          if (along < LEAST_ALONG || !brightBetween(field, tip, target)) continue;
          found.push({ tip, target, cost: (BRIDGE_COST * apart) / along });
        }
      }
      if (++looked % 64 === 0) yield result;
    }
    // Of all bridges between this string and one other tip, the cheapest.
    found.sort((a, b) => a.cost - b.cost || a.tip.id - b.tip.id || a.target.id - b.target.id);
    const before = points.length;
    for (const { tip, target, cost } of found) {
      const [own, other] = inside.has(tip.id) ? [tip, target] : [target, tip];
      if (!inside.has(own.id) || inside.has(other.id)) continue;
      inside.add(other.id);
      points.push(other);
      links.push({ a: own.id, b: other.id, cost, bridge: true });
      yield* spread(points.length - 1);
    }
    return points.length > before;
  };

  yield* spread(0);
  while (points.length < mostPoints && (yield* bridges()));
  return result;
}

function linkOf(a: StringPoint, b: StringPoint, bridge: boolean): StringLink {
  return { a: a.id, b: b.id, cost: distance(a.at, b.at), bridge };
}

/** True for a point of a broad, weak ripple along the flank of a stronger, thinner string: it is no string of its own. */
export function isRippleOf(
  point: Pick<StringPoint, "at" | "strength" | "radiusMm">,
  other: Pick<StringPoint, "at" | "strength" | "radiusMm">,
): boolean {
  return (
    point.radiusMm > 1.15 * other.radiusMm &&
    point.strength < 0.7 * other.strength &&
    distance(point.at, other.at) < RIPPLE_REACH * (point.radiusMm + other.radiusMm)
  );
}

/** True when all between two points is bright. */
function brightBetween(field: StringField, a: StringPoint, b: StringPoint): boolean {
  const radius = Math.min(a.radiusMm, b.radiusMm);
  const least = BRIDGE_BRIGHTNESS * Math.min(excessAt(field.context, a.at, radius), excessAt(field.context, b.at, radius));
  const steps = Math.ceil(distance(a.at, b.at) / Math.min(...field.spacing));
  for (let n = 1; n < steps; n++) {
    const t = n / steps;
    const at: Vec3 = [0, 1, 2].map((c) => a.at[c]! + t * (b.at[c]! - a.at[c]!)) as unknown as Vec3;
    if (excessAt(field.context, at, radius) < least) return false;
  }
  return true;
}
