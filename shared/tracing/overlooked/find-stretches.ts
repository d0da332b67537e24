import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import { type PointMm, roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { distance, dot, mix, normalise, subtract } from "#shared/geometry/vec3.ts";
import { fromLocal, indexToLocal, toLocal } from "#shared/tracing/local-frame.ts";
import { type FoundPoints, searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import type { OverlookedStretch } from "#shared/tracing/overlooked/stretch.ts";
import { medianOf, resample } from "#shared/tracing/polyline.ts";
import { smoothInto } from "#shared/tracing/smooth.ts";
import { isRippleOf } from "#shared/tracing/strings/grow-string.ts";
import { leastStrength } from "#shared/tracing/strings/least-strength.ts";
import { isRim } from "#shared/tracing/strings/rim.ts";
import { type ThinPath, thinTree } from "#shared/tracing/strings/thin-tree.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/** A strand that explains what lies in its tube. */
export interface ExplainingLine {
  /** Flat xyz, millimetres, in the specimen's frame. */
  readonly points: readonly number[];
  /** One per point, millimetres; null = below resolution. */
  readonly radii: readonly (number | null)[];
}

export interface StretchOptions {
  /** Shorter stretches are left out, millimetres. */
  readonly minimumMm: number;
}

/** The tube of a strand is this many times as thick as the strand, and some voxels. */
const TUBE_RADII = 1.15;
const TUBE_VOXELS = 1;
const STEP_VOXELS = 2;
/** Gaps up to this many voxels are bridged where one side ends towards the other. */
const GAP_VOXELS = 4;
const LEAST_ALONG = 0.5;
const GAP_COST = 4;
const SHORTEST_VOXELS = 3;
/** A stretch answers this many times as strongly as the least that counts, in the median over its points. */
const CLEAR = 1.25;
/** A stretch is at least this many times as long as it is thick. */
const LEAST_SLENDER = 2;
/** Its ends are at least this share of its length apart. */
const LEAST_CHORD = 0.3;
/** Outside all tubes at least this share of the minimum. */
const LEAST_OUTSIDE = 0.25;
/** Median bright share of a stretch, at most: more is the rim of a sheet. */
const MOST_SHARE = 0.24;

interface Spot {
  readonly at: Vec3;
  readonly voxel: readonly [number, number, number];
  readonly strength: number;
  readonly radiusMm: number;
  readonly share: number;
}

/**
 * The stretches of string that no line explains, longest first: the points found, less those in a tube about every line, hung
 * together and thinned to paths. At a fork the longer way goes on. Rims of sheets are no strings. Depends on scan, polarity, lines
 * and options, not on the order in which blocks were searched.
 */
export function findStretches(
  context: TraceContext,
  found: readonly FoundPoints[],
  lines: readonly ExplainingLine[],
  options: StretchOptions,
): OverlookedStretch[] {
  const { grid } = context.pyramid;
  const levelNumber = searchLevel(context.pyramid);
  const level = context.pyramid.levels[levelNumber]!;
  const least = leastStrength(context, levelNumber);
  const voxelMm = Math.min(...level.spacing);
  const places = lines.map(({ points }) => localPlaces(points, grid));
  const index = new SegmentIndex(places);
  /** The place on a strand whose tube a stretch ends at, if there is one: the string is seen to leave it there. */
  const attached = (at: Vec3): Vec3 | null => {
    const { distance: away, segment, share } = index.nearest(at);
    if (segment < 0) return null;
    const [line, point] = [index.lineOf[segment]!, index.pointOf[segment]!];
    const radius = lines[line]!.radii[point] ?? voxelMm / 2;
    if (away > TUBE_RADII * radius + (TUBE_VOXELS + GAP_VOXELS) * voxelMm) return null;
    const next = places[line]![Math.min(point + 1, places[line]!.length - 1)]!;
    return mix(places[line]![point]!, next, share);
  };
  const spots = unexplained(level, found, index, lines, voxelMm);
  const near = neighbourhoods(spots);
  const strings = spots.filter(
    (spot) => !near(spot, Math.ceil((1.6 * spot.radiusMm) / voxelMm)).some((other) => isRippleOf(spot, other)),
  );
  const paths = longestWays(strings, thinTree(linked(strings, voxelMm), SHORTEST_VOXELS * voxelMm));
  const out: OverlookedStretch[] = [];
  for (const path of paths) {
    const stretch = stretchOf(
      path.map((n) => strings[n]!),
      attached,
      context,
      least,
      voxelMm,
      options.minimumMm,
    );
    if (stretch) out.push(stretch);
  }
  return out.sort((a, b) => b.lengthMm - a.lengthMm || compare(a.from, b.from));
}

function compare(a: Vec3, b: Vec3): number {
  return a[0] - b[0] || a[1] - b[1] || a[2] - b[2];
}

function localPlaces(flat: readonly number[], grid: VolumeGrid): Vec3[] {
  const out: Vec3[] = [];
  for (let i = 0; i + 2 < flat.length; i += 3) out.push(toLocal(grid, [flat[i]!, flat[i + 1]!, flat[i + 2]!]));
  return out;
}

/** The points outside all tubes, in the order z, y, x. */
function unexplained(
  level: PyramidLevel,
  found: readonly FoundPoints[],
  index: SegmentIndex,
  lines: readonly ExplainingLine[],
  voxelMm: number,
): Spot[] {
  const out: Spot[] = [];
  for (const points of found)
    for (let n = 0; n < points.strengths.length; n++) {
      const voxel = [points.voxels[3 * n]!, points.voxels[3 * n + 1]!, points.voxels[3 * n + 2]!] as const;
      const at = indexToLocal(level, voxel);
      if (index.segments > 0) {
        const { distance: away, segment } = index.nearest(at);
        const radius = lines[index.lineOf[segment]!]!.radii[index.pointOf[segment]!] ?? voxelMm / 2;
        if (away <= TUBE_RADII * radius + TUBE_VOXELS * voxelMm) continue;
      }
      out.push({ at, voxel, strength: points.strengths[n]!, radiusMm: points.radii[n]!, share: points.shares[n]! });
    }
  return out.sort((a, b) => a.voxel[2] - b.voxel[2] || a.voxel[1] - b.voxel[1] || a.voxel[0] - b.voxel[0]);
}

/** Gives the spots within some voxels of a spot, itself left out. */
function neighbourhoods(spots: readonly Spot[]): (spot: Spot, reach: number) => Spot[] {
  const key = (x: number, y: number, z: number) => (z * 65536 + y) * 65536 + x;
  const boxes = new Map<number, Spot[]>();
  for (const spot of spots) {
    const [x, y, z] = spot.voxel;
    const box = key(x >> 2, y >> 2, z >> 2);
    const list = boxes.get(box);
    if (list) list.push(spot);
    else boxes.set(box, [spot]);
  }
  return (spot, reach) => {
    const [x, y, z] = spot.voxel;
    const out: Spot[] = [];
    for (let c = Math.max(0, z - reach) >> 2; c <= (z + reach) >> 2; c++)
      for (let b = Math.max(0, y - reach) >> 2; b <= (y + reach) >> 2; b++)
        for (let a = Math.max(0, x - reach) >> 2; a <= (x + reach) >> 2; a++)
          for (const other of boxes.get(key(a, b, c)) ?? []) {
            if (other === spot) continue;
            const [ox, oy, oz] = other.voxel;
            if (Math.abs(ox - x) <= reach && Math.abs(oy - y) <= reach && Math.abs(oz - z) <= reach) out.push(other);
          }
    return out;
  };
}

function linked(spots: readonly Spot[], voxelMm: number) {
  const number = new Map(spots.map((spot, n) => [spot, n]));
  const near = neighbourhoods(spots);
  const links: [number, number, number][] = [];
  spots.forEach((spot, n) => {
    const around = near(spot, GAP_VOXELS);
    const mean = [0, 0, 0];
    for (const other of around) for (let c = 0; c < 3; c++) mean[c] = mean[c]! + (other.at[c]! - spot.at[c]!) / around.length;
    const length = Math.hypot(...mean);
    // Away from the mean of its surroundings: the direction in which a string ends here.
    const ends = length > 0.3 * 0.5 * GAP_VOXELS * voxelMm || around.length === 0;
    for (const other of around) {
      const m = number.get(other)!;
      const step = Math.max(...spot.voxel.map((at, axis) => Math.abs(at - other.voxel[axis]!)));
      const apart = distance(spot.at, other.at);
      if (step <= STEP_VOXELS) {
        if (n < m) links.push([n, m, apart]);
      } else if (ends) {
        const along = -dot(normalise(subtract(other.at, spot.at)), normalise([mean[0]!, mean[1]!, mean[2]!]));
        if (along >= LEAST_ALONG) links.push([n, m, GAP_COST * apart]);
      }
    }
  });
  return {
    places: spots.map(({ at }) => at),
    radii: spots.map(({ radiusMm }) => radiusMm),
    strengths: spots.map(({ strength }) => strength),
    links,
  };
}

/** Paths joined through forks so that the longest way comes first, then the longest of what is left, each path once. */
function longestWays(spots: readonly Spot[], paths: readonly ThinPath[]): number[][] {
  const lengths = paths.map((path) => pathLength(path, spots));
  const at = new Map<number, number[]>();
  paths.forEach((path, n) => {
    for (const end of [path[0]!, path.at(-1)!]) at.set(end, [...(at.get(end) ?? []), n]);
  });
  const free = new Set(paths.keys());
  /** Longest way over free paths from an end: its length and the paths in order. */
  const farthest = (from: number): { length: number; way: number[]; end: number } => {
    let best = { length: 0, way: [] as number[], end: from };
    const stack: { node: number; length: number; way: number[] }[] = [{ node: from, length: 0, way: [] }];
    while (stack.length > 0) {
      const { node, length, way } = stack.pop()!;
      if (length > best.length) best = { length, way, end: node };
      for (const n of at.get(node) ?? []) {
        if (!free.has(n) || way.includes(n)) continue;
        const path = paths[n]!;
        const other = path[0] === node ? path.at(-1)! : path[0]!;
        stack.push({ node: other, length: length + lengths[n]!, way: [...way, n] });
      }
    }
    return best;
  };
  const out: number[][] = [];
  for (const n of [...paths.keys()]) {
    while (free.has(n)) {
      const { end } = farthest(paths[n]![0]!);
      const { way } = farthest(end);
      let node = end;
      const points: number[] = [end];
      for (const part of way) {
        free.delete(part);
        const path = paths[part]!;
        const onwards = path[0] === node ? path : [...path].reverse();
        points.push(...onwards.slice(1));
        node = onwards.at(-1)!;
      }
      if (way.length === 0) break;
      out.push(points);
    }
  }
  return out;
}

function pathLength(path: ThinPath, spots: readonly Spot[]): number {
  let sum = 0;
  for (let i = 1; i < path.length; i++) sum += distance(spots[path[i - 1]!]!.at, spots[path[i]!]!.at);
  return sum;
}

/** A path as a stretch, drawn on to the strands that it leaves; null when it is too short, too faint, too plump or the rim of a sheet. */
function stretchOf(
  spots: readonly Spot[],
  attached: (at: Vec3) => Vec3 | null,
  context: TraceContext,
  least: (radiusMm: number) => number,
  voxelMm: number,
  minimumMm: number,
): OverlookedStretch | null {
  const radiusMm = medianOf(spots.map((spot) => spot.radiusMm));
  const clear = medianOf(spots.map((spot) => spot.strength / least(spot.radiusMm)));
  if (clear < CLEAR || medianOf(spots.map(({ share }) => share)) > MOST_SHARE) return null;
  const outside = smoothedLine(
    spots.map(({ at }) => at),
    voxelMm,
  );
  if (lengthOf(outside) < LEAST_OUTSIDE * minimumMm || isRim(context, outside, radiusMm)) return null;
  const before = attached(outside[0]!);
  const after = attached(outside.at(-1)!);
  const line = [...(before ? [before] : []), ...outside, ...(after ? [after] : [])];
  const lengthMm = lengthOf(line);
  if (lengthMm < Math.max(minimumMm, LEAST_SLENDER * 2 * radiusMm)) return null;
  // Out of a tube and back into it is the strand's own flank.
  if (distance(line[0]!, line.at(-1)!) < LEAST_CHORD * lengthMm) return null;
  const places: PointMm[] = line.map((at) => roundPoint(fromLocal(context.pyramid.grid, at)));
  return {
    lengthMm: roundMm(lengthMm),
    from: places[0]!,
    to: places.at(-1)!,
    points: places.flat(),
    radiusMm: roundMm(radiusMm),
  };
}

function smoothedLine(spots: readonly Vec3[], voxelMm: number): Vec3[] {
  const points = resample(Float64Array.from(spots.flat()), voxelMm);
  const n = points.length / 3;
  smoothInto(points, new Float64Array(n).fill(1), new Float64Array(n).fill(2 ** 4), points);
  return Array.from({ length: n }, (_, i): Vec3 => [points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!]);
}

function lengthOf(line: readonly Vec3[]): number {
  let sum = 0;
  for (let i = 1; i < line.length; i++) sum += distance(line[i - 1]!, line[i]!);
  return sum;
}
