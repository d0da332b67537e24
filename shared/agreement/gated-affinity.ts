import { AFFINITY_REACH_MM, AFFINITY_STEP_MM, type ItemLines } from "#shared/compare/affinity.ts";
import { resample } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import { mix } from "#shared/geometry/vec3.ts";

/** Two strands of different passes that come near each other. */
export interface NearPair {
  readonly a: number;
  readonly b: number;
  /** Integral over both centrelines of max(0, 1 - distance / 1 mm), millimetres. */
  readonly affinity: number;
  /** The least tolerance, in millimetres, at which at least half of each lies within it of the other; Infinity beyond reach. */
  readonly gateMm: number;
}

/** Pairs just outside the gate are told from those far outside it. */
const BEYOND_GATE = 1.1;

/**
 * All pairs of A's and B's strands with some affinity, and the tolerance at which each becomes a match.
 * @param tolerance of the matching gate, millimetres.
 */
export function nearPairs(a: readonly ItemLines[], b: readonly ItemLines[], tolerance: number): NearPair[] {
  const reach = Math.max(AFFINITY_REACH_MM, BEYOND_GATE * tolerance);
  const [fromA, fromB] = [distances(a, b, reach), distances(b, a, reach)];
  const pairs: NearPair[] = [];
  fromA.forEach((others, i) => {
    for (const [j, ofA] of [...others.near].sort((x, y) => x[0] - y[0])) {
      const ofB = fromB[j]!.near.get(i) ?? [];
      const affinity = affinityOf(ofA) + affinityOf(ofB);
      const gateMm = Math.max(halfWithin(ofA, others.length), halfWithin(ofB, fromB[j]!.length));
      if (affinity > 0) pairs.push({ a: i, b: j, affinity, gateMm });
    }
  });
  return pairs;
}

/** [distance, length] of each piece of a line that comes within reach. */
type Pieces = (readonly [number, number])[];

function distances(items: readonly ItemLines[], others: readonly ItemLines[], reach: number) {
  const owner = others.flatMap((item, k) => item.map(() => k));
  const index = new SegmentIndex(others.flat());
  return items.map((item) => {
    const near = new Map<number, Pieces>();
    let length = 0;
    for (const line of item) {
      const samples = resample(line, AFFINITY_STEP_MM);
      for (let k = 1; k < samples.length; k++) {
        const [p, q] = [samples[k - 1]!, samples[k]!];
        const piece = Math.hypot(q[0] - p[0], q[1] - p[1], q[2] - p[2]);
        length += piece;
        const nearest = new Map<number, number>();
        index.within(mix(p, q, 0.5), reach, (found, d) => {
          const other = owner[found]!;
          nearest.set(other, Math.min(d, nearest.get(other) ?? d));
        });
        for (const [other, d] of nearest) {
          if (!near.has(other)) near.set(other, []);
          near.get(other)!.push([d, piece]);
        }
      }
    }
    return { near, length };
  });
}

function affinityOf(pieces: Pieces): number {
  return pieces.reduce((sum, [d, length]) => sum + length * Math.max(0, 1 - d / AFFINITY_REACH_MM), 0);
}

function halfWithin(pieces: Pieces, length: number): number {
  let within = 0;
  for (const [d, piece] of [...pieces].sort((x, y) => x[0] - y[0])) {
    within += piece;
    if (within >= length / 2 - 1e-9) return d;
  }
  return Number.POSITIVE_INFINITY;
}
