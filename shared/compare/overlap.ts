import { arcLengths } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { mix } from "#shared/geometry/vec3.ts";
import type { RootedStrand } from "#shared/trees/rooted-strands.ts";
import { pathsToEnds } from "#shared/trees/rooted-strands.ts";

/** A strand with the points on it that are measured, and the radius at each. */
export interface SampledStrand {
  readonly strand: RootedStrand;
  readonly points: readonly Vec3[];
  readonly radii: readonly (number | null)[];
}

export interface Overlap {
  /** Share of both lines' points that lie inside the other (reference radius). */
  readonly ov: number | null;
  /** Share of a root-to-end path of the reference before its first point outside, mean over paths. */
  readonly of: number | null;
  /** OV over the reference's stretches of at least the minimum diameter. */
  readonly ot: number | null;
  /** Mean distance of the reference's points that lie inside, millimetres. */
  readonly ai: number | null;
  readonly step: number;
  /** Share of all points decided by the tolerance because the reference has no radius there. */
  readonly noRadiusShare: number;
  readonly reasons: Readonly<Record<string, string>>;
}

export interface LineDistances {
  /** Mean of the two directed means, millimetres; all null when a side is empty. */
  readonly mean: number | null;
  readonly aToB: number | null;
  readonly bToA: number | null;
  readonly hd: number | null;
  /** 95th percentile (linear) of both directions' distances pooled. */
  readonly hd95: number | null;
}

export interface OverlapOptions {
  /** Sampling step, millimetres. */
  readonly step: number;
  /** Takes the radius' place where the reference has none, millimetres. */
  readonly toleranceMm: number;
  /** Stretches of the reference at least this thick count for OT; null = OT is not given. */
  readonly minimumDiameterMm: number | null;
}

/** Points at equal steps not above `step`, ends included, with linearly interpolated radii (the nearer point's where one is null). */
export function sampleStrand(strand: RootedStrand, step: number): SampledStrand {
  const at = arcLengths(strand.line);
  const total = at[at.length - 1] ?? 0;
  if (total === 0) return { strand, points: strand.line.slice(0, 1), radii: strand.radii.slice(0, 1) };
  const pieces = Math.max(1, Math.ceil(total / step - 1e-9));
  const points: Vec3[] = [];
  const radii: (number | null)[] = [];
  let k = 1;
  for (let i = 0; i <= pieces; i++) {
    const s = (total * i) / pieces;
    while (k < at.length - 1 && at[k]! < s) k += 1;
    const span = at[k]! - at[k - 1]!;
    const share = i === pieces ? 1 : span === 0 ? 0 : (s - at[k - 1]!) / span;
    points.push(mix(strand.line[k - 1]!, strand.line[k]!, share));
    radii.push(mixRadius(strand.radii[k - 1] ?? null, strand.radii[k] ?? null, share));
  }
  return { strand, points, radii };
}

function radiusAt(strand: RootedStrand, k: number, share: number): number | null {
  return mixRadius(strand.radii[k] ?? null, strand.radii[Math.min(k + 1, strand.radii.length - 1)] ?? null, share);
}

function mixRadius(a: number | null, b: number | null, share: number): number | null {
  if (a === null || b === null) return share < 0.5 ? a : b;
  return a + (b - a) * share;
}

/**
 * Overlap and distances of two sets of sampled strands, A being the reference. A point is inside when its distance to the
 * other side's polylines is at most the reference's radius at the nearest reference point.
 *
 * @param a, b the strands with the points to measure.
 * @param pathsA for OF: lists of strand indices from root to end.
 * @source a nearest-point variant of Schaap et al., Med Image Anal 2009;13:701-714, whose correspondence is ordered
 */
