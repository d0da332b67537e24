import { TautlineError } from "#shared/errors.ts";
import type { BrickPyramid } from "#shared/volume/bricks.ts";
import { type Block, bricksInBlock } from "#shared/volume/section/bricks-in-block.ts";
import { indexBounds, type Lattice } from "#shared/volume/section/lattice.ts";
import { type Gathered, type SampledLevel, sampleBlockInto } from "#shared/volume/section/sample-block.ts";

/** Set by whoever asked for the work when its answer is no longer wanted. */
export interface AbortSignalLike {
  readonly aborted: boolean;
}

/** Pixels of a side of a tile: small enough that an oblique tile touches few bricks it does not need. */
const TILE = 128;
/** Most samples between two looks at the signal: some milliseconds. */
const MOST_SAMPLES = 1 << 18;

/** Grey values shown as 0 and 255. */
export interface DisplayWindow {
  readonly low: number;
  readonly high: number;
}

/**
 * The lattice's picture: for each (i, j) the greatest or the mean trilinear sample over k, shown through a display window.
 * @param lattice in voxel indices of `level`; see `latticeOnLevel`.
 * @param out shape [height, width], rows in order; overwritten. Pixels without a sample in the scan are 0.
 * Memory beyond `out` is a tile of 128 x 128 pixels and at most `mostHeld` bricks at a time.
 * @throws cancelled when the signal says so; looked at every few milliseconds.
 * @source own derivation.
 */
export function sampleLatticeInto(
  bricks: BrickPyramid,
  level: number,
  lattice: Lattice,
  mode: "max" | "mean",
  window: DisplayWindow,
  out: Uint8Array,
  signal?: AbortSignalLike,
): void {
  const of = bricks.levels[level]!;
  const bounds = indexBounds(bricks.grid, of);
  const { width, height, depth } = lattice;
  const tileWidth = Math.min(TILE, width);
  const pixels = tileWidth * Math.min(TILE, height);
  const gathered: Gathered = { value: new Float64Array(pixels), count: new Uint32Array(pixels) };
  const held = new Int32Array(bricks.mostHeld);

  for (let j0 = 0; j0 < height; j0 += TILE)
    for (let i0 = 0; i0 < width; i0 += TILE) {
      const i1 = Math.min(i0 + TILE, width);
      const j1 = Math.min(j0 + TILE, height);
      const columns = i1 - i0;
      gathered.value.fill(mode === "max" ? Number.NEGATIVE_INFINITY : 0);
      gathered.count.fill(0);
      const waiting: Block[] = [{ i0, i1, j0, j1, k0: 0, k1: depth }];
      for (let block = waiting.pop(); block; block = waiting.pop()) {
        stopIfAborted(signal);
        const samples = (block.i1 - block.i0) * (block.j1 - block.j0) * (block.k1 - block.k0);
        if (samples > MOST_SAMPLES) {
          waiting.push(...halves(block, lattice));
          continue;
        }
        const needed = bricksInBlock(of.size, bricks.depthShift, lattice, block);
        if (needed === null || needed.count === 0) continue;
        if (needed.count > bricks.mostHeld) {
          waiting.push(...halves(block, lattice));
          continue;
        }
        const cells = needed.sides[0] * needed.sides[1] * needed.sides[2];
        const bases = new Int32Array(cells);
        bricks.holdInto(level, needed.numbers, needed.count, held);
        try {
          for (let n = 0; n < needed.count; n++) bases[needed.places[n]!] = held[n]!;
          const sampled: SampledLevel = {
            voxels: bricks.voxels,
            bases,
            size: of.size,
            depthShift: bricks.depthShift,
            low: bounds.low,
            high: bounds.high,
          };
          sampleBlockInto(sampled, needed, lattice, block, mode, { i0, j0, columns }, gathered);
        } finally {
          bricks.release();
        }
      }
      showTile(gathered, mode, window, out, { i0, i1, j0, j1, width });
    }
}

/**
 * Loads the bricks of a lattice, tile by tile, and lets go of them again.
 * @param signal looked at before each tile; when it says so the rest is left, which is no error.
 */
export function fetchLattice(bricks: BrickPyramid, level: number, lattice: Lattice, signal: AbortSignalLike): void {
  const { size } = bricks.levels[level]!;
  const { width, height, depth } = lattice;
  const held = new Int32Array(bricks.mostHeld);
  for (let j0 = 0; j0 < height; j0 += TILE)
    for (let i0 = 0; i0 < width; i0 += TILE) {
      const i1 = Math.min(i0 + TILE, width);
      const j1 = Math.min(j0 + TILE, height);
      const waiting: Block[] = [{ i0, i1, j0, j1, k0: 0, k1: depth }];
      for (let block = waiting.pop(); block; block = waiting.pop()) {
        if (signal.aborted) return;
        const needed = bricksInBlock(size, bricks.depthShift, lattice, block);
        if (needed === null) continue;
        if (needed.count > bricks.mostHeld) {
          waiting.push(...halves(block, lattice));
          continue;
        }
        bricks.holdInto(level, needed.numbers, needed.count, held);
        bricks.release();
      }
    }
}

/** A block cut in two across its longest side, measured in voxels. A single sample touches at most 8 bricks and is never cut. */
function halves(block: Block, lattice: Lattice): [Block, Block] {
  const { i0, i1, j0, j1, k0, k1 } = block;
  const long = (steps: number, by: readonly [number, number, number]) =>
    (steps - 1) * (Math.abs(by[0]) + Math.abs(by[1]) + Math.abs(by[2]));
  const i = i1 - i0 > 1 ? long(i1 - i0, lattice.u) : -1;
  const j = j1 - j0 > 1 ? long(j1 - j0, lattice.v) : -1;
  const k = k1 - k0 > 1 ? long(k1 - k0, lattice.w) : -1;
  if (k > i && k > j)
    return [
      { ...block, k1: (k0 + k1) >> 1 },
      { ...block, k0: (k0 + k1) >> 1 },
    ];
  if (j > i)
    return [
      { ...block, j1: (j0 + j1) >> 1 },
      { ...block, j0: (j0 + j1) >> 1 },
    ];
  return [
    { ...block, i1: (i0 + i1) >> 1 },
    { ...block, i0: (i0 + i1) >> 1 },
  ];
}

/** Writes a finished tile to the picture. A window without width shows values from `high` on as 255. */
function showTile(
  gathered: Gathered,
  mode: "max" | "mean",
  window: DisplayWindow,
  out: Uint8Array,
  tile: { i0: number; i1: number; j0: number; j1: number; width: number },
): void {
  const { low, high } = window;
  const scale = high === low ? 0 : 255 / (high - low);
  let from = 0;
  for (let j = tile.j0; j < tile.j1; j++) {
    let to = j * tile.width + tile.i0;
    for (let i = tile.i0; i < tile.i1; i++, from++, to++) {
      const count = gathered.count[from]!;
      if (count === 0) {
        out[to] = 0;
        continue;
      }
      const value = mode === "max" ? gathered.value[from]! : gathered.value[from]! / count;
      const grey = scale === 0 ? (value >= high ? 255 : 0) : Math.floor((value - low) * scale + 0.5);
      out[to] = grey > 255 ? 255 : Math.max(grey, 0);
    }
  }
}

/** @throws cancelled when the signal says so. */
export function stopIfAborted(signal: AbortSignalLike | undefined): void {
  if (signal?.aborted) throw new TautlineError("cancelled", "The work was stopped.", { what: "engine work" });
}
