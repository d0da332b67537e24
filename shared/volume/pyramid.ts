import { type PointMm, type SizeXyz, type SpacingMm, sizeXyz, spacingMm } from "#shared/geometry/types.ts";
import type { StoredDtype } from "#shared/volume/dtype.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";

/** One level of the pyramid; level 0 is the scan itself. `factor` is the halving against level 0 per axis (1, 2, 4 ...). */
export interface PyramidLevel extends Pick<VolumeGrid, "size" | "spacing" | "origin" | "direction"> {
  readonly level: number;
  readonly factor: SizeXyz;
}

/**
 * Voxels of all levels, read box by box. Synchronous: implementations sit next to the voxels (memory, or the engine's
 * brick cache over the store on disk).
 */
export interface VoxelPyramid {
  readonly grid: VolumeGrid;
  readonly dtype: StoredDtype;
  readonly levels: readonly PyramidLevel[];
  /**
   * Copies the box [x0, x0 + nx) x [y0, y0 + ny) x [z0, z0 + nz) of a level into `out` as float32, x fastest.
   * Voxels outside the level repeat its nearest edge voxel. `start` and `size` are integers, order xyz; `start` may be negative.
   */
  readBoxInto(
    level: number,
    start: readonly [number, number, number],
    size: readonly [number, number, number],
    out: Float32Array,
  ): void;
}

/**
 * The pyramid of a grid: sides rounded up; an axis is not halved while its spacing is twice the finest or more, nor when
 * its side is 64 or less; it ends when no axis can be halved. Each level's origin is the centre of its first voxel, so it
 * moves by half a child voxel along every halved axis.
 */
export function pyramidLevels(grid: VolumeGrid): PyramidLevel[] {
  const levels: PyramidLevel[] = [
    {
      level: 0,
      size: grid.size,
      spacing: grid.spacing,
      origin: grid.origin,
      direction: grid.direction,
      factor: sizeXyz(1, 1, 1),
    },
  ];
  for (;;) {
    const last = levels[levels.length - 1]!;
    const finest = Math.min(...last.spacing);
    const halve = last.size.map((side, axis) => side > 64 && last.spacing[axis]! < 2 * finest);
    if (!halve.some(Boolean)) return levels;
    const pick = (f: (axis: number) => number): [number, number, number] => [f(0), f(1), f(2)];
    const shift = pick((axis) => (halve[axis] ? 0.5 : 0));
    const origin: PointMm = indexToMm(last, shift);
    const size: SizeXyz = sizeXyz(...pick((axis) => (halve[axis] ? Math.ceil(last.size[axis]! / 2) : last.size[axis]!)));
    const spacing: SpacingMm = spacingMm(...pick((axis) => last.spacing[axis]! * (halve[axis] ? 2 : 1)));
    const factor = sizeXyz(...pick((axis) => last.factor[axis]! * (halve[axis] ? 2 : 1)));
    levels.push({ level: levels.length, size, spacing, origin, direction: grid.direction, factor });
  }
}