export function measureOverlap(
  a: readonly SampledStrand[],
  b: readonly SampledStrand[],
  pathsA: readonly (readonly number[])[],
  options: OverlapOptions,
): { overlap: Overlap; distances: LineDistances } {
  const reasons: Record<string, string> = {};
  const indexA = new SegmentIndex(a.map((sampled) => sampled.strand.line));
  const indexB = new SegmentIndex(b.map((sampled) => sampled.strand.line));
  const empty = indexA.segments === 0 || indexB.segments === 0;
  const thick = (radius: number | null) =>
    options.minimumDiameterMm !== null && radius !== null && 2 * radius >= options.minimumDiameterMm;
  const counts = { inside: 0, all: 0, thickInside: 0, thickAll: 0, noRadius: 0 };
  const count = (inside: boolean, radius: number | null) => {
    counts.all += 1;
    if (inside) counts.inside += 1;
    if (radius === null) counts.noRadius += 1;
    if (thick(radius)) {
      counts.thickAll += 1;
      if (inside) counts.thickInside += 1;
    }
  };
  const distancesA: number[] = [];
  const distancesB: number[] = [];
  let insideSum = 0;
  let insideCount = 0;
  const insideA = a.map((strand) =>
    strand.points.map((point, k) => {
      const d = indexB.nearest(point).distance;
      const radius = strand.radii[k] ?? null;
      const inside = d <= (radius ?? options.toleranceMm);
      if (Number.isFinite(d)) distancesA.push(d);
      if (inside) {
        insideSum += d;
        insideCount += 1;
      }
      count(inside, radius);
      return inside;
    }),
  );
  for (const strand of b) {
    for (const point of strand.points) {
      const near = indexA.nearest(point);
      const radius =
        near.segment < 0 ? null : radiusAt(a[indexA.lineOf[near.segment]!]!.strand, indexA.pointOf[near.segment]!, near.share);
      if (Number.isFinite(near.distance)) distancesB.push(near.distance);
      count(near.distance <= (radius ?? options.toleranceMm), radius);
    }
  }
  if (counts.all === 0) reasons.ov = "Both sides are empty.";
  if (pathsA.length === 0) reasons.of = "The reference has no path from an origin to an end.";
  if (options.minimumDiameterMm === null) reasons.ot = "No minimum diameter was set.";
  else if (counts.thickAll === 0)
    reasons.ot = `The reference has no stretch of ${options.minimumDiameterMm} mm diameter or more.`;
  if (insideCount === 0) reasons.ai = "No point of the reference lies inside the other side.";
  const overlap: Overlap = {
    ov: counts.all === 0 ? null : counts.inside / counts.all,
    of:
      pathsA.length === 0
        ? null
        : pathsA.reduce((sum, path) => sum + shareBeforeFault(path.map((k) => insideA[k]!)), 0) / pathsA.length,
    ot: options.minimumDiameterMm === null || counts.thickAll === 0 ? null : counts.thickInside / counts.thickAll,
    ai: insideCount === 0 ? null : insideSum / insideCount,
    step: options.step,
    noRadiusShare: counts.all === 0 ? 0 : counts.noRadius / counts.all,
    reasons,
  };
  return {
    overlap,
    distances: empty ? { mean: null, aToB: null, bToA: null, hd: null, hd95: null } : lineDistances(distancesA, distancesB),
  };
}

/** Overlap of rooted strands, sampled at the options' step. */
export function overlapOf(
  a: readonly RootedStrand[],
  b: readonly RootedStrand[],
  options: OverlapOptions,
): { overlap: Overlap; distances: LineDistances } {
  const sample = (strands: readonly RootedStrand[]) => strands.map((strand) => sampleStrand(strand, options.step));
  return measureOverlap(sample(a), sample(b), pathsToEnds(a), options);
}

function shareBeforeFault(path: readonly (readonly boolean[])[]): number {
  let all = 0;
  let before = 0;
  let faulty = false;
  for (const strand of path) {
    for (const inside of strand) {
      all += 1;
      if (!inside) faulty = true;
      if (!faulty) before += 1;
    }
  }
  return all === 0 ? 0 : before / all;
}

function lineDistances(a: readonly number[], b: readonly number[]): LineDistances {
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const pooled = Float64Array.from([...a, ...b]).sort();
  const [aToB, bToA] = [mean(a), mean(b)];
  return { mean: (aToB + bToA) / 2, aToB, bToA, hd: pooled[pooled.length - 1]!, hd95: percentile(pooled, 0.95) };
}

/** Linearly interpolated quantile of ascending values; the value itself when there is one. @param share 0-1 */
export function percentile(ascending: ArrayLike<number>, share: number): number {
  const at = share * (ascending.length - 1);
  const low = Math.floor(at);
  const high = Math.min(low + 1, ascending.length - 1);
  return ascending[low]! + (ascending[high]! - ascending[low]!) * (at - low);
}
