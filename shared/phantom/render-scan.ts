import { type CoverPlane, coverCone } from "#shared/phantom/cover-plane.ts";
import { coverTriangle, readyTriangles } from "#shared/phantom/cover-triangle.ts";
import { type Material, NUMBERS_PER_CONE, NUMBERS_PER_TRIANGLE, type SolidList } from "#shared/phantom/solids.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import type { StoredArray } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

/** How the solids look in the scan. Grey values are those of an unsigned 16-bit scan. */
export interface ScanLook {
  readonly seed: number;
  /** Grey value of what surrounds the valve. */
  readonly background: number;
  /** Grey values above the background, per material. */
  readonly contrast: Readonly<Record<Material, number>>;
  /** Standard deviation of the noise, grey values. */
  readonly noise: number;
  /** Blur of the whole imaging chain, full width at half maximum, millimetres; a voxel's own size is part of it. */
  readonly blurFwhmMm: number;
  /** Height of the ring artefact, grey values. */
  readonly ring: number;
  /** Share by which muscle varies along its fibres. */
  readonly fibre: number;
  /** One plane of noise, turned differently for each slice, and no rings: several times faster, for scans of gigabytes. */
  readonly oneGrain?: boolean;
}

/** Fills `out`, shape [z1 - z0, ny, nx], x fastest, with the slices [z0, z1). */
export type RenderSlab = (z0: number, z1: number, out: StoredArray) => void;

const FWHM_PER_SIGMA = 2 * Math.sqrt(2 * Math.LN2);
/** Small enough to stay in the processor's nearest cache. */
const NOISE_TABLE = 1 << 13;
/** Noise streams count from here, so that planes below the scan have one too. */
const NOISE_STREAM = 1 << 20;

/**
 * A scan of analytic solids, made slice by slice: 27 sub-samples a voxel, Gaussian blur, ring artefact, noise, rounding to
 * uint16. A slice depends on the solids, the look and its own place only, however the slabs are cut; memory is a few planes.
 * In order, each plane is made once. Beyond the scan's sides there is nothing; above and below it the solids go on.
 * @param grid cubic voxels along the axes.
 * @throws RangeError for other grids.
 */
export function scanOfSolids(grid: VolumeGrid, lists: readonly SolidList[], look: ScanLook): RenderSlab {
  const [nx, ny] = grid.size;
  const side = grid.spacing[0];
  if (grid.spacing.some((s) => s !== side) || grid.direction.some((d, i) => d !== (i % 4 === 0 ? 1 : 0)))
    throw new RangeError("a phantom needs cubic voxels along the axes");
  const taps = blurTaps(look.blurFwhmMm, side);
  const halo = taps.length >> 1;
  const planes = new PlaneMaker(grid, lists, look, taps);
  const cache = new Map<number, BlurredPlane>();
  const addGrain = look.oneGrain ? oneGrain(nx, ny, look) : freshGrain(nx, ny, look);
  const sums = new Float32Array(nx);

  return (z0, z1, out) => {
    for (let z = z0; z < z1; z++) {
      for (const key of [...cache.keys()]) if (Math.abs(key - z) > halo) planes.release(cache, key);
      for (let k = -halo; k <= halo; k++) if (!cache.has(z + k)) cache.set(z + k, planes.make(z + k));
      const stack = taps.map((weight, k) => ({ weight, plane: cache.get(z + k - halo)! }));
      const addTo = addGrain(z, out.subarray((z - z0) * nx * ny, (z - z0 + 1) * nx * ny));
      for (let j = 0; j < ny; j++) {
        let from = nx;
        let to = -1;
        for (const { plane } of stack) {
          if (plane.first[j]! < from) from = plane.first[j]!;
          if (plane.last[j]! > to) to = plane.last[j]!;
        }
        if (from <= to) sums.fill(0, from, to + 1);
        for (const { weight, plane } of stack) {
          const row = j * nx;
          for (let i = plane.first[j]!, end = plane.last[j]!; i <= end; i++) sums[i]! += weight * plane.values[row + i]!;
        }
        addTo(j, sums, from, to);
      }
    }
  };
}

