import type { GaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";

/** What one scale needs on one level's grid. */
export interface BlockScale {
  /** Kernels along x, y, z. */
  readonly kernels: readonly [GaussianKernels, GaussianKernels, GaussianKernels];
  /** sigma^2 / (spacing_a spacing_b) for the pairs xx, yy, zz, xy, xz, yz: turns voxel derivatives into scale-normalised ones. */
  readonly normalise: readonly [number, number, number, number, number, number];
  /** sigma / spacing along x, y, z: turns voxel slopes into scale-normalised ones. */
  readonly slope: readonly [number, number, number];
  /**
   * How much a voxel away from the crest is damped: the measure is multiplied by m^2 / (m^2 + damping * slope^2). 0 = not at all
   * (the published measure); 1 = to a half at one sigma from the crest.
   */
  readonly damping: number;
}

/** Buffers that the kernel writes over; grown on demand and reused between calls. */
export interface RidgeScratch {
  values: Float64Array;
}

/** Scratch for {@link ridgeBlockInto}. */
export function createRidgeScratch(): RidgeScratch {
  return { values: new Float64Array(0) };
}

/**
 * Fills `out` with the scale-normalised ridge measure sqrt(l1 l2) of one scale, where l1 >= l2 are the two largest
 * eigenvalues of minus the Hessian (bright strings) or of the Hessian (dark ones), and 0 where fewer than two are
 * positive; damped away from the crest, where the slope across the string is not zero, so that the inside of a thick string's rim is no
 * string of its own. At the axis of a solid cylinder of radius r and contrast 1 it is r^2 / (2 s^2) exp(-r^2 / (2 s^2)).
 * A voxel's value depends on the voxels within reach alone and is computed in a fixed order: blocks have no seams, bit for bit.
 * @param block grey values, shape [nz + 2 rz, ny + 2 ry, nx + 2 rx], x fastest, r = reach of the scale's kernels; borrowed.
 * @param size nx, ny, nz of the output, voxels.
 * @param polarity +1 for bright strings, -1 for dark ones.
 * @param out shape [nz, ny, nx]; overwritten; grey values of contrast.
 * @source Sato et al. 1998 (the measure, geometric mean of the two cross-sectional curvatures); eigenvalues in closed form,
 *   Smith 1961.
 */
export function ridgeBlockInto(
  block: Float32Array,
  size: readonly [number, number, number],
  scale: BlockScale,
  polarity: 1 | -1,
  out: Float32Array,
  scratch: RidgeScratch,
): void {
  const [nx, ny, nz] = size;
  const [kx, ky, kz] = scale.kernels;
  const wide = nx + 2 * kx.reach;
  const high = ny + 2 * ky.reach;
  const planeLength = wide * high;
  const bandLength = wide * ny;
  const voxels = planeLength * (nz + 2 * kz.reach);
  // Each buffer has one value to spare: the loops below run in steps of two.
  const needed = voxels + 1 + 3 * (planeLength + 1) + 6 * (bandLength + 1) + 9 * (nx + 1);
  if (scratch.values.length < needed) scratch.values = new Float64Array(needed);
  let at = 0;
  const take = (length: number) => {
    at += length + 1;
    return scratch.values.subarray(at - length - 1, at);
  };
  const all = take(voxels);
  all.set(block.length === voxels ? block : block.subarray(0, voxels));
  const [z0, z1, z2] = [take(planeLength), take(planeLength), take(planeLength)];
  const [z0y0, z0y1, z0y2] = [take(bandLength), take(bandLength), take(bandLength)];
  const [z1y0, z1y1, z2y0] = [take(bandLength), take(bandLength), take(bandLength)];
  const rows: RidgeRows = {
    xx: take(nx),
    yy: take(nx),
    zz: take(nx),
    xy: take(nx),
    xz: take(nx),
    yz: take(nx),
    x: take(nx),
    y: take(nx),
    z: take(nx),
  };
  const y0 = wide * ky.reach;
  for (let z = 0; z < nz; z++) {
    allThree(all, (z + kz.reach) * planeLength, planeLength, planeLength, kz, z0, z1, z2);
    allThree(z0, y0, wide, bandLength, ky, z0y0, z0y1, z0y2);
    smoothAnd(z1, y0, wide, bandLength, ky.reach, ky.smooth, ky.first, z1y0, z1y1);
    smoothOnly(z2, y0, wide, bandLength, ky, z2y0);
    for (let y = 0; y < ny; y++) {
      const row = y * wide + kx.reach;
      slopeAndCurve(z0y0, row, nx, kx, rows.x, rows.xx);
      smoothAnd(z0y1, row, 1, nx, kx.reach, kx.smooth, kx.first, rows.y, rows.xy);
      smoothAnd(z1y0, row, 1, nx, kx.reach, kx.smooth, kx.first, rows.z, rows.xz);
      smoothOnly(z0y2, row, 1, nx, kx, rows.yy);
      smoothOnly(z2y0, row, 1, nx, kx, rows.zz);
      smoothOnly(z1y1, row, 1, nx, kx, rows.yz);
      rowOfRidge(rows, nx, scale, polarity, out, (z * ny + y) * nx);
    }
  }
}

/** First and second derivatives along one row, shape [nx + 1] each. */
interface RidgeRows {
  readonly xx: Float64Array;
  readonly yy: Float64Array;
  readonly zz: Float64Array;
  readonly xy: Float64Array;
  readonly xz: Float64Array;
  readonly yz: Float64Array;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
}

/**
 * Smoothed values, slopes and curvatures of `length` values from `start` on, along `stride`. Two values a turn share the
 * kernel's loads; each value's own sum keeps its order, so that the result does not depend on where a block begins.
 */
function allThree(
  from: Float64Array,
  start: number,
  stride: number,
  length: number,
  { reach, smooth, first, second }: GaussianKernels,
  out0: Float64Array,
  out1: Float64Array,
  out2: Float64Array,
): void {
  const w0 = smooth[0]!;
  const c0 = second[0]!;
  for (let j = 0; j < length; j += 2) {
    const p = start + j;
    let s = w0 * from[p]!;
    let e = c0 * from[p]!;
    let d = 0;
    let s2 = w0 * from[p + 1]!;
    let e2 = c0 * from[p + 1]!;
    let d2 = 0;
    for (let k = 1, up = p + stride, down = p - stride; k <= reach; k++, up += stride, down -= stride) {
      const a = from[up]!;
      const b = from[down]!;
      const a2 = from[up + 1]!;
      const b2 = from[down + 1]!;
      const w = smooth[k]!;
      const c = second[k]!;
      const f = first[k]!;
      s += w * (a + b);
      e += c * (a + b);
      d += f * (a - b);
      s2 += w * (a2 + b2);
      e2 += c * (a2 + b2);
      d2 += f * (a2 - b2);
    }
    out0[j] = s;
    out1[j] = d;
    out2[j] = e;
    out0[j + 1] = s2;
    out1[j + 1] = d2;
    out2[j + 1] = e2;
  }
}

/** Smoothed values and slopes, as {@link allThree}. */
function smoothAnd(
  from: Float64Array,
  start: number,
  stride: number,
  length: number,
  reach: number,
  smooth: Float64Array,
  first: Float64Array,
  out0: Float64Array,
  out1: Float64Array,
): void {
  const w0 = smooth[0]!;
  for (let j = 0; j < length; j += 2) {
    const p = start + j;
    let s = w0 * from[p]!;
    let d = 0;
    let s2 = w0 * from[p + 1]!;
    let d2 = 0;
    for (let k = 1, up = p + stride, down = p - stride; k <= reach; k++, up += stride, down -= stride) {
      const a = from[up]!;
      const b = from[down]!;
      const a2 = from[up + 1]!;
      const b2 = from[down + 1]!;
      const w = smooth[k]!;
      const f = first[k]!;
      s += w * (a + b);
      d += f * (a - b);
      s2 += w * (a2 + b2);
      d2 += f * (a2 - b2);
    }
    out0[j] = s;
    out1[j] = d;
    out0[j + 1] = s2;
    out1[j + 1] = d2;
  }
}

/** Smoothed values, as {@link allThree}. */
function smoothOnly(
  from: Float64Array,
  start: number,
  stride: number,
  length: number,
  { reach, smooth }: GaussianKernels,
  out0: Float64Array,
): void {
  const w0 = smooth[0]!;
  for (let j = 0; j < length; j += 2) {
    const p = start + j;
    let s = w0 * from[p]!;
    let s2 = w0 * from[p + 1]!;
    for (let k = 1, up = p + stride, down = p - stride; k <= reach; k++, up += stride, down -= stride) {
      const w = smooth[k]!;
      s += w * (from[up]! + from[down]!);
      s2 += w * (from[up + 1]! + from[down + 1]!);
    }
    out0[j] = s;
    out0[j + 1] = s2;
  }
}

/** Slopes and curvatures along a row, as {@link allThree}. */
function slopeAndCurve(
  from: Float64Array,
  start: number,
  length: number,
  { reach, first, second }: GaussianKernels,
  out1: Float64Array,
  out2: Float64Array,
): void {
  const c0 = second[0]!;
  for (let j = 0; j < length; j += 2) {
    const p = start + j;
    let e = c0 * from[p]!;
    let d = 0;
    let e2 = c0 * from[p + 1]!;
    let d2 = 0;
    for (let k = 1; k <= reach; k++) {
      const a = from[p + k]!;
      const b = from[p - k]!;
      const a2 = from[p + 1 + k]!;
      const b2 = from[p + 1 - k]!;
      const c = second[k]!;
      const f = first[k]!;
      e += c * (a + b);
      d += f * (a - b);
      e2 += c * (a2 + b2);
      d2 += f * (a2 - b2);
    }
    out1[j] = d;
    out2[j] = e;
    out1[j + 1] = d2;
    out2[j + 1] = e2;
  }
}

/** The measure along a row, from its derivatives. */
function rowOfRidge(
  rows: RidgeRows,
  nx: number,
  { normalise, slope, damping }: BlockScale,
  polarity: 1 | -1,
  out: Float32Array,
  to: number,
): void {
  const nxx = -polarity * normalise[0];
  const nyy = -polarity * normalise[1];
  const nzz = -polarity * normalise[2];
  const nxy = -polarity * normalise[3];
  const nxz = -polarity * normalise[4];
  const nyz = -polarity * normalise[5];
  const [slopeX, slopeY, slopeZ] = slope;
  for (let x = 0; x < nx; x++) {
    const xx = nxx * rows.xx[x]!;
    const yy = nyy * rows.yy[x]!;
    const zz = nzz * rows.zz[x]!;
    const xy = nxy * rows.xy[x]!;
    const xz = nxz * rows.xz[x]!;
    const yz = nyz * rows.yz[x]!;
    // Signs of the eigenvalues from the characteristic polynomial: most voxels have fewer than two positive ones.
    const trace = xx + yy + zz;
    const e2 = xx * yy + xx * zz + yy * zz - xy * xy - xz * xz - yz * yz;
    const determinant = xx * (yy * zz - yz * yz) - xy * (xy * zz - yz * xz) + xz * (xy * yz - yy * xz);
    if (determinant > 0 ? !(trace > 0 && e2 > 0) : trace <= 0 && e2 >= 0) {
      out[to + x] = 0;
      continue;
    }
    const q = trace / 3;
    const a = xx - q;
    const b = yy - q;
    const d = zz - q;
    const p = Math.sqrt((a * a + b * b + d * d + 2 * (xy * xy + xz * xz + yz * yz)) / 6);
    let product = q * q;
    let least = q;
    if (p > 0) {
      const half = (a * (b * d - yz * yz) - xy * (xy * d - yz * xz) + xz * (xy * yz - b * xz)) / (2 * p * p * p);
      const angle = Math.acos(Math.max(-1, Math.min(half, 1))) / 3;
      least = q + 2 * p * Math.cos(angle + (2 * Math.PI) / 3);
      product = e2 - least * (trace - least);
    }
    if (!(product > 0)) {
      out[to + x] = 0;
      continue;
    }
    const gx = slopeX * rows.x[x]!;
    const gy = slopeY * rows.y[x]!;
    const gz = slopeZ * rows.z[x]!;
    let slope2 = gx * gx + gy * gy + gz * gz;
    // The slope along the string is no distance from its crest: g' adj(A - least I) g = (l1 - least)(l2 - least)(g along)^2.
    const between = product - least * (trace - least) + least * least;
    if (between > 1e-6 * product) {
      const bx = xx - least;
      const by = yy - least;
      const bz = zz - least;
      const along =
        gx * gx * (by * bz - yz * yz) +
        gy * gy * (bx * bz - xz * xz) +
        gz * gz * (bx * by - xy * xy) +
        2 * (gx * gy * (xz * yz - xy * bz) + gx * gz * (xy * yz - xz * by) + gy * gz * (xy * xz - yz * bx));
      slope2 = Math.max(0, slope2 - Math.max(0, along / between));
    }
    out[to + x] = (Math.sqrt(product) * product) / (product + damping * slope2);
  }
}
