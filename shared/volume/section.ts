import type { PlaneMm, SectionHeader, SectionRequest } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, norm, normalise, scale } from "#shared/geometry/vec3.ts";
import type { BrickPyramid } from "#shared/volume/bricks.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";
import { finestSpacing, type Lattice, latticeOnLevel, levelForPixel } from "#shared/volume/section/lattice.ts";
import { type AbortSignalLike, fetchLattice, sampleLatticeInto } from "#shared/volume/section/sample-lattice.ts";

/** Most samples through a slab; a slab thicker than this many half voxels is shown from a coarser level. */
export const MOST_SLAB_SAMPLES = 257;

/**
 * The picture of a plane, or of a slab about it (half its thickness to each side, samples at most half the smallest spacing
 * of the level apart, both faces included). `still` reads the coarsest level that is at least as fine as the pixels;
 * `moving` the nearest level, which may be coarser than the pixels by a factor of root 2.
 * @throws cancelled when the signal says so.
 * @source own derivation.
 */
export function section(
  bricks: BrickPyramid,
  request: Omit<SectionRequest, "ticket" | "specimen">,
  signal?: AbortSignalLike,
): BinaryFrame<SectionHeader> {
  const { plane, slabMode } = request;
  const { level, lattice } = sectionLattice(bricks, request);
  const body = new Uint8Array(plane.width * plane.height);
  sampleLatticeInto(bricks, level, lattice, slabMode, request, body, signal);
  return { header: { dtype: "uint8", width: plane.width, height: plane.height, plane, level }, body };
}

/** Brings the bricks of a section into the cache without showing it: for planes that will probably be asked for next. */
export function fetchSection(
  bricks: BrickPyramid,
  request: Pick<SectionRequest, "plane" | "slabMm" | "quality">,
  signal: AbortSignalLike,
): void {
  const { level, lattice } = sectionLattice(bricks, request);
  fetchLattice(bricks, level, lattice, signal);
}

/** The level a section is read from, and its samples in that level's voxel indices. */
function sectionLattice(
  { levels }: BrickPyramid,
  { plane, slabMm, quality }: Pick<SectionRequest, "plane" | "slabMm" | "quality">,
): { level: number; lattice: Lattice } {
  let level = levelForPixel(levels, Math.min(norm(plane.u), norm(plane.v)), quality === "moving");
  while (level + 1 < levels.length && slabSamples(levels[level]!, slabMm) > MOST_SLAB_SAMPLES) level++;
  const samples = Math.min(slabSamples(levels[level]!, slabMm), MOST_SLAB_SAMPLES);
  return { level, lattice: latticeOnLevel(levels[level]!, slabLattice(plane, slabMm, samples)) };
}

/** Samples through a slab on a level: odd, so that the plane itself is one of them; 1 for a plane without thickness. */
function slabSamples(level: PyramidLevel, slabMm: number): number {
  return 2 * Math.ceil(slabMm / finestSpacing(level) - 1e-9) + 1;
}

/** The plane's pixel centres and their copies through the slab, millimetres. */
function slabLattice(plane: PlaneMm, slabMm: number, samples: number): Lattice {
  const normal = normalise(cross(plane.u, plane.v));
  const w: Vec3 = samples > 1 ? scale(normal, slabMm / (samples - 1)) : [0, 0, 0];
  const corner = add(plane.origin, scale(add(plane.u, plane.v), 0.5));
  return {
    at: add(corner, scale(normal, samples > 1 ? -slabMm / 2 : 0)),
    u: plane.u,
    v: plane.v,
    w,
    width: plane.width,
    height: plane.height,
    depth: samples,
  };
}
