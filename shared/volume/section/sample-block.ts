import { BRICK_SHIFT, BRICK_SIDE } from "#shared/volume/bricks.ts";
import type { StoredArray } from "#shared/volume/dtype.ts";
import type { Block, BlockBricks } from "#shared/volume/section/bricks-in-block.ts";
import type { Lattice } from "#shared/volume/section/lattice.ts";

/** What a block is sampled from. */
export interface SampledLevel {
  /** All held bricks; a brick's voxels follow each other, x fastest. */
  readonly voxels: StoredArray;
  /** shape [sides z, y, x] of the block's box of bricks; index in `voxels` of each brick's first voxel. */
  readonly bases: Int32Array;
  readonly size: readonly [number, number, number];
  readonly depthShift: number;
  /** Continuous indices between which a place lies in the scan, order xyz. */
  readonly low: readonly [number, number, number];
  readonly high: readonly [number, number, number];
}

/** Gathers the samples of a block's pixels, row by row: the greatest (`max`) or the sum (`mean`), and how many lay in the scan. */
export interface Gathered {
  /** shape [rows, columns] of the tile; starts at -Infinity for `max`, at 0 for `mean`. */
  readonly value: Float64Array;
  /** Samples in the scan, same shape. */
  readonly count: Uint32Array;
}

/**
 * Adds the trilinear samples of a block to its tile. Weights and sums are float64, so a linear ramp comes back exactly up to
 * rounding. Between the outermost voxel centres and the scan's edge, half a voxel out, the edge voxel's value holds.
 * @param tile first column and row of the tile and its columns; `gathered` has its shape.
 */
export function sampleBlockInto(
  level: SampledLevel,
  bricks: BlockBricks,
  lattice: Lattice,
  block: Block,
  mode: "max" | "mean",
  tile: { readonly i0: number; readonly j0: number; readonly columns: number },
  gathered: Gathered,
): void {
  const { voxels, bases, depthShift } = level;
  const [nx, ny, nz] = level.size;
  const [fx, fy, fz] = bricks.first;
  const [bx, by] = bricks.sides;
  const [ax, ay, az] = lattice.at;
  const [ux, uy, uz] = lattice.u;
  const [vx, vy, vz] = lattice.v;
  const [wx, wy, wz] = lattice.w;
  const [lowX, lowY, lowZ] = level.low;
  const [highX, highY, highZ] = level.high;
  const { k0, k1 } = block;
  const { value, count } = gathered;
  const check = !bricks.allInside;
  const max = mode === "max";
  const lastX = nx - 1;
  const lastY = ny - 1;
  const lastZ = nz - 1;
  // The lower of the two voxels a sample lies between; a level one voxel thick reads its neighbour with weight 0.
  const topX = nx > 1 ? nx - 2 : 0;
  const topY = ny > 1 ? ny - 2 : 0;
  const topZ = nz > 1 ? nz - 2 : 0;
  const edge = BRICK_SIDE - 1;
  const edgeZ = (1 << depthShift) - 1;
  const strideY = BRICK_SIDE;
  const strideZ = BRICK_SIDE * BRICK_SIDE;

  for (let j = block.j0; j < block.j1; j++) {
    const rowX = ax + j * vx;
    const rowY = ay + j * vy;
    const rowZ = az + j * vz;
    let at = (j - tile.j0) * tile.columns + (block.i0 - tile.i0);
    for (let i = block.i0; i < block.i1; i++, at++) {
      const startX = rowX + i * ux;
      const startY = rowY + i * uy;
      const startZ = rowZ + i * uz;
      let best = value[at]!;
      let found = count[at]!;
      for (let k = k0; k < k1; k++) {
        let x = startX + k * wx;
        let y = startY + k * wy;
        let z = startZ + k * wz;
        if (check) {
          if (!(x >= lowX && x <= highX && y >= lowY && y <= highY && z >= lowZ && z <= highZ)) continue;
          x = Math.min(Math.max(x, 0), lastX);
          y = Math.min(Math.max(y, 0), lastY);
          z = Math.min(Math.max(z, 0), lastZ);
        }
        let ix = x | 0;
        let iy = y | 0;
        let iz = z | 0;
        if (ix > topX) ix = topX;
        if (iy > topY) iy = topY;
        if (iz > topZ) iz = topZ;
        const dx = x - ix;
        const dy = y - iy;
        const dz = z - iz;
        const qx = ix & edge;
        const qy = iy & edge;
        const qz = iz & edgeZ;
        let v000: number;
        let v100: number;
        let v010: number;
        let v110: number;
        let v001: number;
        let v101: number;
        let v011: number;
        let v111: number;
        const place = (((iz >> depthShift) - fz) * by + (iy >> BRICK_SHIFT) - fy) * bx + (ix >> BRICK_SHIFT) - fx;
        if (qx < edge && qy < edge && qz < edgeZ) {
          const p = bases[place]! + qz * strideZ + qy * strideY + qx;
          v000 = voxels[p]!;
          v100 = voxels[p + 1]!;
          v010 = voxels[p + strideY]!;
          v110 = voxels[p + strideY + 1]!;
          v001 = voxels[p + strideZ]!;
          v101 = voxels[p + strideZ + 1]!;
          v011 = voxels[p + strideZ + strideY]!;
          v111 = voxels[p + strideZ + strideY + 1]!;
        } else {
          // A cell on a seam between bricks; a neighbour beyond the level's edge (weight 0) stays in the same place.
          const x1 = ix < lastX ? 1 : 0;
          const y1 = iy < lastY ? 1 : 0;
          const z1 = iz < lastZ ? 1 : 0;
          const stepX = qx < edge || x1 === 0 ? 0 : 1;
          const stepY = qy < edge || y1 === 0 ? 0 : bx;
          const stepZ = qz < edgeZ || z1 === 0 ? 0 : bx * by;
          const px0 = qx;
          const px1 = stepX ? 0 : qx + x1;
          const py0 = qy * strideY;
          const py1 = stepY ? 0 : (qy + y1) * strideY;
          const pz0 = qz * strideZ;
          const pz1 = stepZ ? 0 : (qz + z1) * strideZ;
          v000 = voxels[bases[place]! + pz0 + py0 + px0]!;
          v100 = voxels[bases[place + stepX]! + pz0 + py0 + px1]!;
          v010 = voxels[bases[place + stepY]! + pz0 + py1 + px0]!;
          v110 = voxels[bases[place + stepY + stepX]! + pz0 + py1 + px1]!;
          v001 = voxels[bases[place + stepZ]! + pz1 + py0 + px0]!;
          v101 = voxels[bases[place + stepZ + stepX]! + pz1 + py0 + px1]!;
          v011 = voxels[bases[place + stepZ + stepY]! + pz1 + py1 + px0]!;
          v111 = voxels[bases[place + stepZ + stepY + stepX]! + pz1 + py1 + px1]!;
        }
        const c00 = v000 + (v100 - v000) * dx;
        const c10 = v010 + (v110 - v010) * dx;
        const c01 = v001 + (v101 - v001) * dx;
        const c11 = v011 + (v111 - v011) * dx;
        const c0 = c00 + (c10 - c00) * dy;
        const c1 = c01 + (c11 - c01) * dy;
        const sample = c0 + (c1 - c0) * dz;
        found++;
        if (max) {
          if (sample > best) best = sample;
        } else best += sample;
      }
      value[at] = best;
      count[at] = found;
    }
  }
}
