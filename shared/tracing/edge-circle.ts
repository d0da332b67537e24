import { RAY_COSINES, RAY_SINES, RAYS } from "#shared/tracing/radial-profiles.ts";

/** From this share of blocked rays on a neighbour counts as touching. */
export const TOUCHED = 0.1;

/** A ray this many times as long as the string's own radius does not end at the string's edge. */
const LONG = 1.5;
/** A ray that does end there is at most so long. */
const OWN = 1.3;
/** The string's own radius stands at this share of the sorted edges: a neighbour only lengthens rays. */
const OWN_RANK = 0.35;
/** Fewest edges that tell of a string's radius, and that a circle is drawn through. */
const FEWEST_EDGES = 6;
const FEWEST_ON_CIRCLE = 10;
const ROUNDS = 4;
/** Edges farther outside the circle than this share of its radius, or than this many samples, belong to the neck with the neighbour. */
const NECK_RADII = 0.08;
const NECK_SAMPLES = 0.4;

/** A circle in the plane across a string. Millimetres from the point that the rays begin at. */
export interface EdgeCircle {
  readonly u: number;
  readonly v: number;
  readonly radius: number;
}

/** About the radius of the string itself, whatever touches it; NaN when too few edges are known. */
function ownRadius(edges: Float64Array): number {
  const known = edges.filter(Number.isFinite).sort();
  return known.length < FEWEST_EDGES ? Number.NaN : known[Math.floor(OWN_RANK * known.length)]!;
}

/**
 * Share of the rays that run into a neighbour, 0 to 1: long or without an edge, where the opposite ray ends at the string's own edge.
 * A flattened string, long to both sides, is not taken for two.
 * @param edges shape [RAYS], see `edgesOf`.
 */
export function blockedShare(edges: Float64Array): number {
  const own = ownRadius(edges);
  let blocked = 0;
  for (let ray = 0; ray < RAYS; ray++)
    if (!(edges[ray]! <= LONG * own) && edges[(ray + RAYS / 2) % RAYS]! <= OWN * own) blocked++;
  return blocked / RAYS;
}

/**
 * The circle through the edges that are the string's own: those of its free side, where no neighbour touches; edges that reach into
 * the neck between the two are left out, round by round. Null when too few are left.
 * @param edges shape [RAYS], see `edgesOf`. @param spacingMm distance of the samples that the edges were found among.
 * @source Kasa 1976 (circle by linear least squares), with edges dropped on one side as in trimmed least squares.
 */
export function freeCircle(edges: Float64Array, spacingMm: number): EdgeCircle | null {
  const own = ownRadius(edges);
  let keep = Array.from(edges, (edge) => edge <= OWN * own);
  let found: EdgeCircle | null = null;
  for (let round = 0; round < ROUNDS; round++) {
    const circle = circleThrough(edges, keep);
    if (!circle) break;
    found = circle;
    const neck = Math.max(NECK_RADII * circle.radius, NECK_SAMPLES * spacingMm);
    keep = Array.from(edges, (edge, ray) => {
      const away = Math.hypot(edge * RAY_COSINES[ray]! - circle.u, edge * RAY_SINES[ray]! - circle.v);
      return away - circle.radius <= neck && edge <= LONG * own;
    });
  }
  return found;
}

function circleThrough(edges: Float64Array, keep: readonly boolean[]): EdgeCircle | null {
  let n = 0;
  let [x, y, z, xx, yy, xy, xz, yz] = [0, 0, 0, 0, 0, 0, 0, 0];
  for (let ray = 0; ray < RAYS; ray++) {
    if (!keep[ray]) continue;
    const px = edges[ray]! * RAY_COSINES[ray]!;
    const py = edges[ray]! * RAY_SINES[ray]!;
    const pz = px * px + py * py;
    n++;
    x += px;
    y += py;
    z += pz;
    xx += px * px;
    yy += py * py;
    xy += px * py;
    xz += px * pz;
    yz += py * pz;
  }
  if (n < FEWEST_ON_CIRCLE) return null;
  const a = xx - (x * x) / n;
  const b = xy - (x * y) / n;
  const c = yy - (y * y) / n;
  const p = (xz - (x * z) / n) / 2;
  const q = (yz - (y * z) / n) / 2;
  const determinant = a * c - b * b;
  if (!(determinant > 1e-9 * a * c)) return null;
  const u = (p * c - q * b) / determinant;
  const v = (a * q - b * p) / determinant;
  const squared = u * u + v * v + (z - 2 * u * x - 2 * v * y) / n;
  return squared > 0 ? { u, v, radius: Math.sqrt(squared) } : null;
}
