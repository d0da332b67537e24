import type { GuidePreviewAnswer } from "#shared/api/engine.ts";
import { type PointMm, roundMm, type Vec3 } from "#shared/geometry/types.ts";
import type { GuideFronts } from "#shared/tracing/guide/guide-fronts.ts";
import { pathToPlace } from "#shared/tracing/guide/guide-fronts.ts";
import { meanFit } from "#shared/tracing/image-fit.ts";
import { fromLocal, localToIndex, toLocal } from "#shared/tracing/local-frame.ts";
import { followableStrength, ridgeAtVoxel } from "#shared/tracing/pin-ridge.ts";
import { arcLengths } from "#shared/tracing/polyline.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";

/** Fewer points in a row than this that leave the string are no stretch: a voxel path steps off the crest now and then. */
const LEAST_DOUBTFUL = 3;

/**
 * The guide from the session's pin to a place: for the eye, not for the record (see `solveStrand`). Coarse when it comes
 * from a coarser level or leans on the side of what was searched, or, as a straight line without image fit, from none. The fit of a point is its ridge answer over the
 * path's own typical one; where the answer is that of no string, the stretch is doubtful.
 * @param shouldStop as for `pathToPlace`.
 */
export function previewGuide(guide: GuideFronts, to: PointMm, shouldStop: (front: number) => boolean): GuidePreviewAnswer {
  const { context, from } = guide;
  const path = pathToPlace(guide, to, shouldStop);
  if (path === null) {
    return { points: [...from, ...to].map(roundMm), coarse: true, imageFit: null, doubtful: [[0, 1]] };
  }
  const grid = context.pyramid.levels[path.level]!;
  const n = path.points.length / 3;
  const strengths = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const [x, y, z] = localToIndex(grid, pointOf(path.points, i));
    strengths[i] = ridgeAtVoxel(context, path.level, Math.round(x), Math.round(y), Math.round(z)).strength;
  }
  const least = followableStrength(context);
  const sorted = strengths.slice().sort();
  const full = Math.max(0.8 * sorted[Math.floor(0.75 * (n - 1))]!, least);
  const fits = strengths.map((strength) => Math.min(1, strength / full));
  const imageFit = meanFit(path.points, fits);
  return {
    points: shownPoints(guide, path.points, to, Math.min(...grid.spacing)),
    coarse: path.level !== context.workingLevel || path.leans,
    imageFit,
    doubtful: weakStretches(strengths, least),
  };
}

/** First and last point of each run of weak points. */
function weakStretches(strengths: Float64Array, least: number): [number, number][] {
  const stretches: [number, number][] = [];
  let first = -1;
  for (let i = 0; i <= strengths.length; i++) {
    const weak = i < strengths.length && strengths[i]! < least;
    if (weak && first < 0) first = i;
    if (!weak && first >= 0) {
      if (i - first >= LEAST_DOUBTFUL) stretches.push([first, i - 1]);
      first = -1;
    }
  }
  return stretches;
}

/** The path between exact ends, smoothed over two voxels, in the specimen's frame. */
function shownPoints(guide: GuideFronts, path: Float64Array, to: PointMm, spacing: number): number[] {
  const { grid } = guide.context.pyramid;
  const n = path.length / 3;
  if (n < 2) return [...guide.from, ...to].map(roundMm);
  const points = path.slice();
  points.set(toLocal(grid, guide.from), 0);
  points.set(toLocal(grid, to), 3 * (n - 1));
  const length = arcLengths(points)[n - 1]!;
  if (length > 0) {
    const stiffness = ((2 * spacing * (n - 1)) / length) ** 4;
    smoothInto(points, new Float64Array(n).fill(1), new Float64Array(n).fill(stiffness), points);
  }
  const flat: number[] = [];
  for (let i = 0; i < n; i++) for (const value of fromLocal(grid, pointOf(points, i))) flat.push(roundMm(value));
  return flat;
}

function pointOf(points: Float64Array, i: number): Vec3 {
  return [points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!];
}