/**
 * Begins a slice; the function it gives writes row `j` of it, rows in order: what surrounds the valve, noise, and `sums` between
 * the columns `from` and `to`, both included (beyond them there is nothing to add).
 */
type Grain = (z: number, slice: StoredArray) => (j: number, sums: Float32Array, from: number, to: number) => void;

/** Noise of its own for every voxel, and rings. */
function freshGrain(nx: number, ny: number, look: ScanLook): Grain {
  const noise = noiseTable(look.seed, look.noise);
  const empty = emptyPlane(nx, ny, look);
  const bits = new Uint32Array((nx + 1) >> 1);
  return (z, slice) => {
    const random = new SeededRandom(look.seed, NOISE_STREAM + z);
    return (j, sums, from, to) => {
      random.fill(bits);
      const row = j * nx;
      for (let i = 0; i < nx; i++) {
        const lot = (bits[i >> 1]! >>> ((i & 1) << 4)) & (NOISE_TABLE - 1);
        const value = empty[row + i]! + (i >= from && i <= to ? sums[i]! : 0) + noise[lot]!;
        slice[row + i] = value <= 0 ? 0 : value >= 65535 ? 65535 : value + 0.5;
      }
    };
  };
}

/** A plane of noise on an even background, begun at another place for each slice. */
function oneGrain(nx: number, ny: number, look: ScanLook): Grain {
  const plane = new Uint16Array(nx * ny);
  const draw = freshGrain(nx, ny, { ...look, ring: 0 })(0, plane);
  const nothing = new Float32Array(nx);
  for (let j = 0; j < ny; j++) draw(j, nothing, nx, -1);
  return (z, slice) => {
    const begin = new SeededRandom(look.seed, NOISE_STREAM + z).below(plane.length);
    slice.set(plane.subarray(begin), 0);
    slice.set(plane.subarray(0, begin), plane.length - begin);
    return (j, sums, from, to) => {
      for (let k = j * nx + from, end = j * nx + to, i = from; k <= end; k++, i++) {
        const value = slice[k]! + sums[i]!;
        slice[k] = value >= 65535 ? 65535 : value + 0.5;
      }
    };
  };
}

interface BlurredPlane {
  /** shape [ny, nx], grey values above the background, blurred along x and y. */
  readonly values: Float32Array;
  /** Columns that may differ from 0, per row. */
  readonly first: Int32Array;
  readonly last: Int32Array;
}

/** Makes planes of covered voxels, blurred in the plane. */
class PlaneMaker {
  private readonly covers: { material: Material; plane: CoverPlane }[];
  private readonly bins: { cones: PieceBins; triangles: PieceBins }[];
  private readonly sharp: Float32Array;
  private readonly across: Float32Array;
  private readonly free: BlurredPlane[] = [];
  private readonly nx: number;
  private readonly ny: number;
  private readonly first: Int32Array;
  private readonly last: Int32Array;

  constructor(
    private readonly grid: VolumeGrid,
    lists: readonly SolidList[],
    private readonly look: ScanLook,
    private readonly taps: readonly number[],
  ) {
    const [nx, ny] = grid.size;
    this.nx = nx;
    this.ny = ny;
    this.first = new Int32Array(ny);
    this.last = new Int32Array(ny);
    this.covers = lists.map(({ material }) => ({
      material,
      plane: {
        nx,
        ny,
        side: grid.spacing[0],
        x0: grid.origin[0],
        y0: grid.origin[1],
        z: 0,
        bits: new Uint32Array(nx * ny),
        first: this.first,
        last: this.last,
      },
    }));
    const halo = taps.length >> 1;
    this.bins = lists.map((list) => ({
      cones: new PieceBins(list.cones, Float64Array.from(list.cones), NUMBERS_PER_CONE, [2, 6], [3, 7], grid, halo),
      triangles: new PieceBins(list.triangles, readyTriangles(list.triangles), NUMBERS_PER_TRIANGLE, [2, 5, 8], [9], grid, halo),
    }));
    this.sharp = new Float32Array(nx * ny);
    this.across = new Float32Array(nx * ny);
  }

