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

/** Plane buffers that the kernel writes over; grown on demand and reused between calls. */
export interface RidgeScratch {
  planes: Float64Array;
}

/** Scratch for {@link ridgeBlockInto}. */
export function createRidgeScratch(): RidgeScratch {
  return { planes: new Float64Array(0) };
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
  const needed = 3 * planeLength + 6 * bandLength;
  if (scratch.planes.length < needed) scratch.planes = new Float64Array(needed);
  const all = scratch.planes;
  let at = 0;
  const take = (length: number) => {
    at += length;
    return all.subarray(at - length, at);
  };
  const z0 = take(planeLength);
  const z1 = take(planeLength);
  const z2 = take(planeLength);
  const z0y0 = take(bandLength);
  const z0y1 = take(bandLength);
  const z0y2 = take(bandLength);
  const z1y0 = take(bandLength);
  const z1y1 = take(bandLength);
  const z2y0 = take(bandLength);
  for (let z = 0; z < nz; z++) {
    alongZ(block, (z + kz.reach) * planeLength, planeLength, kz, z0, z1, z2);
    threeAlongY(z0, wide, ny, ky, z0y0, z0y1, z0y2);
    twoAlongY(z1, wide, ny, ky, z1y0, z1y1);
    oneAlongY(z2, wide, ny, ky, z2y0);
    for (let y = 0; y < ny; y++)
      rowOfRidge(z0y0, z0y1, z0y2, z1y0, z1y1, z2y0, y * wide, nx, kx, scale, polarity, out, (z * ny + y) * nx);
  }
}

function alongZ(
  block: Float32Array,
  base: number,
  plane: number,
  kernel: GaussianKernels,
  out0: Float64Array,
  out1: Float64Array,
  out2: Float64Array,
): void {
  const { reach, smooth, first, second } = kernel;
  for (let j = 0; j < plane; j++) {
    const c = block[base + j]!;
    let s = smooth[0]! * c;
    let d = 0;
    let e = second[0]! * c;
    for (let k = 1, up = base + j + plane, down = base + j - plane; k <= reach; k++, up += plane, down -= plane) {
      const a = block[up]!;
      const b = block[down]!;
      const sum = a + b;
      s += smooth[k]! * sum;
      e += second[k]! * sum;
      d += first[k]! * (a - b);
    }
    out0[j] = s;
    out1[j] = d;
    out2[j] = e;
  }
}

function threeAlongY(
  from: Float64Array,
  wide: number,
  ny: number,
  kernel: GaussianKernels,
  out0: Float64Array,
  out1: Float64Array,
  out2: Float64Array,
): void {
  const { reach, smooth, first, second } = kernel;
  const length = wide * ny;
  const shift = wide * reach;
  for (let j = 0; j < length; j++) {
    const c = from[j + shift]!;
    let s = smooth[0]! * c;
    let d = 0;
    let e = second[0]! * c;
    for (let k = 1, up = j + shift + wide, down = j + shift - wide; k <= reach; k++, up += wide, down -= wide) {
      const a = from[up]!;
      const b = from[down]!;
      const sum = a + b;
      s += smooth[k]! * sum;
      e += second[k]! * sum;
      d += first[k]! * (a - b);
    }
    out0[j] = s;
    out1[j] = d;
    out2[j] = e;
  }
}

function twoAlongY(
  from: Float64Array,
  wide: number,
  ny: number,
  kernel: GaussianKernels,
  out0: Float64Array,
  out1: Float64Array,
): void {
  const { reach, smooth, first } = kernel;
  const length = wide * ny;
  const shift = wide * reach;
  for (let j = 0; j < length; j++) {
    let s = smooth[0]! * from[j + shift]!;
    let d = 0;
    for (let k = 1, up = j + shift + wide, down = j + shift - wide; k <= reach; k++, up += wide, down -= wide) {
      const a = from[up]!;
      const b = from[down]!;
      s += smooth[k]! * (a + b);
      d += first[k]! * (a - b);
    }
    out0[j] = s;
    out1[j] = d;
  }
}

function oneAlongY(from: Float64Array, wide: number, ny: number, kernel: GaussianKernels, out0: Float64Array): void {
  const { reach, smooth } = kernel;
  const length = wide * ny;
  const shift = wide * reach;
  for (let j = 0; j < length; j++) {
    let s = smooth[0]! * from[j + shift]!;
    for (let k = 1, up = j + shift + wide, down = j + shift - wide; k <= reach; k++, up += wide, down -= wide)
      s += smooth[k]! * (from[up]! + from[down]!);
    out0[j] = s;
  }
}

function rowOfRidge(
  z0y0: Float64Array,
  z0y1: Float64Array,
  z0y2: Float64Array,
  z1y0: Float64Array,
  z1y1: Float64Array,
  z2y0: Float64Array,
  row: number,
  nx: number,
  kernel: GaussianKernels,
  { normalise, slope, damping }: BlockScale,
  polarity: 1 | -1,
  out: Float32Array,
  to: number,
): void {
  const { reach, smooth, first, second } = kernel;
  const nxx = -polarity * normalise[0];
  const nyy = -polarity * normalise[1];
  const nzz = -polarity * normalise[2];
  const nxy = -polarity * normalise[3];
  const nxz = -polarity * normalise[4];
  const nyz = -polarity * normalise[5];
  const [slopeX, slopeY, slopeZ] = slope;
  const s0 = smooth[0]!;
  const e0 = second[0]!;
  for (let x = 0; x < nx; x++) {
    const c = row + x + reach;
    let xx = e0 * z0y0[c]!;
    let yy = s0 * z0y2[c]!;
    let zz = s0 * z2y0[c]!;
    let yz = s0 * z1y1[c]!;
    let xy = 0;
    let xz = 0;
    let gx = 0;
    let gy = s0 * z0y1[c]!;
    let gz = s0 * z1y0[c]!;
    for (let k = 1; k <= reach; k++) {
      const up = c + k;
      const down = c - k;
      const s = smooth[k]!;
      const f = first[k]!;
      const a0 = z0y0[up]!;
      const b0 = z0y0[down]!;
      const a1 = z0y1[up]!;
      const b1 = z0y1[down]!;
      const a2 = z1y0[up]!;
      const b2 = z1y0[down]!;
      xx += second[k]! * (a0 + b0);
      gx += f * (a0 - b0);
      gy += s * (a1 + b1);
      gz += s * (a2 + b2);
      xy += f * (a1 - b1);
      xz += f * (a2 - b2);
      yy += s * (z0y2[up]! + z0y2[down]!);
      zz += s * (z2y0[up]! + z2y0[down]!);
      yz += s * (z1y1[up]! + z1y1[down]!);
    }
    xx *= nxx;
    yy *= nyy;
    zz *= nzz;
    xy *= nxy;
    xz *= nxz;
    yz *= nyz;
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
    gx *= slopeX;
    gy *= slopeY;
    gz *= slopeZ;
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
