import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** A line that belongs to a tree, or to none (cross-links). */
export interface OwnedLine {
  /** shape [n, 3], order xyz, millimetres. */
  readonly points: ArrayLike<number>;
  readonly tree: string | null;
}

/** Points of a line, first and last included; neighbours share a point, so that no gap shows between them. */
export interface Stretch {
  readonly first: number;
  readonly last: number;
  readonly agreed: boolean;
}

/**
 * Each line cut into stretches that the matching tree of the other set follows within `tolerance`, and stretches that it does
 * not. A line of a tree without a partner does not agree anywhere.
 * @param partnerOf the matching tree of the other set; undefined = none. @param tolerance millimetres
 */
export function agreedStretches(
  lines: readonly OwnedLine[],
  others: readonly OwnedLine[],
  partnerOf: (tree: string) => string | undefined,
  tolerance: number,
): Stretch[][] {
  const index = new SegmentIndex(others.map(({ points }) => pointsOf(points)));
  return lines.map(({ points, tree }) => {
    const partner = tree === null ? undefined : partnerOf(tree);
    const near = pointsOf(points).map(
      (p) => partner !== undefined && index.nearest(p, (line) => others[line]!.tree === partner).distance <= tolerance,
    );
    const stretches: Stretch[] = [];
    for (let k = 1; k < near.length; k++) {
      const agreed = near[k - 1]! && near[k]!;
      const before = stretches.at(-1);
      if (before?.agreed === agreed) stretches[stretches.length - 1] = { ...before, last: k };
      else stretches.push({ first: k - 1, last: k, agreed });
    }
    return stretches;
  });
}

function pointsOf(flat: ArrayLike<number>): Vec3[] {
  const points: Vec3[] = [];
  for (let k = 0; k + 2 < flat.length; k += 3) points.push([flat[k]!, flat[k + 1]!, flat[k + 2]!]);
  return points;
}
