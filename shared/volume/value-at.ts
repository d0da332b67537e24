import type { ValueAnswer } from "#shared/api/engine.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import { isInside, mmToIndex } from "#shared/volume/grid.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";

/** The stored value of the scan's voxel nearest to a place, and its index; the value is null outside the scan. */
export function valueAt(pyramid: VoxelPyramid, at: PointMm): ValueAnswer {
  const { grid } = pyramid;
  const [x, y, z] = mmToIndex(grid, at);
  const clamp = (value: number, axis: 0 | 1 | 2) => Math.min(Math.max(Math.floor(value + 0.5), 0), grid.size[axis] - 1);
  if (!isInside(grid, at)) return { value: null, index: [Math.floor(x + 0.5), Math.floor(y + 0.5), Math.floor(z + 0.5)] };
  const index: [number, number, number] = [clamp(x, 0), clamp(y, 1), clamp(z, 2)];
  const out = new Float32Array(1);
  pyramid.readBoxInto(0, index, [1, 1, 1], out);
  return { value: out[0]!, index };
}
