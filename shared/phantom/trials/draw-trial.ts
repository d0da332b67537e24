import type { Vec3 } from "#shared/geometry/types.ts";
import { distance, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";
import { blurTaps } from "#shared/phantom/render-scan.ts";
import type { TrialBody, TrialLook, TrialSpec, TrialString } from "#shared/phantom/trials/trial-spec.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

/** Grey values of an unsigned 16-bit scan: room for noise on both sides. */
const STRING_CONTRAST = 10000;
const BACKGROUND = { bright: 20000, dark: 40000 } as const;
/** Contrast of a bright spot as a share of a string's. */
const SPOT_LEVEL = 2.5;
/** Strings this many voxels across and more need no samples between voxels: the blur smooths their edge. */
const THICK_VOXELS = 24;

/** Streams of random numbers of one seed. */
const RING_STREAM = 2;
const NOISE_STREAM = 1;
const TABLE_STREAM = 3;

/**
 * The scan of a trial volume, shape [nz, ny, nx], x fastest: solids by 27 sub-samples a voxel (the highest level where they
 * overlap), Gaussian blur, rings and streaks, noise, rounding. Depends on its arguments alone.
 */
export function drawTrial(spec: TrialSpec, seed: number): Uint16Array {
  const { sizeVoxels, spacingMm, look } = spec;
  const thinnest = Math.min(...spec.strings.flatMap((string) => string.diametersMm));
  const sub = thinnest / Math.min(...spacingMm) >= THICK_VOXELS ? 1 : 3;
  const canvas = new Canvas(sizeVoxels, spacingMm, sub);
  for (const body of spec.bodies) drawBody(canvas, body);
  for (const spot of look.spots ?? []) canvas.add([spot.at, spot.at], [spot.radiusMm, spot.radiusMm], () => SPOT_LEVEL);
  for (const string of spec.strings) drawString(canvas, string);
  const levels = canvas.voxels();
  for (const axis of [0, 1, 2] as const) {
    // Sub-samples of a voxel spread by (1 - 1 / sub^2) / 12; the taps expect a whole voxel's 1 / 12.
    const spread = spacingMm[axis] ** 2 / 12 / sub ** 2;
    const fwhm = Math.sqrt(look.blurFwhmMm ** 2 + 8 * Math.LN2 * spread);
    blurAlong(levels, sizeVoxels, axis, blurTaps(fwhm, spacingMm[axis]));
  }
  addRings(levels, sizeVoxels, look, seed);
  addStreaks(levels, spec);
  const noise = normalTable(seed);
  const bits = new Uint32Array(1 << 12);
  const random = new SeededRandom(seed, NOISE_STREAM);
  const sign = look.polarity === "bright" ? 1 : -1;
  const out = new Uint16Array(levels.length);
  const deviation = STRING_CONTRAST / look.contrastToNoise;
  for (let i = 0; i < out.length; i++) {
    if (i % bits.length === 0) random.fill(bits);
    const lot = noise[bits[i % bits.length]! & (noise.length - 1)]!;
    const value = BACKGROUND[look.polarity] + sign * STRING_CONTRAST * levels[i]! + deviation * lot;
    out[i] = Math.min(65535, Math.max(0, Math.round(value)));
  }
  return out;
}

/** Normal numbers to draw noise from: a power of two of them. */
function normalTable(seed: number): Float32Array {
  const random = new SeededRandom(seed, TABLE_STREAM);
  return Float32Array.from({ length: 1 << 14 }, () => random.normal());
}

/** Level at a share of the radius; what lies beyond share 1 is not of the string. */
type LevelAt = (share: number) => number;

/** Elliptic section: half axes as shares of the radius along `along` (across the string) and across both. */
interface Flattening {
  readonly along: Vec3;
  readonly thin: number;
  readonly wide: number;
}

/** Solids drawn on sub-samples; levels of overlapping solids do not add up, the highest shows. */
class Canvas {
  private readonly size: readonly [number, number, number];
  private readonly levels: Float32Array;
  private readonly shares: Float32Array;

  constructor(
    private readonly sizeVoxels: readonly [number, number, number],
    private readonly spacing: readonly [number, number, number],
    private readonly sub: number,
  ) {
    this.size = [sizeVoxels[0] * sub, sizeVoxels[1] * sub, sizeVoxels[2] * sub];
    this.levels = new Float32Array(this.size[0] * this.size[1] * this.size[2]);
    this.shares = new Float32Array(this.levels.length).fill(2);
  }

  /** A swept solid with round ends along `line`, a radius at each point. */
  add(line: readonly Vec3[], radii: readonly number[], levelAt: LevelAt, flat?: Flattening): void {
    const { size, spacing, sub, shares } = this;
    const place = (i: number, axis: 0 | 1 | 2) => ((i + 0.5) / sub - 0.5) * spacing[axis];
    const whole = { low: [...size] as [number, number, number], high: [-1, -1, -1] as [number, number, number] };
    for (let k = 1; k < line.length; k++) {
      const [a, b] = [line[k - 1]!, line[k]!];
      const [ra, rb] = [radii[k - 1]!, radii[k]!];
      const reach = Math.max(ra, rb) * (flat ? flat.wide : 1);
      const toSub = (mm: number, axis: 0 | 1 | 2) => (mm / spacing[axis] + 0.5) * sub - 0.5;
      const low = ([0, 1, 2] as const).map((c) => Math.max(0, Math.ceil(toSub(Math.min(a[c], b[c]) - reach, c))));
      const high = ([0, 1, 2] as const).map((c) => Math.min(size[c] - 1, Math.floor(toSub(Math.max(a[c], b[c]) + reach, c))));
      const ab = subtract(b, a);
      const squared = ab[0] ** 2 + ab[1] ** 2 + ab[2] ** 2;
      const n = flat ? acrossOf(flat.along, ab) : null;
      for (let z = low[2]!; z <= high[2]!; z++)
        for (let y = low[1]!; y <= high[1]!; y++) {
          const py = place(y, 1) - a[1];
          const pz = place(z, 2) - a[2];
          const row = (z * size[1] + y) * size[0];
          for (let x = low[0]!; x <= high[0]!; x++) {
            const px = place(x, 0) - a[0];
            const t = squared > 0 ? Math.min(1, Math.max(0, (px * ab[0] + py * ab[1] + pz * ab[2]) / squared)) : 0;
            const dx = px - t * ab[0];
            const dy = py - t * ab[1];
            const dz = pz - t * ab[2];
            let d2 = dx * dx + dy * dy + dz * dz;
            if (n) {
              const u = dx * n[0] + dy * n[1] + dz * n[2];
              d2 = (u / flat!.thin) ** 2 + (d2 - u * u) / flat!.wide ** 2;
            }
            const share = Math.sqrt(d2) / (ra + t * (rb - ra));
            if (share < shares[row + x]!) shares[row + x] = share;
          }
        }
      for (let c = 0; c < 3; c++) {
        whole.low[c] = Math.min(whole.low[c]!, low[c]!);
        whole.high[c] = Math.max(whole.high[c]!, high[c]!);
      }
    }
    this.settle(whole.low, whole.high, levelAt);
  }

  /** All sub-samples of a waved sheet. */
  addSheet({ at, normal, thicknessMm, waveMm, waveLengthMm, level }: Extract<TrialBody, { kind: "sheet" }>): void {
    const { size, spacing, sub, levels } = this;
    const n = normalise(normal);
    const [u] = perpendicularFrame(n);
    const turn = (2 * Math.PI) / waveLengthMm;
    let i = 0;
    for (let z = 0; z < size[2]; z++)
      for (let y = 0; y < size[1]; y++)
        for (let x = 0; x < size[0]; x++, i++) {
          const px = ((x + 0.5) / sub - 0.5) * spacing[0] - at[0];
          const py = ((y + 0.5) / sub - 0.5) * spacing[1] - at[1];
          const pz = ((z + 0.5) / sub - 0.5) * spacing[2] - at[2];
          const height = px * n[0] + py * n[1] + pz * n[2];
          if (Math.abs(height) > thicknessMm / 2 + waveMm) continue;
          const wave = waveMm * Math.sin(turn * (px * u[0] + py * u[1] + pz * u[2]));
          if (Math.abs(height - wave) <= thicknessMm / 2 && level > levels[i]!) levels[i] = level;
        }
  }

  /** Turns the shares drawn within a box into levels, and forgets them. */
  private settle(low: readonly number[], high: readonly number[], levelAt: LevelAt): void {
    const { size, shares, levels } = this;
    for (let z = low[2]!; z <= high[2]!; z++)
      for (let y = low[1]!; y <= high[1]!; y++) {
        const row = (z * size[1] + y) * size[0];
        for (let i = row + low[0]!; i <= row + high[0]!; i++) {
          const share = shares[i]!;
          if (share > 1) {
            shares[i] = 2;
            continue;
          }
          const level = levelAt(share);
          if (level > levels[i]!) levels[i] = level;
          shares[i] = 2;
        }
      }
  }

  /** Mean level of each voxel. */
  voxels(): Float32Array {
    const { sub, levels, size } = this;
    if (sub === 1) return levels;
    const [nx, ny, nz] = this.sizeVoxels;
    const out = new Float32Array(nx * ny * nz);
    const each = 1 / sub ** 3;
    let from = 0;
    for (let z = 0; z < size[2]; z++)
      for (let y = 0; y < size[1]; y++) {
        const row = (Math.floor(z / sub) * ny + Math.floor(y / sub)) * nx;
        for (let x = 0; x < nx; x++) for (let k = 0; k < sub; k++) out[row + x] = out[row + x]! + each * levels[from++]!;
      }
    return out;
  }
}

/** Unit vector of `along` made perpendicular to a direction. */
function acrossOf(along: Vec3, direction: Vec3): Vec3 {
  const d = normalise(direction);
  const part = along[0] * d[0] + along[1] * d[1] + along[2] * d[2];
  return normalise(subtract(along, scale(d, part)));
}

function drawString(canvas: Canvas, string: TrialString): void {
  const { line, core, flat } = string;
  const radii = radiiOfString(string);
  const levelAt: LevelAt = core ? (share) => (share < core.share ? core.level : 1) : () => 1;
  const wide = Math.sqrt(flat?.ratio ?? 1);
  canvas.add(line, radii, levelAt, flat && { along: flat.along, wide, thin: 1 / wide });
}

/** Radius at each point of a string's line (area-equivalent where it is flattened), millimetres. */
export function radiiOfString({ line, diametersMm: [first, last] }: TrialString): number[] {
  const at: number[] = [0];
  for (let i = 1; i < line.length; i++) at.push(at[i - 1]! + distance(line[i - 1]!, line[i]!));
  const length = at.at(-1)! || 1;
  return at.map((s) => (first + ((last - first) * s) / length) / 2);
}

function drawBody(canvas: Canvas, body: TrialBody): void {
  if (body.kind === "ball") canvas.add([body.centre, body.centre], [body.radiusMm, body.radiusMm], () => body.level);
  else if (body.kind === "sheet") canvas.addSheet(body);
  else
    for (let i = 0; i < Math.min(body.one.length, body.other.length); i++)
      canvas.add([body.one[i]!, body.other[i]!], [body.widthMm / 2, body.widthMm / 2], () => body.level);
}

/** Blurs along one axis in place; beyond the sides all goes on as it is at them: strings that leave the scan do so. */
function blurAlong(
  values: Float32Array,
  size: readonly [number, number, number],
  axis: 0 | 1 | 2,
  taps: readonly number[],
): void {
  if (taps.length === 1) return;
  const halo = taps.length >> 1;
  const n = size[axis];
  // Rows of neighbours that move together: along x single voxels, along y lines, along z planes.
  const row = axis === 0 ? 1 : axis === 1 ? size[0] : size[0] * size[1];
  const source = new Float32Array(n * row);
  for (let from = 0; from < values.length; from += n * row) {
    source.set(values.subarray(from, from + n * row));
    for (let i = 0; i < n; i++) {
      const to = from + i * row;
      values.fill(0, to, to + row);
      for (let k = -halo; k <= halo; k++) {
        const weight = taps[k + halo]!;
        const at = Math.min(n - 1, Math.max(0, i + k)) * row;
        for (let q = 0; q < row; q++) values[to + q] = values[to + q]! + weight * source[at + q]!;
      }
    }
  }
}

/** Rings of constant height about an axis along z somewhat beside the middle. */
function addRings(levels: Float32Array, size: readonly [number, number, number], look: TrialLook, seed: number): void {
  if (!look.ring) return;
  const random = new SeededRandom(seed, RING_STREAM);
  const [nx, ny, nz] = size;
  const centre = [nx * random.between(0.3, 0.7), ny * random.between(0.3, 0.7)] as const;
  const heights = Array.from({ length: nx + ny }, () => (random.unit() < 0.15 ? random.normal() : 0));
  for (let j = 0; j < ny; j++)
    for (let i = 0; i < nx; i++) {
      const radius = Math.hypot(i - centre[0], j - centre[1]);
      const k = Math.floor(radius);
      const height = look.ring * (heights[k]! * (1 - (radius - k)) + heights[k + 1]! * (radius - k));
      for (let z = 0; z < nz; z++) levels[(z * ny + j) * nx + i] = levels[(z * ny + j) * nx + i]! + height;
    }
}

/** Bright and dark streaks that leave each spot in its own slices. */
function addStreaks(levels: Float32Array, { sizeVoxels: [nx, ny, nz], spacingMm: [sx, sy, sz], look }: TrialSpec): void {
  if (!look.streak) return;
  for (const { at, radiusMm } of look.spots ?? [])
    for (let z = 0; z < nz; z++) {
      const fade = Math.exp(-(((z * sz - at[2]) / radiusMm) ** 2));
      if (fade < 1e-3) continue;
      for (let j = 0; j < ny; j++)
        for (let i = 0; i < nx; i++) {
          const x = i * sx - at[0];
          const y = j * sy - at[1];
          const far = Math.hypot(x, y);
          if (far < radiusMm) continue;
          const height = (look.streak * fade * radiusMm * Math.cos(6 * Math.atan2(y, x))) / far;
          levels[(z * ny + j) * nx + i] = levels[(z * ny + j) * nx + i]! + height;
        }
    }
}
