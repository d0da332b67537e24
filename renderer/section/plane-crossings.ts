/** Where a string goes through the plane: the outline of its tube there, an ellipse in CSS pixels. */
export interface TubeOutline {
  readonly x: number;
  readonly y: number;
  readonly longPx: number;
  readonly shortPx: number;
  /** Direction of the long axis, radians from x towards y. */
  readonly angle: number;
  /** False where the radius is below resolution; the outline is then a mark of fixed size. */
  readonly measured: boolean;
}

/** Outline for a string without a measured radius, CSS pixels. */
const UNMEASURED_PX = 4;
/** A string that runs nearly in the plane would give an endless ellipse. */
const LONGEST_RATIO = 4;

/**
 * Outlines of a line's tube at each place where it crosses the plane.
 * @param seen shape [n, 3]: x, y in pixels, depth in millimetres.
 * @param radii shape [n], millimetres, NaN = below resolution.
 */
export function planeCrossings(seen: ArrayLike<number>, radii: ArrayLike<number>, mmPerPx: number): TubeOutline[] {
  const outlines: TubeOutline[] = [];
  for (let i = 0; i + 5 < seen.length; i += 3) {
    const d0 = seen[i + 2]!;
    const d1 = seen[i + 5]!;
    // A point exactly on the plane belongs to the segment that arrives at it, so that it is counted once.
    const crosses = (d0 < 0 && d1 >= 0) || (d0 > 0 && d1 <= 0) || (i === 0 && d0 === 0 && d1 !== 0);
    if (!crosses) continue;
    const t = d0 / (d0 - d1);
    const dx = seen[i + 3]! - seen[i]!;
    const dy = seen[i + 4]! - seen[i + 1]!;
    const inPlaneMm = Math.hypot(dx, dy) * mmPerPx;
    const throughMm = Math.abs(d1 - d0);
    const ratio = Math.min(LONGEST_RATIO, Math.hypot(inPlaneMm, throughMm) / throughMm);
    const r0 = radii[i / 3]!;
    const r1 = radii[i / 3 + 1]!;
    const radiusMm = Number.isNaN(r0) ? r1 : Number.isNaN(r1) ? r0 : r0 + (r1 - r0) * t;
    const measured = !Number.isNaN(radiusMm) && radiusMm > 0;
    const shortPx = measured ? radiusMm / mmPerPx : UNMEASURED_PX;
    outlines.push({
      x: seen[i]! + dx * t,
      y: seen[i + 1]! + dy * t,
      shortPx,
      longPx: measured ? shortPx * ratio : UNMEASURED_PX,
      angle: Math.atan2(dy, dx),
      measured,
    });
  }
  return outlines;
}
