import { RIDGE_TILE_SIDE, type RidgeTile } from "#shared/tracing/ridge/ridge-tiles.ts";
import { radiusOfSigma } from "#shared/tracing/ridge/scales.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** Voxels on the crest of the ridge measure: the string image thinned to about one voxel a section. */
export interface RidgePoints {
  /** shape [n, 3], order xyz: voxels of the level, in the order z, y, x. */
  readonly voxels: Int32Array;
  /** shape [n], grey values. */
  readonly strengths: Float32Array;
  /** shape [n], millimetres: of the solid cylinder whose scale answers most strongly. */
  readonly radii: Float32Array;
}

const N = RIDGE_TILE_SIDE;

/** Steps along x, y and z to the eight neighbours in each of the three planes. */
const PLANES: readonly (readonly (readonly [number, number, number])[])[] = ([0, 1, 2] as const).map((normal) => {
  const steps: [number, number, number][] = [];
  for (let p = -1; p <= 1; p++)
    for (let q = -1; q <= 1; q++) {
      if (p === 0 && q === 0) continue;
      const step: [number, number, number] = [0, 0, 0];
      step[(normal + 1) % 3] = p;
      step[(normal + 2) % 3] = q;
      steps.push(step);
    }
  return steps;
});

/**
 * The ridge points of one tile: voxels that answer with `least` or more and at least as strongly as their eight neighbours in one
 * of the three planes along the voxel axes. A string crosses one of these planes steeply everywhere, so its crest keeps a point
 * a voxel step. A voxel's answer depends on its neighbours alone: tiles have no seams. Neighbouring tiles are
 * asked for only where a candidate lies at the side.
 * @param i, j, k tile numbers on the level.
 * @param least the weakest answer that counts for a radius (see `leastStrength`).
 * @source own derivation (non-maximum suppression across the string, as in Canny 1986, along fixed planes).
 */
export function ridgePointsOfTile(
  context: TraceContext,
  level: number,
  i: number,
  j: number,
  k: number,
  least: (radiusMm: number) => number,
): RidgePoints {
  const { size } = context.pyramid.levels[level]!;
  const tile = context.ridges.tile(level, i, j, k);
  const { strength } = tile;
  const radii = context.ridges.scales(level).map((scale) => radiusOfSigma(scale.sigmaMm));
  const leastOf = radii.map(least);
  const neighbours = new Map<number, RidgeTile | null>();
  const neighbour = (a: number, b: number, c: number): RidgeTile | null => {
    const key = (c + 1) * 9 + (b + 1) * 3 + a + 1;
    let found = neighbours.get(key);
    if (found === undefined) {
      const [x, y, z] = [(i + a) * N, (j + b) * N, (k + c) * N];
      const inside = Math.min(x, y, z) >= 0 && x < size[0] && y < size[1] && z < size[2];
      found = inside ? context.ridges.tile(level, i + a, j + b, k + c) : null;
      neighbours.set(key, found);
    }
    return found;
  };
  /** Answer at a place up to one voxel beyond the tile; beyond the level nothing answers. */
  const at = (x: number, y: number, z: number): number => {
    const [a, b, c] = [x >> 5, y >> 5, z >> 5];
    if ((a | b | c) === 0) return strength[(z * N + y) * N + x]!;
    return neighbour(a, b, c)?.strength[((z & 31) * N + (y & 31)) * N + (x & 31)] ?? 0;
  };
  const crest = (value: number, x: number, y: number, z: number, plane: (typeof PLANES)[number], outside: boolean): boolean => {
    for (const [dx, dy, dz] of plane) {
      if (((x + dx) | (y + dy) | (z + dz)) >> 5 !== 0 && !outside) continue;
      const other = at(x + dx, y + dy, z + dz);
      // Of equal neighbours the one with the highest number stays.
      if (other > value || (other === value && dz * 9 + dy * 3 + dx > 0)) return false;
    }
    return true;
  };
  const voxels: number[] = [];
  const strengths: number[] = [];
  const found: number[] = [];
  for (let z = 0, v = 0; z < N; z++)
    for (let y = 0; y < N; y++)
      for (let x = 0; x < N; x++, v++) {
        const value = strength[v]!;
        if (!(value >= leastOf[tile.scale[v]!]!) || !PLANES.some((plane) => crest(value, x, y, z, plane, false))) continue;
        // Neighbouring tiles are asked only for what is a crest as far as this one shows.
        if (!PLANES.some((plane) => crest(value, x, y, z, plane, false) && crest(value, x, y, z, plane, true))) continue;
        voxels.push(i * N + x, j * N + y, k * N + z);
        strengths.push(value);
        found.push(radii[tile.scale[v]!]!);
      }
  return { voxels: Int32Array.from(voxels), strengths: Float32Array.from(strengths), radii: Float32Array.from(found) };
}
