import { downsampleInto, type HalvedAxes } from "#shared/volume/downsample.ts";
import { createStored, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { type PyramidLevel, pyramidLevels, type VoxelPyramid } from "#shared/volume/pyramid.ts";

/** A pyramid whose levels are arrays in memory; `arrays[k]` has shape [nz, ny, nx] of level k, x fastest. */
export interface MemoryPyramid extends VoxelPyramid {
  readonly arrays: readonly StoredArray[];
}

/**
 * The pyramid of a scan held in memory, by the same rule as the store on disk.
 * @param voxels level 0, shape [nz, ny, nx], x fastest; kept by reference, not copied.
 * @throws RangeError when `voxels` does not hold exactly the grid's voxels.
 */
export function memoryPyramid(grid: VolumeGrid, voxels: StoredArray): MemoryPyramid {
  const levels = pyramidLevels(grid);
  const count = grid.size[0] * grid.size[1] * grid.size[2];
  if (voxels.length !== count) throw new RangeError(`${count} voxels expected, found ${voxels.length}`);
  const dtype = dtypeOf(voxels);
  const arrays: StoredArray[] = [voxels];
  for (let k = 1; k < levels.length; k++) {
    const from = levels[k - 1]!;
    const to = levels[k]!;
    const out = createStored(dtype, to.size[0] * to.size[1] * to.size[2]);
    const halve = to.factor.map((factor, axis) => factor !== from.factor[axis]) as [boolean, boolean, boolean];
    downsampleInto(arrays[k - 1]!, from.size, halve satisfies HalvedAxes, out);
    arrays.push(out);
  }
  return {
    grid,
    dtype,
    levels,
    arrays,
    readBoxInto(level, start, size, out) {
      copyBoxInto(arrays[level]!, levels[level]!, start, size, out);
    },
  };
}

/** Copies a box of a level as float32; outside the level its nearest edge voxel is repeated. */
function copyBoxInto(
  source: StoredArray,
  level: PyramidLevel,
  start: readonly [number, number, number],
  size: readonly [number, number, number],
  out: Float32Array,
): void {
  const [nx, ny, nz] = level.size;
  const [wx, wy, wz] = size;
  const [sx, sy, sz] = start;
  const inside0 = Math.min(Math.max(-sx, 0), wx);
  const inside1 = Math.max(inside0, Math.min(nx - sx, wx));
  for (let z = 0; z < wz; z++) {
    const cz = Math.min(Math.max(sz + z, 0), nz - 1);
    for (let y = 0; y < wy; y++) {
      const cy = Math.min(Math.max(sy + y, 0), ny - 1);
      const row = (cz * ny + cy) * nx;
      const to = (z * wy + y) * wx;
      const first = source[row]!;
      const last = source[row + nx - 1]!;
      for (let x = 0; x < inside0; x++) out[to + x] = sx + x < 0 ? first : last;
      for (let x = inside0; x < inside1; x++) out[to + x] = source[row + sx + x]!;
      for (let x = inside1; x < wx; x++) out[to + x] = sx + x < 0 ? first : last;
    }
  }
}

function dtypeOf(voxels: StoredArray): StoredDtype {
  if (voxels instanceof Uint8Array) return "uint8";
  if (voxels instanceof Uint16Array) return "uint16";
  if (voxels instanceof Int16Array) return "int16";
  return "float32";
}
