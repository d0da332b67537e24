import { downsampleInto } from "#shared/volume/downsample.ts";
import { createStored, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import type { Region } from "#shared/volume/region/region.ts";

/**
 * Cuts a region out of a scan's slices as they come by, in order: crop first, then the mean of each 2 x 2 x 2 voxels by the
 * rule of the pyramid. Memory: two cropped slices when it bins, none otherwise.
 */
export class RegionKeeper {
  readonly #region: Region;
  readonly #pitch: number;
  readonly #wide: number;
  readonly #high: number;
  /** Slices of the box that still wait for their partner. */
  readonly #pair: StoredArray;
  #held = 0;

  /** @param width voxels along x of the whole scan. */
  constructor(width: number, region: Region, dtype: StoredDtype) {
    const { crop, bin } = region;
    this.#region = region;
    this.#pitch = width;
    this.#wide = crop[3] - crop[0];
    this.#high = crop[4] - crop[1];
    this.#pair = createStored(dtype, bin === 1 ? 0 : 2 * this.#wide * this.#high);
  }

  /**
   * Looks at slice `z` of the whole scan. True: `out` (a slice of what is kept, x fastest) is filled with the next kept slice;
   * false: `out` is as it was.
   * @param slice shape [ny, nx] of the whole scan; borrowed.
   */
  take(z: number, slice: StoredArray, out: StoredArray): boolean {
    const { crop, bin } = this.#region;
    if (z < crop[2] || z >= crop[5]) return false;
    if (bin === 1) {
      this.#cutInto(slice, out);
      return true;
    }
    const plane = this.#wide * this.#high;
    this.#cutInto(slice, this.#pair.subarray(this.#held * plane, (this.#held + 1) * plane));
    this.#held++;
    if (this.#held < 2 && z < crop[5] - 1) return false;
    downsampleInto(this.#pair, [this.#wide, this.#high, this.#held], [true, true, true], out);
    this.#held = 0;
    return true;
  }

  #cutInto(slice: StoredArray, out: StoredArray): void {
    const { crop } = this.#region;
    for (let y = 0; y < this.#high; y++) {
      const from = (crop[1] + y) * this.#pitch + crop[0];
      out.set(slice.subarray(from, from + this.#wide), y * this.#wide);
    }
  }
}
