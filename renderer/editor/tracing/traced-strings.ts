import type { TracedString } from "#shared/checks/guide-warnings.ts";
import { arcLengths, nearestOnPolyline, pointAt, resample } from "#shared/geometry/polyline.ts";
import { type PointMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import type { CrossLink, Strand, TreeDocument } from "#shared/trees/document.ts";
import { polylineOf } from "#shared/trees/geometry.ts";

/** Radius of a string whose own is nowhere known, millimetres: common practice, no source. */
const USUAL_RADIUS_MM = 0.15;
/** Lines are looked at in steps of so much: finer than any string is wide. */
const STEP_MM = 0.15;
/** Only strings that come so near to the pin take part in closing the way. */
const NEAR_MM = 25;
/** A detour is held by pins so far apart, where it runs within so many radii of a closed string, and not near its ends. */
const PIN_STEP_MM = 1;
const BESIDE_RADII = 4;
const END_CLEARANCE_MM = 0.5;

/** Records are never changed, so what was read from one holds as long as it is there. */
const known = new WeakMap<Strand | CrossLink, TracedString>();

/** All strands and cross-links as strings of their typical radius, but for the strand under way. */
export function tracedStrings(document: TreeDocument, except: string | null): TracedString[] {
  return [...document.strands.values(), ...document.crossLinks.values()]
    .filter((line) => line.id !== except && line.curve !== null)
    .map((line) => {
      const before = known.get(line);
      if (before !== undefined) return before;
      const curve = document.curves.get(line.curve!);
      const radii = [...(curve?.radii ?? [])].filter(Number.isFinite).sort((a, b) => a - b);
      const string = {
        strand: line.id,
        line: resample(polylineOf(document, line), STEP_MM),
        radiusMm: radii[radii.length >> 1] ?? USUAL_RADIUS_MM,
      };
      known.set(line, string);
      return string;
    });
}

/** Strings near a pin, as the engine closes them for its guide. */
export function closedAround(strings: readonly TracedString[], pin: Vec3): ImpassableString[] {
  return strings
    .filter(({ line }) => line.length > 1 && nearestOnPolyline(line, pin).distance <= NEAR_MM)
    .map(({ line, radiusMm }) => ({ points: line.flatMap((point) => [...point]), radiusMm }));
}

/**
 * Pins that keep a committed curve on the way that a guide took around closed strings: the curve depends on pins alone, so
 * where the guide runs beside a closed string its way is pinned. None while only a coarse guide is there.
 */
export function detourPins(
  guide: { readonly points: readonly Vec3[]; readonly coarse: boolean } | null,
  to: Vec3,
  strings: readonly TracedString[],
): PointMm[] {
  const end = guide?.points.at(-1);
  if (guide === null || guide.coarse || end === undefined || distance(end, to) > END_CLEARANCE_MM) return [];
  const total = arcLengths(guide.points).at(-1)!;
  const pins: PointMm[] = [];
  for (let s = PIN_STEP_MM; s < total - END_CLEARANCE_MM; s += PIN_STEP_MM) {
    const place = pointAt(guide.points, s);
    const isBeside = strings.some(({ line, radiusMm }) => nearestOnPolyline(line, place).distance < BESIDE_RADII * radiusMm);
    if (isBeside) pins.push(roundPoint(place));
  }
  return pins;
}
