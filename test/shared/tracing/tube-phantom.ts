// Strings drawn by supersampling analytic tubes, blurred and made noisy here: shares no code with the kernels under test.
import type { Vec3 } from "#shared/geometry/types.ts";
import { plainGrid, type VolumeGrid } from "#shared/volume/grid.ts";

/** A string: its centreline densely sampled (mm along the voxel axes) with a radius at each sample. */
export interface Tube {
  readonly points: readonly Vec3[];
  readonly radius: (share: number) => number;
}

export interface Phantom {
  readonly grid: VolumeGrid;
  readonly voxels: Float32Array;
}

/** Seeded uniform numbers in [0, 1) (mulberry32, public domain). */
export function seeded(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = a;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** A curve sampled at `count + 1` equal steps of its parameter from 0 to 1. */
export function curve(f: (t: number) => Vec3, count = 600): Vec3[] {
  return Array.from({ length: count + 1 }, (_, i) => f(i / count));
}

export function line(from: Vec3, to: Vec3, count = 200): Vec3[] {
  return curve((t) => [from[0] + t * (to[0] - from[0]), from[1] + t * (to[1] - from[1]), from[2] + t * (to[2] - from[2])], count);
}

export function lengthOf(points: readonly Vec3[]): number {
  let sum = 0;
  for (let i = 1; i < points.length; i++) sum += dist(points[i - 1]!, points[i]!);
  return sum;
}

export function dist(a: Vec3, b: Vec3): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
}

/**
 * Grey values 0 background, 1 string: coverage of each voxel by 3 x 3 x 3 samples of the union of the tubes, then a Gaussian
 * blur of `fwhmMm`, then noise of SD `noise`, then `offset + scale * value`.
 */
export function drawTubes(
  size: readonly [number, number, number],
  spacing: readonly [number, number, number],
  tubes: readonly Tube[],
  options: { fwhmMm?: number; noise?: number; seed?: number; scale?: number; offset?: number; hollow?: number } = {},
): Phantom {
  const [nx, ny, nz] = size;
  const out = new Float64Array(nx * ny * nz);
  // Fine grid of nearest distance share, tube by tube: per fine sample the least (distance / radius).
  const SUB = 3;
  const fx = nx * SUB;
  const fy = ny * SUB;
  const fine = new Float32Array(fx * fy * nz * SUB).fill(9);
  const at = (i: number, axis: 0 | 1 | 2) => ((i + 0.5) / SUB - 0.5) * spacing[axis];
  for (const tube of tubes) {
    const n = tube.points.length;
    for (let i = 0; i + 1 < n; i++) {
      const a = tube.points[i]!;
      const b = tube.points[i + 1]!;
      const r = Math.max(tube.radius(i / (n - 1)), tube.radius((i + 1) / (n - 1)));
      const lo = ([0, 1, 2] as const).map((c) =>
        Math.max(0, Math.floor(((Math.min(a[c], b[c]) - r) / spacing[c] + 0.5) * SUB - 0.5)),
      );
      const hi = ([0, 1, 2] as const).map((c) =>
        Math.min(size[c] * SUB - 1, Math.ceil(((Math.max(a[c], b[c]) + r) / spacing[c] + 0.5) * SUB - 0.5)),
      );
      const ab: Vec3 = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
      const ab2 = ab[0] ** 2 + ab[1] ** 2 + ab[2] ** 2;
      for (let z = lo[2]!; z <= hi[2]!; z++)
        for (let y = lo[1]!; y <= hi[1]!; y++)
          for (let x = lo[0]!; x <= hi[0]!; x++) {
            const p: Vec3 = [at(x, 0) - a[0], at(y, 1) - a[1], at(z, 2) - a[2]];
            const t = Math.min(1, Math.max(0, (p[0] * ab[0] + p[1] * ab[1] + p[2] * ab[2]) / ab2));
            const d = Math.hypot(p[0] - t * ab[0], p[1] - t * ab[1], p[2] - t * ab[2]);
            const share = d / tube.radius((i + t) / (n - 1));
            const o = (z * fy + y) * fx + x;
            if (share < fine[o]!) fine[o] = share;
          }
    }
  }
  for (let z = 0; z < nz * SUB; z++)
    for (let y = 0; y < fy; y++)
      for (let x = 0; x < fx; x++) {
        const share = fine[(z * fy + y) * fx + x]!;
        if (share > 1) continue;
        const value = options.hollow && share < options.hollow ? 0.4 : 1;
        const o = (Math.floor(z / SUB) * ny + Math.floor(y / SUB)) * nx + Math.floor(x / SUB);
        out[o] = out[o]! + value / SUB ** 3;
      }
  if (options.fwhmMm)
    for (const axis of [0, 1, 2] as const) blurAlong(out, size, axis, options.fwhmMm / 2.354820045 / spacing[axis]);
  const random = seeded(options.seed ?? 1);
  const voxels = new Float32Array(out.length);
  const noise = options.noise ?? 0;
  for (let i = 0; i < out.length; i++) {
    const gauss = noise > 0 ? Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random()) : 0;
    voxels[i] = (options.offset ?? 1000) + (options.scale ?? 1000) * (out[i]! + noise * gauss);
  }
  return { grid: plainGrid(size, spacing), voxels };
}

