import type { FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import type { PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";
import { type MemoryPyramid, memoryPyramid } from "#shared/volume/memory-pyramid.ts";

/** A phantom with its scan in memory. */
export function phantomScan(
  seed: number,
  side: number,
  trees: number,
  noise: number,
): { readonly specimen: PhantomSpecimen; readonly pyramid: MemoryPyramid } {
  const specimen = blockPhantom({ name: `gate-${seed}`, seed, size: [side, side, side], spacingMm: 0.04, trees, noise });
  const voxels = new Uint16Array(side ** 3);
  specimen.renderSlab(0, side, voxels);
  return { specimen, pyramid: memoryPyramid(specimen.grid, voxels) };
}

export function placesOf(flat: readonly number[]): Vec3[] {
  return Array.from({ length: flat.length / 3 }, (_, i): Vec3 => [flat[3 * i]!, flat[3 * i + 1]!, flat[3 * i + 2]!]);
}

/**
 * Lengths by the true tree: of its strands and how much of that has a line beside it; of the lines and how much of that lies on
 * a true strand. Beside means within half the true radius, or a voxel.
 */
export function lengthsFound(
  tree: FileTree,
  lines: readonly (readonly Vec3[])[],
  voxelMm: number,
): { readonly length: number; readonly found: number; readonly proposed: number; readonly right: number } {
  const strands = tree.strands.map(({ points, radii }) => ({ points: points!, radii: radii! }));
  const truth = new SegmentIndex(strands.map(({ points }) => points));
  const near = new SegmentIndex(lines);
  let [length, found, proposed, right] = [0, 0, 0, 0];
  for (const { points, radii } of strands)
    for (let i = 1; i < points.length; i++) {
      const step = distance(points[i - 1]!, points[i]!);
      length += step;
      if (near.nearest(points[i]!).distance <= Math.max((radii[i] ?? 0) / 2, voxelMm)) found += step;
    }
  for (const line of lines)
    for (let i = 1; i < line.length; i++) {
      const step = distance(line[i - 1]!, line[i]!);
      proposed += step;
      const { distance: away, segment } = truth.nearest(line[i]!);
      const radius = strands[truth.lineOf[segment]!]!.radii[truth.pointOf[segment]!] ?? 0;
      if (away <= Math.max(radius / 2, voxelMm)) right += step;
    }
  return { length, found, proposed, right };
}
