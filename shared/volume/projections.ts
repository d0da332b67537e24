import type { Vec3 } from "#shared/geometry/types.ts";
import type { SourceArray } from "#shared/volume/source-array.ts";
import { displayWindow } from "#shared/volume/value-survey.ts";

/** A small grey picture, rows from the top. */
export interface GreyPicture {
  readonly width: number;
  readonly height: number;
  /** uint8, shape [height, width]. */
  readonly grey: Uint8ClampedArray;
}

/** A scan seen along its three axes; each picture covers the whole scan, edge to edge. */
export interface ProjectionPictures {
  /** Along z: x to the right, y downwards. */
  readonly alongZ: GreyPicture;
  /** Along y: x to the right, z downwards. */
  readonly alongY: GreyPicture;
  /** Along x: y to the right, z downwards. */
  readonly alongX: GreyPicture;
}

/** Pixels along the longest side of a picture, at most. */
const MOST_PIXELS = 256;

/**
 * Collects maximum (or minimum) projections of a scan from its slices, or from some of them. Each pixel stands for a block of
 * `step` voxels a side, and shows the strongest of them. Memory: the pictures.
 * @source own derivation.
 */
export class Projections {
  readonly #size: Vec3;
  readonly #step: number;
  readonly #wide: number;
  readonly #high: number;
  readonly #rows: number;
  /** 1 for maxima; -1 for minima, which are maxima of the negated values. */
  readonly #sign: 1 | -1;
  readonly #alongZ: Float64Array;
  readonly #alongY: Float64Array;
  readonly #alongX: Float64Array;
  readonly #plane: Float64Array;

  /**
   * @param size voxels of the scan, order xyz. @param slices how many slices will come, evenly spread: pictures along x and y
   *   have no more rows than that. @param dark take minima, for strings darker than their surroundings.
   */
  constructor(size: Vec3, slices: number, dark: boolean) {
    const step = Math.max(1, Math.ceil(Math.max(...size) / MOST_PIXELS));
    this.#size = size;
    this.#step = step;
    this.#wide = Math.ceil(size[0] / step);
    this.#high = Math.ceil(size[1] / step);
    this.#rows = Math.max(1, Math.min(slices, Math.ceil(size[2] / step)));
    this.#sign = dark ? -1 : 1;
    const empty = (length: number) => new Float64Array(length).fill(Number.NEGATIVE_INFINITY);
    this.#alongZ = empty(this.#wide * this.#high);
    this.#alongY = empty(this.#wide * this.#rows);
    this.#alongX = empty(this.#high * this.#rows);
    this.#plane = new Float64Array(this.#wide * this.#high);
  }

  /** Slice `z` of the scan: shape [ny, nx], x fastest; borrowed. Values that are not finite are passed over. */
  add(z: number, slice: SourceArray): void {
    const [nx, ny, nz] = this.#size;
    const plane = this.#plane.fill(Number.NEGATIVE_INFINITY);
    const [step, wide, sign] = [this.#step, this.#wide, this.#sign];
    for (let y = 0; y < ny; y++) {
      const to = Math.floor(y / step) * wide;
      let from = y * nx;
      for (let x = 0; x < wide; x++) {
        let most = plane[to + x]!;
        for (const end = Math.min(from + step, (y + 1) * nx); from < end; from++) {
          const value = sign * Number(slice[from]);
          if (value > most && value < Number.POSITIVE_INFINITY) most = value;
        }
        plane[to + x] = most;
      }
    }
    const row = Math.min(this.#rows - 1, Math.floor((z * this.#rows) / nz));
    for (let y = 0; y < this.#high; y++)
      for (let x = 0; x < wide; x++) {
        const value = plane[y * wide + x]!;
        raise(this.#alongZ, y * wide + x, value);
        raise(this.#alongY, row * wide + x, value);
        raise(this.#alongX, row * this.#high + y, value);
      }
  }

  /** The pictures of what has come so far, all in one grey window. */
  pictures(): ProjectionPictures {
    const all = [...this.#alongZ, ...this.#alongY, ...this.#alongX].filter(Number.isFinite).map((value) => value * this.#sign);
    const { low, high } = displayWindow(Float64Array.from(all).sort());
    const picture = (values: Float64Array, width: number, height: number): GreyPicture => {
      const grey = new Uint8ClampedArray(width * height); // rounds and clamps on its own
      for (let i = 0; i < grey.length; i++) grey[i] = ((values[i]! * this.#sign - low) * 255) / (high - low);
      return { width, height, grey };
    };
    return {
      alongZ: picture(this.#alongZ, this.#wide, this.#high),
      alongY: picture(this.#alongY, this.#wide, this.#rows),
      alongX: picture(this.#alongX, this.#high, this.#rows),
    };
  }
}

function raise(values: Float64Array, at: number, value: number): void {
  if (value > values[at]!) values[at] = value;
}