function blurAlong(values: Float64Array, size: readonly [number, number, number], axis: 0 | 1 | 2, sigma: number): void {
  const reach = Math.ceil(5 * sigma);
  const kernel = Array.from({ length: 2 * reach + 1 }, (_, i) => Math.exp(-((i - reach) ** 2) / (2 * sigma * sigma)));
  const sum = kernel.reduce((a, b) => a + b, 0);
  const stride = axis === 0 ? 1 : axis === 1 ? size[0] : size[0] * size[1];
  const n = size[axis];
  const row = new Float64Array(n);
  for (let start = 0; start < values.length; start++) {
    if (Math.floor(start / stride) % n !== 0) continue;
    for (let i = 0; i < n; i++) row[i] = values[start + i * stride]!;
    for (let i = 0; i < n; i++) {
      let v = 0;
      for (let k = -reach; k <= reach; k++) v += (kernel[k + reach]! / sum) * row[Math.min(n - 1, Math.max(0, i + k))]!;
      values[start + i * stride] = v;
    }
  }
}

/** Distance from a place to a dense polyline. */
export function distanceToPolyline(p: Vec3, points: readonly Vec3[]): number {
  let best = Number.POSITIVE_INFINITY;
  for (let i = 0; i + 1 < points.length; i++) {
    const a = points[i]!;
    const b = points[i + 1]!;
    const ab: Vec3 = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
    const ab2 = ab[0] ** 2 + ab[1] ** 2 + ab[2] ** 2;
    const t =
      ab2 > 0 ? Math.min(1, Math.max(0, ((p[0] - a[0]) * ab[0] + (p[1] - a[1]) * ab[1] + (p[2] - a[2]) * ab[2]) / ab2)) : 0;
    best = Math.min(best, dist(p, [a[0] + t * ab[0], a[1] + t * ab[1], a[2] + t * ab[2]]));
  }
  return best;
}

/** Distances of a flat [n, 3] curve's points to a dense polyline, leaving out those within `skipMm` of its two ends; ascending. */
export function errorsOf(points: Float64Array, truth: readonly Vec3[], skipMm = 0): number[] {
  const n = points.length / 3;
  const at = (i: number): Vec3 => [points[3 * i]!, points[3 * i + 1]!, points[3 * i + 2]!];
  const out: number[] = [];
  for (let i = 0; i < n; i++) {
    if (dist(at(i), at(0)) < skipMm || dist(at(i), at(n - 1)) < skipMm) continue;
    out.push(distanceToPolyline(at(i), truth));
  }
  return out.sort((a, b) => a - b);
}

export function quantileOf(ascending: readonly number[], share: number): number {
  return ascending[Math.min(ascending.length - 1, Math.floor(share * ascending.length))]!;
}
