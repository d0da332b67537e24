import fs from "node:fs";
import zlib from "node:zlib";
import { BRICK_SIDE, brickDepthShift, brickGrid } from "#shared/volume/bricks.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";
import { type KeptVolume, StoreBricks } from "#shared/volume/store/store-bricks.ts";

/** Reads bricks straight out of a specimen's store. Blocking: for worker threads and the command line. */
export class StoreFiles {
  readonly #bricks: StoreBricks;
  readonly #levels: readonly PyramidLevel[];
  readonly #depthShift: number;

  /** @param folder the store itself (`scan.ome.zarr`). */
  constructor(folder: string, volume: KeptVolume, levels: readonly PyramidLevel[]) {
    this.#bricks = new StoreBricks({ fs, zlib }, folder, volume, levels);
    this.#levels = levels;
    this.#depthShift = brickDepthShift(volume.dtype);
  }

  /**
   * Fills the start of `into` with one brick (see `brickGrid` for its number).
   * @throws unreadable-input when a file is missing, cut short or does not hold the brick.
   */
  readBrick(level: number, brick: number, into: Uint8Array): void {
    const [gx, gy] = brickGrid(this.#levels[level]!.size, this.#depthShift);
    const z = Math.floor(brick / (gx * gy));
    const y = Math.floor(brick / gx) % gy;
    const depth = 1 << this.#depthShift;
    this.#bricks.read(level, z * depth, y * BRICK_SIDE, (brick % gx) * BRICK_SIDE, depth, into);
  }

  close(): void {
    this.#bricks.close();
  }
}
