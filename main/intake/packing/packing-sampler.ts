import { packedHere, unpackedHere } from "#main/intake/packing/pack.ts";
import type { PackingSample } from "#shared/api/projections.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { createStored, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import type { SourceArray } from "#shared/volume/source-array.ts";
import { CHUNK_SIDE } from "#shared/volume/store/layout.ts";
import { convertInto } from "#shared/volume/stored-type.ts";

/** Bricks across and down each slab that is sampled. */
const ACROSS = 6;

interface Slab {
  readonly z: number;
  /** Slices of it that were seen. */
  seen: number;
  /** Brick after brick, each [32, 32, 32], x fastest. */
  readonly bricks: StoredArray;
}

/** Keeps bricks of a few slabs as slices come by, and measures on them what packing gains and costs. */
export class PackingSampler {
  readonly #size: Vec3;
  readonly #corners: readonly (readonly [number, number])[];
  readonly #slabs: readonly Slab[];
  readonly #row: StoredArray;

  /** @param slabs how many slabs of 32 slices, evenly spread. */
  constructor(size: Vec3, dtype: StoredDtype, slabs: number) {
    this.#size = size;
    const spread = (side: number, most: number) => {
      const starts = Math.max(1, Math.min(most, Math.floor(side / CHUNK_SIDE)));
      const room = Math.max(0, side - CHUNK_SIDE);
      return Array.from({ length: starts }, (_, k) => Math.floor((room * (2 * k + 1)) / (2 * starts)));
    };
    this.#corners = spread(size[1], ACROSS).flatMap((y) => spread(size[0], ACROSS).map((x) => [x, y] as const));
    const voxels = this.#corners.length * CHUNK_SIDE ** 3;
    this.#slabs = spread(size[2], slabs).map((z) => ({ z, seen: 0, bricks: createStored(dtype, voxels) }));
    this.#row = createStored(dtype, CHUNK_SIDE);
  }

  /** First and past-the-last slice of each slab. */
  ranges(): [number, number][] {
    return this.#slabs.map(({ z }) => [z, Math.min(z + CHUNK_SIDE, this.#size[2])]);
  }

  /** Slice `z`, shape [ny, nx]; those outside the slabs are passed over. Slices of a slab come in order. */
  add(z: number, slice: SourceArray): void {
    const [nx, ny] = this.#size;
    for (const slab of this.#slabs) {
      if (z < slab.z || z >= slab.z + CHUNK_SIDE) continue;
      slab.seen++;
      for (const [n, [x0, y0]] of this.#corners.entries())
        for (let y = y0; y < Math.min(y0 + CHUNK_SIDE, ny); y++) {
          const wide = Math.min(CHUNK_SIDE, nx - x0);
          const row = this.#row.subarray(0, wide);
          convertInto(slice.subarray(y * nx + x0, y * nx + x0 + wide), row);
          slab.bricks.set(row, ((n * CHUNK_SIDE + z - slab.z) * CHUNK_SIDE + y - y0) * CHUNK_SIDE);
        }
    }
  }

  /** Packs and unpacks every brick once, in this thread; null when no slab was seen. `nowMs` counts milliseconds. */
  measure(nowMs: () => number): PackingSample | null {
    let [plain, small, packMs, unpackMs, bricks] = [0, 0, 0, 0, 0];
    for (const slab of this.#slabs) {
      if (slab.seen === 0) continue;
      const brick = slab.bricks.byteLength / this.#corners.length;
      for (let n = 0; n < this.#corners.length; n++) {
        const bytes = new Uint8Array(slab.bricks.buffer, slab.bricks.byteOffset + n * brick, brick);
        const began = nowMs();
        const packed = packedHere(bytes);
        const between = nowMs();
        unpackedHere(packed, brick);
        unpackMs += nowMs() - between;
        packMs += between - began;
        plain += brick;
        small += packed.byteLength;
        bricks++;
      }
    }
    if (bricks === 0) return null;
    return {
      ratio: small / plain,
      unpackMs: unpackMs / bricks,
      packedBytesPerSecond: (plain * 1000) / Math.max(packMs, 1e-3),
      bricks,
    };
  }
}
