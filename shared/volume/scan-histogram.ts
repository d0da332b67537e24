import type { HistogramAnswer } from "#shared/api/engine.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";
import { type AbortSignalLike, stopIfAborted } from "#shared/volume/section/sample-lattice.ts";
import { displayWindow, histogramOf } from "#shared/volume/value-survey.ts";

const BOX = 32;
/** Most boxes of 32 voxels a side that are looked at: 32 MB of a 16-bit scan. */
const MOST_BOXES = 512;
/** Values kept of each box. */
const PER_BOX = 512;

/**
 * The histogram of the scan's own voxels (level 0) from an even, fixed sample: every box of a small scan, else boxes spread
 * over the whole of it, and of each box up to 512 evenly spread voxels. Non-finite values are left out.
 * @param range the scan's least and greatest value, known from intake; the bins lie between them.
 * @throws cancelled when the signal says so.
 */
export function scanHistogram(
  pyramid: VoxelPyramid,
  range: { readonly min: number; readonly max: number },
  bins = 256,
  signal?: AbortSignalLike,
): HistogramAnswer {
  const [nx, ny, nz] = pyramid.grid.size;
  const [bx, by, bz] = [Math.ceil(nx / BOX), Math.ceil(ny / BOX), Math.ceil(nz / BOX)];
  const boxes = bx * by * bz;
  const looked = Math.min(boxes, MOST_BOXES);
  const sample: number[] = [];
  const values = new Float32Array(BOX ** 3);
  for (let n = 0; n < looked; n++) {
    stopIfAborted(signal);
    const box = Math.floor(((n + 0.5) * boxes) / looked);
    const start: [number, number, number] = [
      (box % bx) * BOX,
      (Math.floor(box / bx) % by) * BOX,
      Math.floor(box / (bx * by)) * BOX,
    ];
    const size: [number, number, number] = [
      Math.min(BOX, nx - start[0]),
      Math.min(BOX, ny - start[1]),
      Math.min(BOX, nz - start[2]),
    ];
    pyramid.readBoxInto(0, start, size, values);
    const voxels = size[0] * size[1] * size[2];
    // An odd step walks over all columns of the box instead of one.
    const step = Math.max(1, Math.floor(voxels / PER_BOX) | 1);
    for (let v = 0; v < voxels; v += step) if (Number.isFinite(values[v]!)) sample.push(values[v]!);
  }
  const sorted = Float64Array.from(sample).sort();
  return { ...range, counts: histogramOf(sorted, range.min, range.max, bins), ...displayWindow(sorted) };
}