  release(cache: Map<number, BlurredPlane>, key: number): void {
    this.free.push(cache.get(key)!);
    cache.delete(key);
  }

  make(z: number): BlurredPlane {
    this.first.fill(this.nx);
    this.last.fill(-1);
    this.covers.forEach(({ plane }, m) => {
      plane.z = this.grid.origin[2] + z * this.grid.spacing[2];
      const { cones, triangles } = this.bins[m]!;
      for (const k of cones.at(z)) coverCone(plane, cones.ready, k * NUMBERS_PER_CONE);
      for (const k of triangles.at(z)) coverTriangle(plane, triangles.ready, k);
    });
    this.mixMaterials(z);
    return this.blur();
  }

  /** Grey values of the covered voxels, into `sharp`; clears the cover bits. */
  private mixMaterials(z: number): void {
    const { contrast, fibre } = this.look;
    const [s, m, l] = this.covers.map(({ plane }) => plane.bits) as [Uint32Array, Uint32Array, Uint32Array];
    const side = this.grid.spacing[0];
    for (let j = 0; j < this.ny; j++) {
      for (let i = this.first[j]!, end = this.last[j]!; i <= end; i++) {
        const k = j * this.nx + i;
        const inString = s[k]!;
        const inMuscle = m[k]! & ~inString;
        const inLeaflet = l[k]! & ~(inString | inMuscle);
        let value = 0;
        if (inString !== 0) value += ones(inString) * contrast.string;
        if (inMuscle !== 0) value += ones(inMuscle) * contrast.muscle * (1 + fibre * fibreAt(i * side, j * side, z * side));
        if (inLeaflet !== 0) value += ones(inLeaflet) * contrast.leaflet;
        this.sharp[k] = value / 27;
        s[k] = 0;
        m[k] = 0;
        l[k] = 0;
      }
    }
  }

  private blur(): BlurredPlane {
    const { nx, ny, taps, sharp, across } = this;
    const halo = taps.length >> 1;
    const out = this.free.pop() ?? { values: new Float32Array(nx * ny), first: new Int32Array(ny), last: new Int32Array(ny) };
    for (let j = 0; j < ny; j++) {
      const [first, last] = [this.first[j]!, this.last[j]!];
      if (first > last) continue;
      const row = j * nx;
      const from = Math.max(0, first - halo);
      const to = Math.min(nx - 1, last + halo);
      for (let i = from; i <= to; i++) {
        let sum = 0;
        const k0 = Math.max(-halo, first - i);
        const k1 = Math.min(halo, last - i);
        for (let k = k0; k <= k1; k++) sum += taps[k + halo]! * sharp[row + i + k]!;
        across[row + i] = sum;
      }
      this.first[j] = from;
      this.last[j] = to;
    }
    for (let j = 0; j < ny; j++) {
      let from = nx;
      let to = -1;
      const j0 = Math.max(0, j - halo);
      const j1 = Math.min(ny - 1, j + halo);
      for (let q = j0; q <= j1; q++) {
        if (this.first[q]! < from) from = this.first[q]!;
        if (this.last[q]! > to) to = this.last[q]!;
      }
      out.first[j] = from;
      out.last[j] = to;
      if (from > to) continue;
      const row = j * nx;
      out.values.fill(0, row + from, row + to + 1);
      for (let q = j0; q <= j1; q++) {
        const weight = taps[q - j + halo]!;
        const source = q * nx;
        for (let i = this.first[q]!, end = this.last[q]!; i <= end; i++) out.values[row + i]! += weight * across[source + i]!;
      }
    }
    return out;
  }
}

