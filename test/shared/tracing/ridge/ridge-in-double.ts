import type { BlockScale } from "#shared/tracing/ridge/ridge-kernel.ts";

type Triple = readonly [number, number, number];

/**
 * The ridge measure in double precision, one voxel at a time and straight from its definition: derivatives as triple sums
 * over the three kernels, eigenvalues by the cosine of a third of an angle (Smith 1961). Slow; written apart from the kernel.
 * @param block shape [nz + 2 rz, ny + 2 ry, nx + 2 rx], x fastest.
 */
export function ridgeInDouble(block: Float32Array, size: Triple, scale: BlockScale, polarity: 1 | -1): Float64Array {
  const [nx, ny, nz] = size;
  const [kx, ky, kz] = scale.kernels;
  const wide = nx + 2 * kx.reach;
  const high = ny + 2 * ky.reach;
  /** Derivative of the given orders along x, y, z at a voxel of the answer. */
  const derivative = (x: number, y: number, z: number, orders: Triple): number => {
    let sum = 0;
    for (let c = -kz.reach; c <= kz.reach; c++)
      for (let b = -ky.reach; b <= ky.reach; b++)
        for (let a = -kx.reach; a <= kx.reach; a++)
          sum +=
            weight(kx, orders[0], a) *
            weight(ky, orders[1], b) *
            weight(kz, orders[2], c) *
            block[((z + kz.reach + c) * high + y + ky.reach + b) * wide + x + kx.reach + a]!;
    return sum;
  };
  const out = new Float64Array(nx * ny * nz);
  for (let z = 0, v = 0; z < nz; z++)
    for (let y = 0; y < ny; y++)
      for (let x = 0; x < nx; x++, v++) {
        const curve = (pair: number, orders: Triple) => -polarity * scale.normalise[pair]! * derivative(x, y, z, orders);
        const [xx, yy, zz] = [curve(0, [2, 0, 0]), curve(1, [0, 2, 0]), curve(2, [0, 0, 2])];
        const [xy, xz, yz] = [curve(3, [1, 1, 0]), curve(4, [1, 0, 1]), curve(5, [0, 1, 1])];
        const slope: Triple = [
          scale.slope[0] * derivative(x, y, z, [1, 0, 0]),
          scale.slope[1] * derivative(x, y, z, [0, 1, 0]),
          scale.slope[2] * derivative(x, y, z, [0, 0, 1]),
        ];
        const [l1, l2, l3] = eigenvalues(xx, yy, zz, xy, xz, yz);
        if (!(l2 > 0)) continue;
        const along = between(l1, l3) * between(l2, l3) > 0 ? alongSquared(xx, yy, zz, xy, xz, yz, [l1, l2, l3], slope) : 0;
        const across = Math.max(0, slope[0] ** 2 + slope[1] ** 2 + slope[2] ** 2 - along);
        out[v] = (Math.sqrt(l1 * l2) * l1 * l2) / (l1 * l2 + scale.damping * across);
      }
  return out;
}

function weight(kernel: BlockScale["kernels"][0], order: number, k: number): number {
  if (order === 1) return Math.sign(k) * kernel.first[Math.abs(k)]!;
  return (order === 0 ? kernel.smooth : kernel.second)[Math.abs(k)]!;
}

function between(a: number, b: number): number {
  return a - b > 1e-9 * Math.abs(a) ? a - b : 0;
}

/** Eigenvalues of a symmetric matrix, descending. */
function eigenvalues(xx: number, yy: number, zz: number, xy: number, xz: number, yz: number): Triple {
  const q = (xx + yy + zz) / 3;
  const [a, b, d] = [xx - q, yy - q, zz - q];
  const p = Math.sqrt((a * a + b * b + d * d + 2 * (xy * xy + xz * xz + yz * yz)) / 6);
  if (p === 0) return [q, q, q];
  const half = (a * (b * d - yz * yz) - xy * (xy * d - yz * xz) + xz * (xy * yz - b * xz)) / (2 * p ** 3);
  const angle = Math.acos(Math.max(-1, Math.min(half, 1))) / 3;
  const l1 = q + 2 * p * Math.cos(angle);
  const l3 = q + 2 * p * Math.cos(angle + (2 * Math.PI) / 3);
  return [l1, 3 * q - l1 - l3, l3];
}

/** Squared part of the slope along the string: (A - l1)(A - l2) projects on the third eigenvector. */
function alongSquared(
  xx: number,
  yy: number,
  zz: number,
  xy: number,
  xz: number,
  yz: number,
  [l1, l2, l3]: Triple,
  [gx, gy, gz]: Triple,
): number {
  const times = (l: number, [x, y, z]: Triple): Triple => [
    (xx - l) * x + xy * y + xz * z,
    xy * x + (yy - l) * y + yz * z,
    xz * x + yz * y + (zz - l) * z,
  ];
  const [ax, ay, az] = times(l1, times(l2, [gx, gy, gz]));
  return (ax * gx + ay * gy + az * gz) / ((l3 - l1) * (l3 - l2));
}
