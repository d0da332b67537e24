import type { StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { pyramidLevels } from "#shared/volume/pyramid.ts";
import { chunkBytes, chunkGrid, INDEX_BYTES, shardGrid } from "#shared/volume/store/layout.ts";

/** Bytes that the store of a grid takes on disk, all levels, metadata left out. */
export function storeBytes(grid: VolumeGrid, dtype: StoredDtype): number {
  return pyramidLevels(grid).reduce((sum, level) => {
    const [z, y, x] = chunkGrid(level.size);
    const [sz, sy, sx] = shardGrid(level.size);
    return sum + z * y * x * chunkBytes(dtype) + sz * sy * sx * INDEX_BYTES;
  }, 0);
}
