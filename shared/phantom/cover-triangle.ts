import { type CoverPlane, columns, FULL_COVER, widen } from "#shared/phantom/cover-plane.ts";

/** Numbers of one triangle made ready: corner a, edges u and v, their products uu uv vv, unit normal, half the thickness. */
const READY = 16;

/**
 * Triangles made ready for {@link coverTriangle}: what does not depend on the place is computed once.
 * @param s flat numbers, ten a triangle: three corners and half the thickness, millimetres.
 */
export function readyTriangles(s: readonly number[]): Float64Array {
  const count = s.length / 10;
  const out = new Float64Array(count * READY);
  for (let k = 0; k < count; k++) {
    const at = k * 10;
    const u = [s[at + 3]! - s[at]!, s[at + 4]! - s[at + 1]!, s[at + 5]! - s[at + 2]!] as const;
    const v = [s[at + 6]! - s[at]!, s[at + 7]! - s[at + 1]!, s[at + 8]! - s[at + 2]!] as const;
    const n = [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]] as const;
    const length = Math.hypot(n[0], n[1], n[2]);
    // A triangle without area has no normal; with a zero one no place is ruled out early.
    const unit = length > 0 ? 1 / length : 0;
    const uu = u[0] * u[0] + u[1] * u[1] + u[2] * u[2];
    const uv = u[0] * v[0] + u[1] * v[1] + u[2] * v[2];
    const vv = v[0] * v[0] + v[1] * v[1] + v[2] * v[2];
    out.set(
      [s[at]!, s[at + 1]!, s[at + 2]!, ...u, ...v, uu, uv, vv, n[0] * unit, n[1] * unit, n[2] * unit, s[at + 9]!],
      k * READY,
    );
  }
  return out;
}

/**
 * Marks the sub-samples within half the thickness of a triangle.
 * @param t triangles made ready. @param k which of them.
 */
export function coverTriangle(plane: CoverPlane, t: Float64Array, k: number): void {
  const { nx, ny, side: h, bits: cover } = plane;
  const at = k * READY;
  const half = t[at + 15]!;
  const ax = t[at]!;
  const ay = t[at + 1]!;
  const pz = plane.z - t[at + 2]!;
  const ux = t[at + 3]!;
  const uy = t[at + 4]!;
  const vx = t[at + 6]!;
  const vy = t[at + 7]!;
  const [i0, i1] = columns(ax + Math.min(0, ux, vx) - half, ax + Math.max(0, ux, vx) + half, plane.x0, h, nx);
  const [j0, j1] = columns(ay + Math.min(0, uy, vy) - half, ay + Math.max(0, uy, vy) + half, plane.y0, h, ny);
  if (i0 > i1) return;
  const halfDiagonal = (Math.sqrt(3) / 2) * h;
  const third = h / 3;
  const inner = Math.max(0, half - halfDiagonal) ** 2;
  const outer = (half + halfDiagonal) ** 2;
  const normalX = t[at + 12]!;
  const away = new Float64Array(3);
  for (let j = j0; j <= j1; j++) {
    const py = plane.y0 + j * h - ay;
    // Along a row the distance to the triangle's plane runs evenly: only the columns inside the thickness are looked at.
    const off = t[at + 13]! * py + t[at + 14]! * pz;
    let from = i0;
    let to = i1;
    const reach = half + halfDiagonal;
    if (Math.abs(normalX) > 1e-9) {
      const one = (-reach - off) / normalX;
      const two = (reach - off) / normalX;
      const start = ax - plane.x0;
      from = Math.max(i0, Math.ceil((start + Math.min(one, two)) / h));
      to = Math.min(i1, Math.floor((start + Math.max(one, two)) / h));
    } else if (Math.abs(off) > reach) continue;
    let any = false;
    for (let i = from; i <= to; i++) {
      const index = j * nx + i;
      if (cover[index] === FULL_COVER) continue;
      const px = plane.x0 + i * h - ax;
      const gap = squaredDistance(t, at, px, py, pz, away);
      if (gap >= outer) continue;
      any = true;
      if (gap <= inner && half > halfDiagonal) {
        cover[index] = FULL_COVER;
        continue;
      }
      cover[index]! |= bitsWithin(half, Math.sqrt(gap), away, third);
    }
    if (any) widen(plane, j, from, to);
  }
}

/**
 * Bits of the sub-samples that lie within `half` of a triangle from which the voxel's centre is `distance` away. Within a
 * voxel the distance is taken as even along `away`, which is exact beside a face and off by h^2 / (8 half) at most at a rim.
 */
function bitsWithin(half: number, distance: number, away: Float64Array, third: number): number {
  const scale = distance > 0 ? third / distance : 0;
  const gx = away[0]! * scale;
  const gy = away[1]! * scale;
  const gz = away[2]! * scale;
  let bits = 0;
  let bit = 1;
  for (let c = -1; c <= 1; c++)
    for (let b = -1; b <= 1; b++)
      for (let a = -1; a <= 1; a++, bit <<= 1) if (distance + a * gx + b * gy + c * gz <= half) bits |= bit;
  return bits;
}

/**
 * Squared distance of a place, given from corner a, to a triangle made ready: by the part of the triangle that is nearest.
 * `away` receives the way from there to the place.
 * @source Ericson, Real-Time Collision Detection, 2005, section 5.1.5.
 */
function squaredDistance(t: Float64Array, at: number, px: number, py: number, pz: number, away: Float64Array): number {
  const ux = t[at + 3]!;
  const uy = t[at + 4]!;
  const uz = t[at + 5]!;
  const vx = t[at + 6]!;
  const vy = t[at + 7]!;
  const vz = t[at + 8]!;
  const uu = t[at + 9]!;
  const uv = t[at + 10]!;
  const vv = t[at + 11]!;
  const pu = px * ux + py * uy + pz * uz;
  const pv = px * vx + py * vy + pz * vz;
  const bu = pu - uu;
  const bv = pv - uv;
  const cu = pu - uv;
  const cv = pv - vv;
  let s = 0;
  let r = 0;
  if (pu > 0 || pv > 0) {
    if (bu >= 0 && bv <= bu) s = 1;
    else if (cv >= 0 && cu <= cv) r = 1;
    else {
      const areaC = pu * bv - bu * pv;
      const areaB = cu * pv - pu * cv;
      const areaA = bu * cv - cu * bv;
      if (areaC <= 0 && pu >= 0 && bu <= 0) s = pu / (pu - bu);
      else if (areaB <= 0 && pv >= 0 && cv <= 0) r = pv / (pv - cv);
      else if (areaA <= 0 && bv - bu >= 0 && cu - cv >= 0) {
        r = (bv - bu) / (bv - bu + cu - cv);
        s = 1 - r;
      } else {
        const sum = areaA + areaB + areaC;
        if (sum !== 0) {
          s = areaB / sum;
          r = areaC / sum;
        }
      }
    }
  }
  const ex = px - ux * s - vx * r;
  const ey = py - uy * s - vy * r;
  const ez = pz - uz * s - vz * r;
  away[0] = ex;
  away[1] = ey;
  away[2] = ez;
  return ex * ex + ey * ey + ez * ez;
}
