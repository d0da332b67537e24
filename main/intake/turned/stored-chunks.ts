import fs from "node:fs";
import zlib from "node:zlib";
import type { SpecimenVolume } from "#shared/api/specimen.ts";
import { pyramidLevels } from "#shared/volume/pyramid.ts";
import { type SourceArray, viewAs } from "#shared/volume/source-array.ts";
import { CHUNK_SIDE, CHUNK_VOXELS, chunkBytes } from "#shared/volume/store/layout.ts";
import { StoreBricks } from "#shared/volume/store/store-bricks.ts";

/** Reads bricks of a store's finest level, each 32 x 32 x 32 voxels, order z, y, x; plain, packed, or used in place. */
export class StoredChunks {
  readonly #bricks: StoreBricks;
  readonly #volume: SpecimenVolume;
  readonly #bytes: ArrayBuffer;
  #bytesRead = 0;

  /** Voxels of a brick along x, y, z. */
  readonly sides: readonly [number, number, number] = [CHUNK_SIDE, CHUNK_SIDE, CHUNK_SIDE];

  /** @param folder the store itself (`scan.ome.zarr`). */
  constructor(folder: string, volume: SpecimenVolume) {
    this.#bricks = new StoreBricks({ fs, zlib }, folder, volume, pyramidLevels(volume));
    this.#volume = volume;
    this.#bytes = new ArrayBuffer(chunkBytes(volume.dtype));
  }

  /** Bytes of voxels, unpacked. */
  get bytesRead(): number {
    return this.#bytesRead;
  }

  /**
   * The brick that is `z`, `y`, `x`-th along the axes; borrowed until the next call.
   * @throws unreadable-input when its file is missing, cut short or does not hold it
   */
  read(z: number, y: number, x: number): SourceArray {
    this.#bricks.read(0, z * CHUNK_SIDE, y * CHUNK_SIDE, x * CHUNK_SIDE, CHUNK_SIDE, new Uint8Array(this.#bytes));
    this.#bytesRead += this.#bytes.byteLength;
    return viewAs(this.#volume.dtype, this.#bytes, 0, CHUNK_VOXELS);
  }

  close(): void {
    this.#bricks.close();
  }
}
