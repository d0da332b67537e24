import { refine } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { invert3, mmToIndex, type VolumeGrid } from "#shared/volume/grid.ts";

/** A tube made ready for label planes. */
export interface LabelLine {
  readonly label: number;
  /** Planes that it can reach. */
  readonly firstPlane: number;
  readonly lastPlane: number;
  /** shape [n, 4]: place in millimetres, radius (0 = not known). */
  readonly points: Float64Array;
  /** shape [n, 3]: continuous voxel index. */
  readonly indices: Float64Array;
  /** shape [m, 3]: voxels that the centreline itself runs through. */
  readonly core: Int32Array;
  /** Voxels along each index axis per millimetre of radius. */
  readonly reach: Vec3;
}

/** A centreline with its radii (absent or null = not known) made ready. */
export function lineOf(
  points: readonly Vec3[],
  radii: readonly (number | null)[] | undefined,
  label: number,
  grid: VolumeGrid,
): LabelLine {
  const inverse = invert3(grid.direction);
  const reach = [0, 1, 2].map(
    (axis) => Math.hypot(inverse[3 * axis]!, inverse[3 * axis + 1]!, inverse[3 * axis + 2]!) / grid.spacing[axis]!,
  ) as unknown as Vec3;
  const indices = points.map((p) => mmToIndex(grid, p));
  const known = points.map((_, i) => radii?.[i] ?? 0);
  const widest = Math.max(0, ...known) * reach[2];
  const planes = indices.map((index) => index[2]);
  const halfVoxel = 0.5 * Math.min(...grid.spacing);
  const core = refine(points, halfVoxel).map((p) => mmToIndex(grid, p).map(Math.round));
  return {
    label,
    firstPlane: Math.floor(Math.min(...planes) - widest),
    lastPlane: Math.ceil(Math.max(...planes) + widest),
    points: Float64Array.from(points.flatMap((p, i) => [...p, known[i]!])),
    indices: Float64Array.from(indices.flat()),
    core: Int32Array.from(core.flat()),
    reach,
  };
}

/**
 * Writes a line's label into a plane where its tube reaches voxel centres, or its centreline runs through the voxel.
 * @param plane shape [ny, nx], changed. @param depth shape [ny, nx]: distance / radius of the label that is there, changed.
 */
export function coverLine(line: LabelLine, grid: VolumeGrid, z: number, plane: Uint16Array, depth: Float32Array): void {
  const { points, indices, core, reach, label } = line;
  const [nx, ny] = grid.size;
  const { spacing: s, origin: o, direction: d } = grid;
  const count = points.length / 4;
  for (let k = 1; k < count; k++) {
    const a = 4 * (k - 1);
    const b = 4 * k;
    const [r0, r1] = [points[a + 3]!, points[b + 3]!];
    const widest = Math.max(r0, r1);
    if (widest === 0) continue;
    const [zi, zj] = [indices[3 * k - 1]!, indices[3 * k + 2]!];
    if (z < Math.min(zi, zj) - widest * reach[2] || z > Math.max(zi, zj) + widest * reach[2]) continue;
    const bounds = (axis: number, size: number): [number, number] => {
      const [from, to] = [indices[3 * (k - 1) + axis]!, indices[3 * k + axis]!];
      const wide = widest * reach[axis]!;
      return [Math.max(0, Math.ceil(Math.min(from, to) - wide)), Math.min(size - 1, Math.floor(Math.max(from, to) + wide))];
    };
    const [i0, i1] = bounds(0, nx);
    const [j0, j1] = bounds(1, ny);
    const [ax, ay, az] = [points[a]!, points[a + 1]!, points[a + 2]!];
    const [dx, dy, dz] = [points[b]! - ax, points[b + 1]! - ay, points[b + 2]! - az];
    const squared = dx * dx + dy * dy + dz * dz;
    for (let j = j0; j <= j1; j++) {
      for (let i = i0; i <= i1; i++) {
        const [u, v, w] = [i * s[0], j * s[1], z * s[2]];
        const px = o[0] + d[0] * u + d[1] * v + d[2] * w - ax;
        const py = o[1] + d[3] * u + d[4] * v + d[5] * w - ay;
        const pz = o[2] + d[6] * u + d[7] * v + d[8] * w - az;
        const share = squared === 0 ? 0 : Math.min(1, Math.max(0, (px * dx + py * dy + pz * dz) / squared));
        const radius = r0 + (r1 - r0) * share;
        if (radius <= 0) continue;
        const gap = Math.hypot(px - dx * share, py - dy * share, pz - dz * share) / radius;
        if (gap <= 1 && gap < depth[j * nx + i]!) {
          depth[j * nx + i] = gap;
          plane[j * nx + i] = label;
        }
      }
    }
  }
  for (let k = 0; k < core.length; k += 3) {
    const [i, j] = [core[k]!, core[k + 1]!];
    if (core[k + 2] !== z || i < 0 || j < 0 || i >= nx || j >= ny) continue;
    // A centreline keeps its voxel unless another's tube holds it.
    if (plane[j * nx + i] === 0) plane[j * nx + i] = label;
  }
}
