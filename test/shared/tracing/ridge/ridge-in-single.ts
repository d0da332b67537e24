import type { BlockScale } from "#shared/tracing/ridge/ridge-kernel.ts";

const f = Math.fround;
type Triple = readonly [number, number, number];

/** Coefficients of the polynomial for cos(acos(1 - s^2) / 3 + 2 pi / 3), lowest first. */
const COSINE = [
  -0.5, -0.4082467257976532, 0.05552620813250542, -0.018707506358623505, 0.0076049803756177425, -0.0028813497629016638,
  0.0007829009555280209, -0.00010388263035565615,
].map(f);

/** The polynomial at s, in single precision. */
export function thirdOfAngle(s: number): number {
  let sum = COSINE[7]!;
  for (let k = 6; k >= 0; k--) sum = f(f(s * sum) + COSINE[k]!);
  return sum;
}

/**
 * The ridge measure by the compiled kernel's own steps, one voxel at a time and rounded to single precision after each: what it
 * must give bit for bit on any machine.
 * @param block shape [nz + 2 rz, ny + 2 ry, nx + 2 rx], x fastest.
 */
export function ridgeInSingle(block: Float32Array, size: Triple, scale: BlockScale, polarity: 1 | -1): Float32Array {
  const [nx, ny, nz] = size;
  const [kx, ky, kz] = scale.kernels;
  const [wide, high, deep] = [nx + 2 * kx.reach, ny + 2 * ky.reach, nz + 2 * kz.reach];
  const alongZ = (order: number) => filtered(block, [wide, high, deep], 2, kz, order);
  const alongY = (from: Float32Array, order: number) => filtered(from, [wide, high, nz], 1, ky, order);
  const alongX = (from: Float32Array, order: number) => filtered(from, [wide, ny, nz], 0, kx, order);
  const [z0, z1, z2] = [alongZ(0), alongZ(1), alongZ(2)];
  const [z0y0, z0y1, z1y0] = [alongY(z0, 0), alongY(z0, 1), alongY(z1, 0)];
  const derivatives = [
    alongX(z0y0, 2),
    alongX(alongY(z0, 2), 0),
    alongX(alongY(z2, 0), 0),
    alongX(z0y1, 1),
    alongX(z1y0, 1),
    alongX(alongY(z1, 1), 0),
    alongX(z0y0, 1),
    alongX(z0y1, 0),
    alongX(z1y0, 0),
  ];
  const factors = [...scale.normalise.map((n) => -polarity * n), ...scale.slope].map(f);
  return Float32Array.from({ length: nx * ny * nz }, (_, v) =>
    measure(
      derivatives.map((values, k) => f(values[v]! * factors[k]!)),
      f(scale.damping),
    ),
  );
}

/** One pass along an axis; the side along it shrinks by twice the reach. */
function filtered(
  from: Float32Array,
  size: Triple,
  axis: 0 | 1 | 2,
  kernel: BlockScale["kernels"][0],
  order: number,
): Float32Array {
  const { reach } = kernel;
  const weights = Float32Array.from([kernel.smooth, kernel.first, kernel.second][order]!);
  const [sx, sy, sz] = size.map((side, k) => (k === axis ? side - 2 * reach : side)) as [number, number, number];
  const stride = [1, size[0], size[0] * size[1]][axis]!;
  const out = new Float32Array(sx * sy * sz);
  let v = 0;
  for (let z = 0; z < sz; z++)
    for (let y = 0; y < sy; y++)
      for (let x = 0; x < sx; x++, v++) {
        const centre = (z * size[1] + y) * size[0] + x + reach * stride;
        let sum = order === 1 ? 0 : f(weights[0]! * from[centre]!);
        for (let k = 1; k <= reach; k++) {
          const [a, b] = [from[centre + k * stride]!, from[centre - k * stride]!];
          sum = f(sum + f(weights[k]! * f(order === 1 ? a - b : a + b)));
        }
        out[v] = sum;
      }
  return out;
}

const plus = (a: number, b: number) => f(a + b);
const minus = (a: number, b: number) => f(a - b);
const times = (a: number, b: number) => f(a * b);
/** a b - c d. */
const cross = (a: number, b: number, c: number, d: number) => minus(times(a, b), times(c, d));

function measure(d: readonly number[], damping: number): number {
  let [xx, yy, zz, xy, xz, yz, gx, gy, gz] = d as [number, number, number, number, number, number, number, number, number];
  const q = times(plus(plus(xx, yy), zz), f(1 / 3));
  [xx, yy, zz] = [minus(xx, q), minus(yy, q), minus(zz, q)];
  const off = plus(plus(times(xy, xy), times(xz, xz)), times(yz, yz));
  const on = plus(plus(times(xx, xx), times(yy, yy)), times(zz, zz));
  const p = f(Math.sqrt(times(plus(on, plus(off, off)), f(1 / 6))));
  const r = f(1 / Math.max(p, f(1e-30)));
  [xx, yy, zz] = [times(xx, r), times(yy, r), times(zz, r)];
  [xy, xz, yz] = [times(xy, r), times(xz, r), times(yz, r)];
  let determinant = times(xx, cross(yy, zz, yz, yz));
  determinant = minus(determinant, times(xy, cross(xy, zz, yz, xz)));
  determinant = plus(determinant, times(xz, cross(xy, yz, yy, xz)));
  const c = thirdOfAngle(f(Math.sqrt(Math.min(Math.max(minus(1, times(determinant, 0.5)), 0), 2))));
  const pc = times(p, c);
  const cc = times(c, c);
  const pp = times(p, p);
  const product = plus(times(q, minus(q, plus(pc, pc))), times(pp, minus(times(cc, 4), 3)));
  if (!(product > 0 && q > pc)) return 0;
  const between = minus(times(cc, 12), 3);
  let slope = plus(plus(times(gx, gx), times(gy, gy)), times(gz, gz));
  const least = plus(c, c);
  [xx, yy, zz] = [minus(xx, least), minus(yy, least), minus(zz, least)];
  const mixed = plus(
    plus(times(times(gx, gy), cross(xz, yz, xy, zz)), times(times(gx, gz), cross(xy, yz, xz, yy))),
    times(times(gy, gz), cross(xy, xz, yz, xx)),
  );
  const square = plus(
    plus(times(times(gx, gx), cross(yy, zz, yz, yz)), times(times(gy, gy), cross(xx, zz, xz, xz))),
    times(times(gz, gz), cross(xx, yy, xy, xy)),
  );
  if (times(pp, between) > times(product, f(1e-6))) {
    const along = Math.max(f(plus(square, plus(mixed, mixed)) / between), 0);
    slope = Math.max(minus(slope, along), 0);
  }
  return f(times(f(Math.sqrt(product)), product) / plus(product, times(damping, slope)));
}
