import type { StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { pyramidLevels } from "#shared/volume/pyramid.ts";
import { chunkBytes, chunkGrid, INDEX_BYTES, shardGrid } from "#shared/volume/store/layout.ts";

/**
 * Bytes that the plain store of a grid takes on disk, metadata left out.
 * @param firstLevel 0: all levels; 1: without the finest one, which is read where the scan lies.
 */
export function storeBytes(grid: VolumeGrid, dtype: StoredDtype, firstLevel: 0 | 1 = 0): number {
  const levels = pyramidLevels(grid).slice(firstLevel);
  return levels.reduce((sum, level) => {
    const [z, y, x] = chunkGrid(level.size);
    const [sz, sy, sx] = shardGrid(level.size);
    return sum + z * y * x * chunkBytes(dtype) + sz * sy * sx * INDEX_BYTES;
  }, 0);
}
