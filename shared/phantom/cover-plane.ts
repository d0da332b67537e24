/**
 * Which of a voxel's 27 sub-samples (3 x 3 x 3, a third of a voxel apart) lie inside solids, as bits: the union of any number of
 * solids is then exact on the sub-samples, wherever they overlap.
 */
export const FULL_COVER = (1 << 27) - 1;

/** One plane of voxels while it is filled. */
export interface CoverPlane {
  readonly nx: number;
  readonly ny: number;
  /** Cubic voxels, millimetres. */
  readonly side: number;
  /** Centre of voxel 0, 0 and of the plane, millimetres. */
  readonly x0: number;
  readonly y0: number;
  z: number;
  /** shape [ny, nx]; sub-sample bits. */
  readonly bits: Uint32Array;
  /** First and last column with any bit, per row, shape [ny]; first > last when none. Covers all materials of the plane. */
  readonly first: Int32Array;
  readonly last: Int32Array;
}

/** Columns (or rows) that a range of places reaches, clamped to the plane: [first, last]; empty when first > last. */
export function columns(from: number, to: number, origin: number, side: number, count: number): [number, number] {
  return [Math.max(0, Math.ceil((from - origin) / side - 0.5)), Math.min(count - 1, Math.floor((to - origin) / side + 0.5))];
}

/**
 * Marks the sub-samples inside a tube piece whose radius runs evenly from `r0` to `r1`, with round ends.
 * @param s flat numbers, the piece begins at `at`: x0 y0 z0 r0 x1 y1 z1 r1, millimetres.
 */
export function coverCone(plane: CoverPlane, s: Float64Array, at: number): void {
  const { nx, ny, side: h, z } = plane;
  const ax = s[at]!;
  const ay = s[at + 1]!;
  const az = s[at + 2]!;
  const r0 = s[at + 3]!;
  const dx = s[at + 4]! - ax;
  const dy = s[at + 5]! - ay;
  const dz = s[at + 6]! - az;
  const dr = s[at + 7]! - r0;
  const most = Math.max(r0, r0 + dr);
  // The part of the axis that can reach this plane.
  let t0 = 0;
  let t1 = 1;
  const reach = most + h / 2;
  if (Math.abs(dz) > 1e-12) {
    const ta = (z - reach - az) / dz;
    const tb = (z + reach - az) / dz;
    t0 = Math.max(0, Math.min(ta, tb));
    t1 = Math.min(1, Math.max(ta, tb));
  } else if (Math.abs(az - z) > reach) return;
  if (t0 > t1) return;
  const [xa, xb, ya, yb] = [ax + dx * t0, ax + dx * t1, ay + dy * t0, ay + dy * t1];
  const [i0, i1] = columns(Math.min(xa, xb) - most, Math.max(xa, xb) + most, plane.x0, h, nx);
  const [j0, j1] = columns(Math.min(ya, yb) - most, Math.max(ya, yb) + most, plane.y0, h, ny);
  if (i0 > i1) return;
  const squared = dx * dx + dy * dy + dz * dz;
  const inverse = squared > 0 ? 1 / squared : 0;
  const halfDiagonal = (Math.sqrt(3) / 2) * h;
  const pz = z - az;
  for (let j = j0; j <= j1; j++) {
    const py = plane.y0 + j * h - ay;
    let any = false;
    for (let i = i0; i <= i1; i++) {
      const index = j * nx + i;
      if (plane.bits[index] === FULL_COVER) continue;
      const px = plane.x0 + i * h - ax;
      let t = (px * dx + py * dy + pz * dz) * inverse;
      t = t < 0 ? 0 : Math.min(t, 1);
      const ex = px - dx * t;
      const ey = py - dy * t;
      const ez = pz - dz * t;
      const gap = Math.sqrt(ex * ex + ey * ey + ez * ez) - (r0 + dr * t);
      if (gap >= halfDiagonal) continue;
      if (gap <= -halfDiagonal) plane.bits[index] = FULL_COVER;
      else plane.bits[index]! |= coneBits(px, py, pz, dx, dy, dz, inverse, r0, dr, h / 3);
      any = true;
    }
    if (any) widen(plane, j, i0, i1);
  }
}

function coneBits(
  px: number,
  py: number,
  pz: number,
  dx: number,
  dy: number,
  dz: number,
  inverse: number,
  r0: number,
  dr: number,
  third: number,
): number {
  let bits = 0;
  let bit = 1;
  for (let c = -1; c <= 1; c++) {
    const z = pz + c * third;
    for (let b = -1; b <= 1; b++) {
      const y = py + b * third;
      for (let a = -1; a <= 1; a++, bit <<= 1) {
        const x = px + a * third;
        let t = (x * dx + y * dy + z * dz) * inverse;
        t = t < 0 ? 0 : Math.min(t, 1);
        const ex = x - dx * t;
        const ey = y - dy * t;
        const ez = z - dz * t;
        const r = r0 + dr * t;
        if (ex * ex + ey * ey + ez * ez <= r * r) bits |= bit;
      }
    }
  }
  return bits;
}

/** Notes that columns of a row may be covered. */
export function widen(plane: CoverPlane, row: number, first: number, last: number): void {
  if (first < plane.first[row]!) plane.first[row] = first;
  if (last > plane.last[row]!) plane.last[row] = last;
}
