import type { SourceArray } from "#shared/volume/source-array.ts";

/** What the values of a scan are like; the base for its stored type, its display window and its histogram. */
export interface ValueFacts {
  /** Least and greatest finite value; 0 and 0 when there is none. */
  readonly min: number;
  readonly max: number;
  /** Every value is a finite integer. */
  readonly integral: boolean;
  /** Greatest distance between a finite value and the nearest float32. Infinite when a value lies beyond float32. */
  readonly float32Rounding: number;
  readonly voxels: number;
}

/**
 * Collects {@link ValueFacts} and an even sample of the values, run by run. The sample takes every `stride`-th voxel of the
 * whole stream, so its size is bounded by voxels / stride; non-finite values are left out of it.
 */
export class ValueSurvey {
  #min = Number.POSITIVE_INFINITY;
  #max = Number.NEGATIVE_INFINITY;
  #integral = true;
  #rounding = 0;
  #voxels = 0;
  #next = 0;
  readonly #stride: number;
  readonly #sample: number[] = [];

  /** @param expected voxels that will come; @param sampleSize about how many of them to keep. */
  constructor(expected: number, sampleSize = 1 << 18) {
    this.#stride = sampleStride(expected, sampleSize);
  }

  add(values: SourceArray): void {
    if (values instanceof BigUint64Array || values instanceof BigInt64Array) this.#addBig(values);
    else if (values instanceof Float64Array) this.#addDoubles(values);
    else if (values instanceof Float32Array) this.#addFloats(values);
    else {
      this.#addRange(values);
      if (values instanceof Uint32Array || values instanceof Int32Array) this.#addRounding(values);
    }
    for (; this.#next < this.#voxels + values.length; this.#next += this.#stride) {
      const value = Number(values[this.#next - this.#voxels]);
      if (Number.isFinite(value)) this.#sample.push(value);
    }
    this.#voxels += values.length;
  }

  facts(): ValueFacts {
    const any = this.#min <= this.#max;
    return {
      min: any ? this.#min : 0,
      max: any ? this.#max : 0,
      integral: this.#integral,
      float32Rounding: this.#rounding,
      voxels: this.#voxels,
    };
  }

  /** The sampled finite values in ascending order; a new array. */
  sortedSample(): Float64Array {
    return Float64Array.from(this.#sample).sort();
  }

  #addRange(values: Exclude<SourceArray, BigUint64Array | BigInt64Array>): void {
    if (values.length === 0) return;
    // Integers from the start, since beginning at infinity would make every comparison one of doubles; four at a time, which halves the time.
    let min = values[0]!;
    let max = min;
    let i = 0;
    for (; i + 4 <= values.length; i += 4) {
      const a = values[i]!;
      const b = values[i + 1]!;
      const c = values[i + 2]!;
      const d = values[i + 3]!;
      if (a < min) min = a;
      if (a > max) max = a;
      if (b < min) min = b;
      if (b > max) max = b;
      if (c < min) min = c;
      if (c > max) max = c;
      if (d < min) min = d;
      if (d > max) max = d;
    }
    for (; i < values.length; i++) {
      if (values[i]! < min) min = values[i]!;
      if (values[i]! > max) max = values[i]!;
    }
    if (min < this.#min) this.#min = min;
    if (max > this.#max) this.#max = max;
  }

  #addRounding(values: Uint32Array | Int32Array): void {
    for (let i = 0; i < values.length; i++) {
      const off = Math.abs(Math.fround(values[i]!) - values[i]!);
      if (off > this.#rounding) this.#rounding = off;
    }
  }

  #addFloats(values: Float32Array): void {
    let min = this.#min;
    let max = this.#max;
    let integral = this.#integral;
    for (let i = 0; i < values.length; i++) {
      const v = values[i]!;
      if (v < min && v !== Number.NEGATIVE_INFINITY) min = v;
      if (v > max && v !== Number.POSITIVE_INFINITY) max = v;
      if (integral && !Number.isInteger(v)) integral = false;
    }
    this.#min = min;
    this.#max = max;
    this.#integral = integral;
  }

  #addDoubles(values: Float64Array): void {
    for (let i = 0; i < values.length; i++) {
      const v = values[i]!;
      if (!Number.isFinite(v)) {
        this.#integral = false;
        continue;
      }
      if (v < this.#min) this.#min = v;
      if (v > this.#max) this.#max = v;
      if (!Number.isInteger(v)) this.#integral = false;
      const off = Math.abs(Math.fround(v) - v);
      if (off > this.#rounding) this.#rounding = off;
    }
  }

  #addBig(values: BigUint64Array | BigInt64Array): void {
    for (let i = 0; i < values.length; i++) {
      const big = values[i]!;
      const v = Number(big);
      if (v < this.#min) this.#min = v;
      if (v > this.#max) this.#max = v;
      const nearest = Math.fround(v);
      if (nearest === v && Math.abs(v) <= Number.MAX_SAFE_INTEGER) continue;
      const off = BigInt(nearest) - big;
      const distance = Number(off < 0n ? -off : off);
      if (distance > this.#rounding) this.#rounding = distance;
    }
  }
}

/** Steps between sampled voxels: odd and not a multiple of 3 or 5, so that it does not beat with rows of usual lengths. */
function sampleStride(expected: number, sampleSize: number): number {
  let stride = Math.max(1, Math.floor(expected / sampleSize));
  while (stride > 1 && (stride % 2 === 0 || stride % 3 === 0 || stride % 5 === 0)) stride++;
  return stride;
}

/** The value below which the given share (0-1) of a sorted sample lies, linear between neighbours; 0 for an empty one. */
export function quantile(sorted: Float64Array, share: number): number {
  if (sorted.length === 0) return 0;
  const at = share * (sorted.length - 1);
  const low = Math.floor(at);
  const a = sorted[low]!;
  const b = sorted[Math.min(low + 1, sorted.length - 1)]!;
  return a + (b - a) * (at - low);
}

/** Grey values to show as black and white: the 0.5 % and 99.8 % quantiles, widened where they fall together; `low` < `high`. */
export function displayWindow(sorted: Float64Array): { low: number; high: number } {
  let low = quantile(sorted, 0.005);
  let high = quantile(sorted, 0.998);
  if (!(high > low)) {
    low = quantile(sorted, 0);
    high = quantile(sorted, 1);
  }
  return high > low ? { low, high } : { low, high: low + 1 };
}

/**
 * Whether strings are probably bright or dark: most of a scan is what surrounds the valve, so strings are bright where the
 * median lies in the lower half of the display window. A suggestion for a person to confirm.
 * @source own rule, no source.
 */
export function suggestPolarity(sorted: Float64Array): "bright" | "dark" {
  const { low, high } = displayWindow(sorted);
  return quantile(sorted, 0.5) <= (low + high) / 2 ? "bright" : "dark";
}

/** Counts of a sample in equal bins from `min` to `max`, the last bin closed; `max` > `min` or all falls into the first bin. */
export function histogramOf(sorted: Float64Array, min: number, max: number, bins: number): number[] {
  const counts = new Array<number>(bins).fill(0);
  const scale = max > min ? bins / (max - min) : 0;
  for (const value of sorted) {
    const bin = Math.min(bins - 1, Math.max(0, Math.floor((value - min) * scale)));
    counts[bin] = counts[bin]! + 1;
  }
  return counts;
}
