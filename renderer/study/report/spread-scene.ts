import type { SpreadStrand } from "#shared/agreement/report/report-data.ts";
import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { DrawnStrand } from "#shared/marks/drawn-strand.ts";
import type { StrandId } from "#shared/trees/document.ts";

/** From here on a place counts as apart, and as far apart; millimetres. */
export interface SpreadLimits {
  readonly apart: number;
  readonly far: number;
}

/** Half and all of the greatest tenth: told from the data, so that there is something to see at any tolerance. */
export function spreadLimits(spread: readonly SpreadStrand[]): SpreadLimits {
  const all = spread.flatMap(({ spreadMm }) => spreadMm).sort((a, b) => a - b);
  const far = all[Math.floor(0.9 * all.length)] ?? 0;
  return { apart: far / 2, far };
}

/**
 * Strands of one specimen in pieces: quiet where annotators run together, as usual where apart, loud where far apart. Strands
 * that somebody lacks are dashed and of another colour.
 */
export function spreadStrands(strands: readonly SpreadStrand[], limits: SpreadLimits): DrawnStrand[] {
  return strands.flatMap((strand, s) => {
    const partial = strand.markedBy < strand.of;
    const piece = (from: number, to: number, look: 0 | 1 | 2): DrawnStrand => {
      const points = Float64Array.from(strand.line.slice(from, to + 1).flat());
      return {
        id: `s${s + 1}` as StrandId,
        tree: null,
        name: "",
        points,
        radii: new Float64Array(points.length / 3).fill(Number.NaN),
        pins: [],
        mark: partial ? { colour: 2, dash: 1 } : { colour: 0, dash: 0 },
        doubtful: false,
        picked: false,
        traced: true,
        ...(look === 1 ? {} : { manner: look === 0 ? "quiet" : "loud" }),
      };
    };
    if (strand.line.length < 2) return [];
    if (strand.spreadMm.length === 0) return [piece(0, strand.line.length - 1, 1)];
    const looks = strand.spreadMm.map((mm) => (mm >= limits.far ? 2 : mm >= limits.apart ? 1 : 0));
    const pieces: DrawnStrand[] = [];
    let from = 0;
    for (let k = 1; k < looks.length; k++) {
      if (looks[k] === looks[from] && k < looks.length - 1) continue;
      pieces.push(piece(from, k, looks[from]!));
      from = k;
    }
    return pieces;
  });
}

/** Middle and half diagonal of all lines, millimetres. */
export function spreadBounds(strands: readonly SpreadStrand[]): { centre: PointMm; radiusMm: number } {
  const all = strands.flatMap(({ line }) => line);
  if (all.length === 0) return { centre: pointMm(0, 0, 0), radiusMm: 1 };
  const side = (axis: 0 | 1 | 2, pick: (...values: number[]) => number) =>
    all.reduce((best, point) => pick(best, point[axis]), all[0]![axis]);
  const low: Vec3 = [side(0, Math.min), side(1, Math.min), side(2, Math.min)];
  const high: Vec3 = [side(0, Math.max), side(1, Math.max), side(2, Math.max)];
  const centre = pointMm((low[0] + high[0]) / 2, (low[1] + high[1]) / 2, (low[2] + high[2]) / 2);
  return { centre, radiusMm: Math.max(distance(low, high) / 2, 0.1) };
}