/** Pieces of solids sorted by the planes they can reach. */
class PieceBins {
  private readonly lists: number[][];
  private readonly halo: number;

  constructor(
    numbers: readonly number[],
    readonly ready: Float64Array,
    width: number,
    zAt: readonly number[],
    reachAt: readonly number[],
    grid: VolumeGrid,
    halo: number,
  ) {
    this.halo = halo;
    const planes = grid.size[2] + 2 * halo;
    this.lists = Array.from({ length: planes }, () => []);
    for (let at = 0; at < numbers.length; at += width) {
      const zs = zAt.map((k) => numbers[at + k]!);
      const reach = Math.max(...reachAt.map((k) => numbers[at + k]!));
      const lowest = (Math.min(...zs) - reach - grid.origin[2]) / grid.spacing[2] - 0.5;
      const highest = (Math.max(...zs) + reach - grid.origin[2]) / grid.spacing[2] + 0.5;
      const from = Math.max(0, Math.ceil(lowest) + halo);
      const to = Math.min(planes - 1, Math.floor(highest) + halo);
      for (let plane = from; plane <= to; plane++) this.lists[plane]!.push(at / width);
    }
  }

  at(z: number): readonly number[] {
    return this.lists[z + this.halo] ?? [];
  }
}

/** Weights of the blur that remains beside the voxel's own box (variance side^2 / 12); they add up to 1. Order: -halo to halo. */
export function blurTaps(blurFwhmMm: number, side: number): number[] {
  const sigma = blurFwhmMm / FWHM_PER_SIGMA / side;
  const rest = Math.sqrt(Math.max(0, sigma * sigma - 1 / 12));
  const halo = Math.ceil(3.5 * rest);
  const taps: number[] = [];
  for (let k = -halo; k <= halo; k++) taps.push(rest === 0 ? 1 : Math.exp((-k * k) / (2 * rest * rest)));
  const sum = taps.reduce((a, b) => a + b, 0);
  return taps.map((tap) => tap / sum);
}

/** A table of normal numbers with mean 0 and the given standard deviation, exactly so over the table. */
function noiseTable(seed: number, deviation: number): Float32Array {
  const random = new SeededRandom(seed, 1);
  const table = Float64Array.from({ length: NOISE_TABLE }, () => random.normal());
  let mean = 0;
  for (const value of table) mean += value / NOISE_TABLE;
  let variance = 0;
  for (const value of table) variance += (value - mean) ** 2 / NOISE_TABLE;
  const factor = deviation / Math.sqrt(variance);
  return Float32Array.from(table, (value) => (value - mean) * factor);
}

/** A plane without valve: background, and faint rings about its middle, as a detector with uneven elements leaves them; shape [ny, nx]. */
function emptyPlane(nx: number, ny: number, look: ScanLook): Float32Array {
  const random = new SeededRandom(look.seed, 2);
  const widths = Array.from({ length: Math.ceil(Math.hypot(nx, ny) / 2) + 2 }, () =>
    random.unit() < 0.04 ? random.normal() : 0,
  );
  const plane = new Float32Array(nx * ny);
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      const radius = Math.hypot(i - (nx - 1) / 2, j - (ny - 1) / 2);
      const k = Math.floor(radius);
      const share = radius - k;
      plane[j * nx + i] = look.background + look.ring * (widths[k]! * (1 - share) + widths[k + 1]! * share);
    }
  }
  return plane;
}

/** -1 to 1: strands of muscle fibre, mostly upright; millimetres. */
function fibreAt(x: number, y: number, z: number): number {
  return Math.sin(5.1 * x + 0.9 * z + Math.sin(1.3 * y)) * Math.sin(4.3 * y - 0.7 * z + Math.sin(1.1 * x));
}

function ones(bits: number): number {
  let v = bits - ((bits >>> 1) & 0x55555555);
  v = (v & 0x33333333) + ((v >>> 2) & 0x33333333);
  return Math.imul((v + (v >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}
