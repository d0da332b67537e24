import type { Vec3 } from "#shared/geometry/types.ts";
import { DIRECTIONS, excessAt } from "#shared/tracing/strings/bright-share.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** The widest shell looked at. */
const WIDEST_MM = 4;
const GROWTH = 1.25;
/** The shell is wide enough when this share of it or less is bright. */
const NARROW_SHARE = 0.4;
/** Difference of the two smaller second moments: about a half in a sheet, nothing in a cone or half a space. */
const FLAT = 0.18;
const BRIGHT = 0.5;

/**
 * What a string runs into: `leaflet` when the tissue about the place is a sheet, else `muscle`. The shells about a place inside
 * it grow until two fifths of one or less are bright; the bright directions then lie in a plane (a sheet) or to one side.
 * @param inside a place in the tissue, millimetres along the voxel axes. @param radiusMm radius of the string.
 * @source own derivation: second moments of the bright directions.
 */
export function contactKind(context: TraceContext, inside: Vec3, radiusMm: number): "muscle" | "leaflet" {
  const least = BRIGHT * excessAt(context, inside, radiusMm);
  let moments = [0, 0, 0, 0, 0, 0];
  for (let shell = 2.5 * radiusMm; shell <= WIDEST_MM; shell *= GROWTH) {
    const sums = [0, 0, 0, 0, 0, 0];
    let count = 0;
    for (const [x, y, z] of DIRECTIONS) {
      const at: Vec3 = [inside[0] + shell * x, inside[1] + shell * y, inside[2] + shell * z];
      if (excessAt(context, at, shell / 4) <= least) continue;
      count++;
      [x * x, x * y, x * z, y * y, y * z, z * z].forEach((product, n) => {
        sums[n] = sums[n]! + product;
      });
    }
    if (count === 0) break;
    moments = sums.map((sum) => sum / count);
    if (count <= NARROW_SHARE * DIRECTIONS.length) break;
  }
  const [, middle, least3] = eigenvaluesOf(moments);
  return middle - least3 > FLAT ? "leaflet" : "muscle";
}

/** Eigenvalues of a symmetric 3 x 3 matrix given as xx, xy, xz, yy, yz, zz, descending. @source Smith 1961. */
function eigenvaluesOf(m: readonly number[]): [number, number, number] {
  const [a, b, c, d, e, f] = m as [number, number, number, number, number, number];
  const mean = (a + d + f) / 3;
  const p = Math.sqrt(((a - mean) ** 2 + (d - mean) ** 2 + (f - mean) ** 2 + 2 * (b * b + c * c + e * e)) / 6);
  if (p === 0) return [mean, mean, mean];
  const [A, D, F] = [(a - mean) / p, (d - mean) / p, (f - mean) / p];
  const [B, C, E] = [b / p, c / p, e / p];
  const half = (A * (D * F - E * E) - B * (B * F - C * E) + C * (B * E - C * D)) / 2;
  const angle = Math.acos(Math.min(1, Math.max(-1, half))) / 3;
  const first = mean + 2 * p * Math.cos(angle);
  const last = mean + 2 * p * Math.cos(angle + (2 * Math.PI) / 3);
  return [first, 3 * mean - first - last, last];
}
