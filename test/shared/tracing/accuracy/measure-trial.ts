// How far solved strands are from the true ones of a trial volume. The truth is analytic: the lines that the solids were swept along.
import type { FileStrand } from "#shared/formats/chordae/chordae-file.ts";
import { nearestOnPolyline, polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { TrialPhantom } from "#shared/phantom/trials/trial-phantom.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import type { TracedCurve } from "#shared/tracing/strand-request.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

/** What one strand reached. Distances in voxels (the finest spacing), radii and lengths as shares of the true ones. */
export interface StrandAccuracy {
  readonly id: string;
  readonly followed: boolean;
  /** Distance from the true centreline, of the points away from the nodes. */
  readonly centreErrors: readonly number[];
  readonly lengthError: number;
  /** |found / true - 1| of the points away from the nodes that have a radius and whose true diameter is two blur widths or more. */
  readonly radiusErrors: readonly number[];
  /** Number of points away from the nodes, and of those without a radius. */
  readonly points: number;
  readonly withoutRadius: number;
  /** Points away from the nodes that lie within the own string and nearest to its axis. */
  readonly onString: number;
}

/** A node hides its surroundings up to this many of the thickest of its strands' diameters, as in radius statistics. */
const NODE_DIAMETERS = 1;

/** Solves every strand of a trial volume from the clicks on its nodes alone. */
export function measureTrial(made: TrialPhantom): { strands: StrandAccuracy[]; curves: Map<string, TracedCurve> } {
  const pyramid = memoryPyramid(made.grid, made.voxels);
  const context = createTraceContext(pyramid, made.parameters.polarity);
  const truth = made.truth.trees.flatMap((tree) => tree.strands);
  const curves = new Map<string, TracedCurve>();
  const strands = truth.map((strand) => {
    const request = { from: made.clicks.get(strand.from)!, via: [], to: made.clicks.get(strand.to)! };
    const curve = solveStrand(pyramid, request, made.parameters, undefined, context);
    curves.set(strand.id, curve);
    return accuracyOf(made, strand, truth, curve);
  });
  return { strands, curves };
}

function accuracyOf(made: TrialPhantom, own: FileStrand, all: readonly FileStrand[], curve: TracedCurve): StrandAccuracy {
  const voxel = Math.min(...made.grid.spacing);
  const radiusAt = (strand: FileStrand, segment: number, share: number) =>
    strand.radii![segment]! + share * (strand.radii![segment + 1]! - strand.radii![segment]!);
  const nodes = [own.from, own.to].map((id, k) => {
    const at = k === 0 ? own.points![0]! : own.points!.at(-1)!;
    const meeting = all.filter((strand) => strand.from === id || strand.to === id);
    const radius = Math.max(...meeting.map((strand) => (strand.from === id ? strand.radii![0]! : strand.radii!.at(-1)!)));
    return { at, hidden: NODE_DIAMETERS * 2 * radius };
  });
  const centreErrors: number[] = [];
  const radiusErrors: number[] = [];
  let onString = 0;
  let withoutRadius = 0;
  for (let i = 0; i < curve.radii.length; i++) {
    const p: Vec3 = [curve.points[3 * i]!, curve.points[3 * i + 1]!, curve.points[3 * i + 2]!];
    if (nodes.some((node) => distance(node.at, p) < node.hidden)) continue;
    const near = nearestOnPolyline(own.points!, p);
    const radius = radiusAt(own, near.segment, near.share);
    centreErrors.push(near.distance / voxel);
    if (!Number.isFinite(curve.radii[i]!)) withoutRadius++;
    if (2 * radius >= 2 * made.parameters.blurFwhmMm!)
      radiusErrors.push(Number.isFinite(curve.radii[i]!) ? Math.abs(curve.radii[i]! / radius - 1) : 1);
    const others = all.filter((strand) => strand !== own);
    if (near.distance < radius && others.every((other) => nearestOnPolyline(other.points!, p).distance > near.distance))
      onString++;
  }
  const length = flatLength(curve.points);
  return {
    id: own.id,
    followed: curve.followed,
    centreErrors,
    lengthError: Math.abs(length / polylineLength(own.points!) - 1),
    radiusErrors,
    points: centreErrors.length,
    withoutRadius,
    onString,
  };
}

function flatLength(points: Float64Array): number {
  let sum = 0;
  for (let i = 3; i < points.length; i += 3)
    sum += Math.hypot(points[i]! - points[i - 3]!, points[i + 1]! - points[i - 2]!, points[i + 2]! - points[i - 1]!);
  return sum;
}

/** The value below which a share of the values lies; NaN of none. */
export function quantile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted.length === 0 ? Number.NaN : sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))]!;
}
