import type { SliceSource } from "#main/intake/slice-source.ts";
import { planesPerRun } from "#main/intake/slice-source.ts";
import { BYTES_OF_DTYPE, createStored, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";

/**
 * A scan that a program makes slab by slab instead of reading it, so that generated specimens take the same way as files.
 * @param renderSlab fills `out`, shape [z1 - z0, ny, nx], x fastest, with slices [z0, z1). Called in order, each slice once.
 */
export function sourceFromSlabs(
  name: string,
  grid: VolumeGrid,
  dtype: StoredDtype,
  renderSlab: (z0: number, z1: number, out: StoredArray) => void,
): SliceSource {
  const [nx, ny, nz] = grid.size;
  const voxels = nx * ny;
  return {
    name,
    path: name,
    bytes: voxels * nz * BYTES_OF_DTYPE[dtype],
    seekable: true,
    header: {
      family: "generated",
      dtype,
      size: grid.size,
      headerSpacing: grid.spacing,
      unit: "mm",
      mmPerUnit: [1, 1, 1],
      origin: grid.origin,
      originMmPerUnit: [1, 1, 1],
      direction: grid.direction,
      frame: grid.frame,
      notes: [],
    },
    bytesRead: () => 0,
    async *readPlanes(z0, z1) {
      const most = planesPerRun(voxels * BYTES_OF_DTYPE[dtype]);
      const buffer = createStored(dtype, voxels * Math.min(most, Math.max(1, z1 - z0)));
      for (let z = z0; z < z1; z += most) {
        const count = Math.min(most, z1 - z);
        const data = buffer.subarray(0, count * voxels);
        renderSlab(z, z + count, data);
        yield { z, count, data };
      }
    },
    fingerprint: async () => "",
    close: async () => {},
  };
}
