import type { Vec3 } from "#shared/geometry/types.ts";
import { cross, dot, norm, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";

export interface Tube {
  /** shape [n, 3], order xyz, millimetres. */
  readonly points: ArrayLike<number>;
  /** shape [n], millimetres; NaN or missing = `thinnestMm`. */
  readonly radii: ArrayLike<number>;
  /** Linear red, green, blue, 0-1. */
  readonly colour: readonly [number, number, number];
  /** Lengths of line and gap, millimetres; empty = unbroken. Gaps show as dark bands. */
  readonly dashMm: readonly number[];
}

export interface TubeMesh {
  /** shape [n, 3] each. */
  readonly positions: Float32Array;
  readonly normals: Float32Array;
  readonly colours: Float32Array;
  readonly indices: Uint32Array;
}

const SIDES = 8;
/** Gaps of a line pattern are bands of this share of the colour: a tube in pieces would read as a broken string. */
const GAP_SHARE = 0.28;

/** One mesh of many tubes with open ends; points nearer together than `stepMm` are thinned out (ends stay). */
export function tubeMesh(tubes: readonly Tube[], thinnestMm: number, stepMm: number): TubeMesh {
  const positions: number[] = [];
  const normals: number[] = [];
  const colours: number[] = [];
  const indices: number[] = [];
  for (const tube of tubes) {
    for (const { rings, gap } of dashPieces(thinned(tube, thinnestMm, stepMm), tube.dashMm)) {
      const first = positions.length / 3;
      rings.forEach((ring, k) => {
        for (let s = 0; s < SIDES; s++) {
          const angle = (2 * Math.PI * s) / SIDES;
          const c = Math.cos(angle);
          const d = Math.sin(angle);
          for (let axis = 0; axis < 3; axis++) {
            const n = ring.u[axis]! * c + ring.w[axis]! * d;
            positions.push(ring.at[axis]! + n * ring.radius);
            normals.push(n);
            colours.push(tube.colour[axis]! * (gap ? GAP_SHARE : 1));
          }
          if (k === 0) continue;
          const a = first + (k - 1) * SIDES + s;
          const b = first + (k - 1) * SIDES + ((s + 1) % SIDES);
          indices.push(a, b, a + SIDES, b, b + SIDES, a + SIDES);
        }
      });
    }
  }
  return {
    positions: Float32Array.from(positions),
    normals: Float32Array.from(normals),
    colours: Float32Array.from(colours),
    indices: Uint32Array.from(indices),
  };
}

interface Ring {
  readonly at: Vec3;
  readonly radius: number;
  readonly u: Vec3;
  readonly w: Vec3;
  /** Arc length, millimetres. */
  readonly s: number;
}

/** Rings at the kept points; each ring's directions are carried on from the one before, so that the tube does not twist. */
function thinned(tube: Tube, thinnestMm: number, stepMm: number): Ring[] {
  const count = Math.floor(tube.points.length / 3);
  const point = (i: number): Vec3 => [tube.points[3 * i]!, tube.points[3 * i + 1]!, tube.points[3 * i + 2]!];
  const kept: number[] = [];
  for (let i = 0; i < count; i++) {
    const last = kept[kept.length - 1];
    if (last === undefined || i === count - 1 || norm(subtract(point(i), point(last))) >= stepMm) kept.push(i);
  }
  const rings: Ring[] = [];
  let s = 0;
  kept.forEach((i, k) => {
    const at = point(i);
    const before = point(kept[Math.max(0, k - 1)]!);
    const after = point(kept[Math.min(kept.length - 1, k + 1)]!);
    const tangent = normalise(subtract(after, before));
    if (k > 0) s += norm(subtract(at, before));
    const previous = rings[rings.length - 1]?.u;
    const carried = previous === undefined ? null : subtract(previous, scale(tangent, dot(previous, tangent)));
    const u = carried !== null && norm(carried) > 1e-6 ? normalise(carried) : perpendicularFrame(tangent)[0];
    const measured = tube.radii[i] ?? Number.NaN;
    const radius = Number.isNaN(measured) ? thinnestMm : Math.max(measured, thinnestMm);
    rings.push({ at, radius, u, w: cross(tangent, u), s });
  });
  return rings;
}

interface Piece {
  readonly rings: readonly Ring[];
  readonly gap: boolean;
}

/** A tube cut into the lines and gaps of its pattern, with a ring at each cut. */
function dashPieces(rings: readonly Ring[], dashMm: readonly number[]): Piece[] {
  if (rings.length < 2) return [];
  if (dashMm.length === 0) return [{ rings, gap: false }];
  const pieces: Piece[] = [];
  const total = rings[rings.length - 1]!.s;
  let start = 0;
  for (let k = 0; start < total; k++) {
    const end = Math.min(total, start + dashMm[k % dashMm.length]!);
    const inner = rings.filter((ring) => ring.s > start && ring.s < end);
    pieces.push({ rings: [ringAt(rings, start), ...inner, ringAt(rings, end)], gap: k % 2 === 1 });
    start = end;
  }
  return pieces;
}

function ringAt(rings: readonly Ring[], s: number): Ring {
  const next = Math.max(
    1,
    rings.findIndex((ring) => ring.s >= s),
  );
  const a = rings[next - 1]!;
  const b = rings[next]!;
  const t = b.s === a.s ? 0 : (s - a.s) / (b.s - a.s);
  const mix = (p: Vec3, q: Vec3): Vec3 => [p[0] + (q[0] - p[0]) * t, p[1] + (q[1] - p[1]) * t, p[2] + (q[2] - p[2]) * t];
  return { at: mix(a.at, b.at), radius: a.radius + (b.radius - a.radius) * t, u: t < 0.5 ? a.u : b.u, w: t < 0.5 ? a.w : b.w, s };
}
