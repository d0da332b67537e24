import { gaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { type BlockScale, createRidgeKernel } from "#shared/tracing/ridge/ridge-kernel.ts";
import { type RidgeScale, ridgeScales, sigmaVoxels } from "#shared/tracing/ridge/scales.ts";
import { checkStop, type StopSwitch } from "#shared/tracing/stop-switch.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** Side of a ridge tile, voxels of its level; tile (i, j, k) starts at voxel (32 i, 32 j, 32 k). */
export const RIDGE_TILE_SIDE = 32;
/** Voxels of a ridge tile. */
export const RIDGE_TILE_VOXELS = RIDGE_TILE_SIDE ** 3;

/** A voxel one sigma from the crest answers half as strongly as the curvatures there alone would make it. */
const DAMPING = 0.25;

/** Of the tiles kept, this share are own answers also when a store keeps them: those of coarse levels are needed again and again. */
const OWN_BESIDE_STORE = 0.25;
/** Tiles that are kept at least, per kind: a borrowed tile stays as it is while so many others are asked for. */
const LEAST_KEPT = 16;

/** The multi-scale ridge measure over one tile. */
export interface RidgeTile {
  /** shape [32, 32, 32], z y x, x fastest; grey values of contrast; the strongest answer over the scales of the working level. */
  readonly strength: Float32Array;
  /** shape [32, 32, 32]; which of the working level's scales answered most strongly. */
  readonly scale: Uint8Array;
}

/** Unfinished tiles kept: what a moving pointer, a guide and work ahead may be at in turns. */
const MOST_BEGUN = 4;

/** Gives ridge tiles; the same tile is the same numbers, however and whenever it was made, so any cache may stand between. */
export interface RidgeTiles {
  readonly polarity: Polarity;
  /** Scales of a working level, ascending; `scale` of a tile counts in it. */
  scales(level: number): readonly RidgeScale[];
  /**
   * Tile (i, j, k) of a level; the scan's edge voxels count as repeated beyond it, and tile voxels outside the level say
   * nothing. Borrowed: not to be written to, and overwritten some time after {@link LEAST_KEPT} other tiles were asked for.
   * @param count how many of the level's scales take part, finest first; all when not given.
   */
  tile(level: number, i: number, j: number, k: number, count?: number): RidgeTile;
}

/** Which own answer: of the first `count` scales of a working level that live on `level`, over its tile `number` (x fastest). */
export interface OwnTileKey {
  readonly working: number;
  readonly count: number;
  readonly level: number;
  readonly number: number;
}

/** Keeps the answers of single levels for several users of one scan and polarity. */
export interface RidgeTileStore {
  /** Fills both arrays (shape [32, 32, 32]) with the kept tile; when there is none, `compute` makes it, writing every voxel. */
  tileInto(
    key: OwnTileKey,
    strength: Float32Array,
    scale: Uint8Array,
    compute: (strength: Float32Array, scale: Uint8Array) => void,
  ): void;
}

/** Strongest answer of the scales that live on one level, on that level's own grid. */
interface OwnAnswer {
  readonly strength: Float32Array;
  readonly scale: Uint8Array;
}

/**
 * The ridge tiles of a pyramid, computed when asked for and kept, up to `keepTiles` in all; those used longest ago make room.
 * Scales of coarser levels are computed on their own grid and carried to the working grid by linear interpolation.
 * @param store shared with others that work on the same scan and polarity; the tiles are the same numbers with it or without.
 * @param stop looked at after each scale, so that a tile asked for again and again is done in the end.
 */
export function createRidgeTiles(
  pyramid: VoxelPyramid,
  polarity: Polarity,
  keepTiles = 512,
  store: RidgeTileStore | null = null,
  stop: StopSwitch = { signal: null },
): RidgeTiles {
  const sign = polarity === "bright" ? 1 : -1;
  const kernel = createRidgeKernel();
  const scalesOfLevel = new Map<number, readonly RidgeScale[]>();
  const blockScales = new Map<string, BlockScale>();
  const ownTiles = Math.floor(keepTiles * (store ? OWN_BESIDE_STORE : 0.5));
  const kept = new KeptTiles(keepTiles - ownTiles);
  const own = new KeptTiles(ownTiles);
  /** Tiles that were being made when the work was stopped, and the number of their scales that are in them. */
  const begun = new Map<string, OwnAnswer & { readonly done: number }>();

  const scales = (level: number) => {
    const known = scalesOfLevel.get(level);
    if (known) return known;
    const made = ridgeScales(pyramid, level);
    scalesOfLevel.set(level, made);
    return made;
  };

  const blockScale = (scale: RidgeScale): BlockScale => {
    const key = `${scale.level} ${scale.sigmaMm}`;
    let made = blockScales.get(key);
    if (!made) {
      const [vx, vy, vz] = sigmaVoxels(pyramid, scale);
      const [sx, sy, sz] = pyramid.levels[scale.level]!.spacing;
      const n = scale.sigmaMm * scale.sigmaMm;
      made = {
        kernels: [gaussianKernels(vx), gaussianKernels(vy), gaussianKernels(vz)],
        normalise: [n / (sx * sx), n / (sy * sy), n / (sz * sz), n / (sx * sy), n / (sx * sz), n / (sy * sz)],
        slope: [scale.sigmaMm / sx, scale.sigmaMm / sy, scale.sigmaMm / sz],
        damping: DAMPING,
      };
      blockScales.set(key, made);
    }
    return made;
  };

  /** The tile of one level for those of the first `count` scales of a working level that live on it; null when there are none. */
  const ownTile = (working: number, count: number, level: number, i: number, j: number, k: number): OwnAnswer | null => {
    const list = scales(working);
    const here = list.flatMap((scale, index) => (index < count && scale.level === level ? [index] : []));
    if (here.length === 0) return null;
    const key = `${working} ${here.length} ${level} ${i} ${j} ${k}`;
    const known = own.find(key);
    if (known) return known;
    const made = own.take();
    const [gx, gy, gz] = pyramid.levels[level]!.size.map((side) => Math.ceil(side / RIDGE_TILE_SIDE)) as [number, number, number];
    const compute = (strength: Float32Array, scale: Uint8Array) => computeOwn(key, list, here, level, [i, j, k], strength, scale);
    if (store && i >= 0 && j >= 0 && k >= 0 && i < gx && j < gy && k < gz)
      store.tileInto({ working, count: here.length, level, number: (k * gy + j) * gx + i }, made.strength, made.scale, compute);
    else compute(made.strength, made.scale);
    own.keep(key, made);
    checkStop(stop);
    return made;
  };

  /** Writes the strongest answer over one tile of the scales numbered `here`, all of the level. */
  const computeOwn = (
    key: string,
    list: readonly RidgeScale[],
    here: readonly number[],
    level: number,
    [i, j, k]: readonly [number, number, number],
    strength: Float32Array,
    scale: Uint8Array,
  ): void => {
    let done = 0;
    const before = begun.get(key);
    if (before) {
      strength.set(before.strength);
      scale.set(before.scale);
      done = before.done;
    } else {
      strength.fill(0);
      scale.fill(here[0]!);
    }
    begun.delete(key);
    // Only what lies inside the level is computed: on coarse levels that is often a small part of a tile.
    const { size: whole } = pyramid.levels[level]!;
    const n = RIDGE_TILE_SIDE;
    const inside: [number, number, number] = [
      Math.min(n, whole[0] - i * n),
      Math.min(n, whole[1] - j * n),
      Math.min(n, whole[2] - k * n),
    ];
    const empty = Math.min(...inside) <= 0 || Math.min(i, j, k) < 0;
    // One block of grey values, wide enough for the widest scale, serves them all.
    const kernels = here.flatMap((index) => [blockScale(list[index]!).kernels]);
    const pad = ([0, 1, 2] as const).map((axis) => Math.max(...kernels.map((each) => each[axis].reach))) as [
      number,
      number,
      number,
    ];
    const size = ([0, 1, 2] as const).map((axis) => inside[axis] + 2 * pad[axis]) as [number, number, number];
    if (!empty)
      pyramid.readBoxInto(
        level,
        [i * n - pad[0], j * n - pad[1], k * n - pad[2]],
        size,
        kernel.block(size[0] * size[1] * size[2]),
      );
    for (const index of empty ? [] : here.slice(done)) {
      const answer = kernel.run(inside, pad, blockScale(list[index]!), sign);
      let from = 0;
      for (let z = 0; z < inside[2]; z++)
        for (let y = 0; y < inside[1]; y++) {
          const row = (z * n + y) * n;
          for (let v = row; v < row + inside[0]; v++, from++)
            if (answer[from]! > strength[v]!) {
              strength[v] = answer[from]!;
              scale[v] = index;
            }
        }
      done++;
      if (done < here.length && stop.signal?.aborted) {
        begun.set(key, { done, strength: strength.slice(), scale: scale.slice() });
        if (begun.size > MOST_BEGUN) begun.delete(begun.keys().next().value!);
        checkStop(stop);
      }
    }
  };

  return {
    polarity,
    scales,
    tile(level, i, j, k, most) {
      const count = Math.min(most ?? Number.POSITIVE_INFINITY, scales(level).length);
      const key = `${count} ${level} ${i} ${j} ${k}`;
      const known = kept.find(key);
      if (known) return known;
      const base = ownTile(level, count, level, i, j, k);
      const made = kept.take();
      const { strength, scale } = made;
      if (base) {
        strength.set(base.strength);
        scale.set(base.scale);
      } else {
        strength.fill(0);
        scale.fill(0);
      }
      for (let coarse = level + 1; coarse < pyramid.levels.length; coarse++)
        raiseByCoarse(pyramid, level, coarse, [i, j, k], (a, b, c) => ownTile(level, count, coarse, a, b, c), strength, scale);
      kept.keep(key, made);
      return made;
    },
  };
}

/** Tiles by key up to a number; a new one is written over the one used longest ago, so that memory does not depend on when garbage is collected. */
class KeptTiles {
  readonly #most: number;
  readonly #tiles = new Map<string, OwnAnswer>();

  constructor(most: number) {
    this.#most = Math.max(LEAST_KEPT, most);
  }

  /** The tile of a key, which then counts as the one used last. */
  find(key: string): OwnAnswer | undefined {
    const tile = this.#tiles.get(key);
    if (tile !== undefined) {
      this.#tiles.delete(key);
      this.#tiles.set(key, tile);
    }
    return tile;
  }

  /** Arrays for a new tile, holding anything. */
  take(): OwnAnswer {
    const [oldest] = this.#tiles;
    if (oldest === undefined || this.#tiles.size < this.#most)
      return { strength: new Float32Array(RIDGE_TILE_VOXELS), scale: new Uint8Array(RIDGE_TILE_VOXELS) };
    this.#tiles.delete(oldest[0]);
    return oldest[1];
  }

  keep(key: string, tile: OwnAnswer): void {
    this.#tiles.set(key, tile);
  }
}

/**
 * Raises a tile to the answers of a coarser level, interpolated linearly. The weights depend on the voxel's own index alone
 * (halves, quarters, ...: exact in floating point), so tiles have no seams. A coarse value beyond the edge is the edge's.
 */
function raiseByCoarse(
  pyramid: VoxelPyramid,
  level: number,
  coarse: number,
  tile: readonly [number, number, number],
  ownTile: (i: number, j: number, k: number) => OwnAnswer | null,
  strength: Float32Array,
  scale: Uint8Array,
): void {
  const fine = pyramid.levels[level]!;
  const top = pyramid.levels[coarse]!;
  const n = RIDGE_TILE_SIDE;
  const low = [new Int32Array(n), new Int32Array(n), new Int32Array(n)];
  const high = [new Int32Array(n), new Int32Array(n), new Int32Array(n)];
  const weight = [new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  const first = [0, 0, 0];
  const count = [0, 0, 0];
  for (let axis = 0; axis < 3; axis++) {
    const ratio = top.factor[axis]! / fine.factor[axis]!;
    const last = top.size[axis]! - 1;
    for (let v = 0; v < n; v++) {
      const at = (tile[axis]! * n + v + 0.5) / ratio - 0.5;
      const below = Math.floor(at);
      low[axis]![v] = Math.min(Math.max(below, 0), last);
      high[axis]![v] = Math.min(Math.max(below + 1, 0), last);
      weight[axis]![v] = at - below;
    }
    first[axis] = low[axis]![0]!;
    count[axis] = high[axis]![n - 1]! - first[axis]! + 1;
  }
  const [cx, cy, cz] = count as [number, number, number];
  const box = new Float32Array(cx * cy * cz);
  const boxScale = new Uint8Array(cx * cy * cz);
  if (!gatherInto(first, count, ownTile, box, boxScale)) return;
  // First the rows of the box that lie about a row of the tile, then along the row: x last, where the voxels are many.
  const row = new Float64Array(cx);
  const [lowX, highX, weightX] = [low[0]!, high[0]!, weight[0]!];
  let v = 0;
  for (let z = 0; z < n; z++) {
    const za = (low[2]![z]! - first[2]!) * cy;
    const zb = (high[2]![z]! - first[2]!) * cy;
    const wz = weight[2]![z]!;
    for (let y = 0; y < n; y++, v += n) {
      const ya = low[1]![y]! - first[1]!;
      const yb = high[1]![y]! - first[1]!;
      const wy = weight[1]![y]!;
      const aa = (za + ya) * cx;
      const ab = (za + yb) * cx;
      const ba = (zb + ya) * cx;
      const bb = (zb + yb) * cx;
      for (let x = 0; x < cx; x++) {
        const p = box[aa + x]! + wy * (box[ab + x]! - box[aa + x]!);
        const q = box[ba + x]! + wy * (box[bb + x]! - box[ba + x]!);
        row[x] = p + wz * (q - p);
      }
      const nearest = ((wz < 0.5 ? za : zb) + (wy < 0.5 ? ya : yb)) * cx - first[0]!;
      for (let x = 0; x < n; x++) {
        const from = row[lowX[x]! - first[0]!]!;
        const value = Math.fround(from + weightX[x]! * (row[highX[x]! - first[0]!]! - from));
        if (value > strength[v + x]!) {
          strength[v + x] = value;
          scale[v + x] = boxScale[nearest + (weightX[x]! < 0.5 ? lowX[x]! : highX[x]!)]!;
        }
      }
    }
  }
}

/** Copies a box of a level's own answers out of its tiles; false when the level has none. */
function gatherInto(
  first: readonly number[],
  count: readonly number[],
  ownTile: (i: number, j: number, k: number) => OwnAnswer | null,
  box: Float32Array,
  boxScale: Uint8Array,
): boolean {
  const n = RIDGE_TILE_SIDE;
  const [cx, cy, cz] = count as [number, number, number];
  const [fx, fy, fz] = first as [number, number, number];
  for (let k = Math.floor(fz / n); k * n < fz + cz; k++)
    for (let j = Math.floor(fy / n); j * n < fy + cy; j++)
      for (let i = Math.floor(fx / n); i * n < fx + cx; i++) {
        const tile = ownTile(i, j, k);
        if (!tile) return false;
        const x0 = Math.max(fx, i * n);
        const x1 = Math.min(fx + cx, i * n + n);
        for (let z = Math.max(fz, k * n); z < Math.min(fz + cz, k * n + n); z++)
          for (let y = Math.max(fy, j * n); y < Math.min(fy + cy, j * n + n); y++) {
            const from = ((z - k * n) * n + (y - j * n)) * n + (x0 - i * n);
            const to = ((z - fz) * cy + (y - fy)) * cx + (x0 - fx);
            for (let x = 0; x < x1 - x0; x++) {
              box[to + x] = tile.strength[from + x]!;
              boxScale[to + x] = tile.scale[from + x]!;
            }
          }
      }
  return true;
}
