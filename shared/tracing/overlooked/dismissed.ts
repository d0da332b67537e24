import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { OverlookedStretch } from "#shared/tracing/overlooked/stretch.ts";

/** First word of the key of a dismissed stretch; the places along it follow. */
const WORD = "overlooked";
/** Places in a key are at most this far apart along the stretch. */
const KEY_STEP_MM = 1;
/** A stretch is the dismissed one where it lies this near to it: a search anew finds it some voxels beside. */
const SAME_MM = 0.4;
/** ... along this share of its length. */
const SAME_SHARE = 0.5;

/**
 * The key a stretch is dismissed under: its places about a millimetre apart, in hundredths of a millimetre, so that the same place is
 * found again whatever a later search calls it.
 */
export function overlookedKey({ points }: Pick<OverlookedStretch, "points">): string {
  const places = placesOf(points);
  const kept: Vec3[] = [];
  let since = Number.POSITIVE_INFINITY;
  places.forEach((place, n) => {
    if (n > 0) since += distance(places[n - 1]!, place);
    if (since < KEY_STEP_MM && n < places.length - 1) return;
    kept.push(place);
    since = 0;
  });
  return [WORD, ...kept.map((place) => place.map((mm) => mm.toFixed(2)).join(","))].join(" ");
}

/** Dismissed places, by the keys of a pass's dismissals; other findings' keys are passed over. */
export interface DismissedStretches {
  /** Key of the dismissal that a stretch lies along; null when there is none. */
  keyOf(stretch: Pick<OverlookedStretch, "points">): string | null;
}

/** Reads the dismissed stretches among dismissal keys. */
export function dismissedStretches(keys: Iterable<string>): DismissedStretches {
  const own: { key: string; places: Vec3[] }[] = [];
  for (const key of keys) {
    const [word, ...texts] = key.split(" ");
    if (word !== WORD) continue;
    const places = texts.map((text) => text.split(",").map(Number));
    if (places.length > 0 && places.every((place) => place.length === 3 && place.every(Number.isFinite)))
      own.push({ key, places: places as unknown as Vec3[] });
  }
  const index = new SegmentIndex(own.map(({ places }) => places));
  return {
    keyOf({ points }) {
      if (index.segments === 0) return null;
      const places = placesOf(points);
      const counts = new Map<number, number>();
      for (const place of places) {
        const { distance: away, segment } = index.nearest(place);
        if (away <= SAME_MM) counts.set(index.lineOf[segment]!, (counts.get(index.lineOf[segment]!) ?? 0) + 1);
      }
      for (const [line, count] of [...counts].sort(([a], [b]) => a - b))
        if (count >= SAME_SHARE * places.length) return own[line]!.key;
      return null;
    },
  };
}

function placesOf(flat: readonly number[]): Vec3[] {
  return Array.from({ length: Math.floor(flat.length / 3) }, (_, i): Vec3 => [flat[3 * i]!, flat[3 * i + 1]!, flat[3 * i + 2]!]);
}
