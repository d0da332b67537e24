import { type PointMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import { LARGEST_DIAMETER_MM } from "#shared/tracing/ridge/scales.ts";
import { downsampleInto, type HalvedAxes, halvedSize } from "#shared/volume/downsample.ts";
import { indexToMm } from "#shared/volume/grid.ts";
import type { PyramidLevel, VoxelPyramid } from "#shared/volume/pyramid.ts";

/**
 * The pyramid with further levels in memory, by the same mean of children (not rounded), until the widest scale spans at
 * most two voxels: a small scan's own pyramid ends before that, and its widest kernels would be larger than the scan.
 * A pyramid that is coarse enough comes back as it is. Memory: about the coarsest level as float32.
 */
export function extendedPyramid(pyramid: VoxelPyramid): VoxelPyramid {
  const widest = LARGEST_DIAMETER_MM / 2 / Math.SQRT2;
  const own = pyramid.levels.length;
  const levels: PyramidLevel[] = [...pyramid.levels];
  const arrays: Float32Array[] = [];
  for (;;) {
    const last = levels[levels.length - 1]!;
    const finest = Math.min(...last.spacing);
    const halve = last.size.map((side, axis) => side > 1 && last.spacing[axis]! < 2 * finest) as [boolean, boolean, boolean];
    if (2 * finest >= widest || !halve.some(Boolean)) break;
    const source = arrays[arrays.length - 1] ?? wholeLevel(pyramid, own - 1);
    const size = halvedSize(last.size, halve satisfies HalvedAxes);
    const out = new Float32Array(size[0] * size[1] * size[2]);
    downsampleInto(source, last.size, halve, out);
    arrays.push(out);
    const step = (axis: 0 | 1 | 2) => (halve[axis] ? 2 : 1);
    const origin: PointMm = indexToMm(last, [(step(0) - 1) / 2, (step(1) - 1) / 2, (step(2) - 1) / 2]);
    levels.push({
      level: levels.length,
      size,
      spacing: spacingMm(last.spacing[0] * step(0), last.spacing[1] * step(1), last.spacing[2] * step(2)),
      origin,
      direction: last.direction,
      factor: sizeXyz(last.factor[0] * step(0), last.factor[1] * step(1), last.factor[2] * step(2)),
    });
  }
  if (levels.length === own) return pyramid;
  return {
    grid: pyramid.grid,
    dtype: pyramid.dtype,
    levels,
    readBoxInto(level, start, size, out) {
      if (level < own) pyramid.readBoxInto(level, start, size, out);
      else copyClamped(arrays[level - own]!, levels[level]!.size, start, size, out);
    },
  };
}

function wholeLevel(pyramid: VoxelPyramid, level: number): Float32Array {
  const { size } = pyramid.levels[level]!;
  const out = new Float32Array(size[0] * size[1] * size[2]);
  pyramid.readBoxInto(level, [0, 0, 0], size, out);
  return out;
}

function copyClamped(
  source: Float32Array,
  from: readonly [number, number, number],
  start: readonly [number, number, number],
  size: readonly [number, number, number],
  out: Float32Array,
): void {
  const clamp = (value: number, side: number) => Math.min(Math.max(value, 0), side - 1);
  let o = 0;
  for (let z = 0; z < size[2]; z++)
    for (let y = 0; y < size[1]; y++) {
      const row = (clamp(start[2] + z, from[2]) * from[1] + clamp(start[1] + y, from[1])) * from[0];
      for (let x = 0; x < size[0]; x++, o++) out[o] = source[row + clamp(start[0] + x, from[0])]!;
    }
}
