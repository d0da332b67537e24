import { bestMatching } from "#shared/compare/edit-distance/assignment.ts";
import { resample } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** Reach of the affinity, millimetres: lines farther apart attract each other no more. */
export const AFFINITY_REACH_MM = 1;

/** Step at which affinities sample lines, millimetres: well below their reach. */
export const AFFINITY_STEP_MM = 0.1;

/** Lines of one item (a tree, a strand): shape [lines][points]. */
export type ItemLines = readonly (readonly Vec3[])[];

export interface AffinityTable {
  /** shape [a, b], row-major: integral over both centrelines of max(0, 1 - distance / 1 mm), millimetres. */
  readonly affinity: Float64Array;
  /** shape [a, b]: length of A's item within 1 mm of B's item, and the other way round; millimetres. */
  readonly nearA: Float64Array;
  readonly nearB: Float64Array;
  readonly lengthA: Float64Array;
  readonly lengthB: Float64Array;
}

/** Affinity of every item of A with every item of B. @param step sampling step along the lines, millimetres. */
export function affinities(a: readonly ItemLines[], b: readonly ItemLines[], step: number): AffinityTable {
  const table = {
    affinity: new Float64Array(a.length * b.length),
    nearA: new Float64Array(a.length * b.length),
    nearB: new Float64Array(a.length * b.length),
  };
  const lengthA = new Float64Array(a.length);
  const lengthB = new Float64Array(b.length);
  integrate(a, b, step, lengthA, (i, j, gain, near) => {
    table.affinity[i * b.length + j]! += gain;
    table.nearA[i * b.length + j]! += near;
  });
  integrate(b, a, step, lengthB, (j, i, gain, near) => {
    table.affinity[i * b.length + j]! += gain;
    table.nearB[i * b.length + j]! += near;
  });
  return { ...table, lengthA, lengthB };
}

function integrate(
  items: readonly ItemLines[],
  others: readonly ItemLines[],
  step: number,
  lengths: Float64Array,
  add: (item: number, other: number, gain: number, near: number) => void,
): void {
  const owner = others.flatMap((item, k) => item.map(() => k));
  const index = new SegmentIndex(others.flat());
  items.forEach((item, i) => {
    for (const line of item) {
      const samples = resample(line, step);
      for (let k = 1; k < samples.length; k++) {
        const [p, q] = [samples[k - 1]!, samples[k]!];
        const piece = Math.hypot(q[0] - p[0], q[1] - p[1], q[2] - p[2]);
        const middle: Vec3 = [(p[0] + q[0]) / 2, (p[1] + q[1]) / 2, (p[2] + q[2]) / 2];
        lengths[i]! += piece;
        const nearest = new Map<number, number>();
        index.within(middle, AFFINITY_REACH_MM, (found, d) => {
          const other = owner[found]!;
          const known = nearest.get(other);
          if (known === undefined || d < known) nearest.set(other, d);
        });
        for (const [other, d] of nearest) add(i, other, piece * (1 - d / AFFINITY_REACH_MM), piece);
      }
    }
  });
}

/** Share of the shorter item that must lie within reach of the other for a pair to be a pair. */
const NEAR_SHARE = 0.1;

/**
 * One-to-one pairs of greatest total affinity; a pair needs a tenth of the shorter item's length within 1 mm. Edit distance
 * plays no part: it would exchange neighbours to look better.
 * @returns index in B for each item of A, -1 = unmatched.
 */
export function matchByAffinity(table: AffinityTable): Int32Array {
  const [rows, columns] = [table.lengthA.length, table.lengthB.length];
  const gain = table.affinity.map((value, at) => {
    const [i, j] = [Math.floor(at / columns), at % columns];
    const aIsShorter = table.lengthA[i]! <= table.lengthB[j]!;
    const share = aIsShorter ? table.nearA[at]! / table.lengthA[i]! : table.nearB[at]! / table.lengthB[j]!;
    return share >= NEAR_SHARE ? value : 0;
  });
  return bestMatching(rows, columns, gain);
}
