import { type SizeXyz, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { indexToMm, type VolumeGrid } from "#shared/volume/grid.ts";

/** A box of voxels: x0, y0, z0, x1, y1, z1; x0 in, x1 out. */
export type Crop = readonly [number, number, number, number, number, number];

/** How many voxels along each axis make one. */
export type Bin = 1 | 2;

/** The part of a scan that is kept: a box of its voxels, of which `bin` cubed then make one (their mean). */
export interface Region {
  readonly crop: Crop;
  readonly bin: Bin;
}

/** The box that is the whole scan. */
export function wholeCrop(size: Vec3): Crop {
  return [0, 0, 0, size[0], size[1], size[2]];
}

/** True when a region leaves a scan as it is. */
export function isWholeScan(size: Vec3, region: Region): boolean {
  return region.bin === 1 && wholeCrop(size).every((edge, k) => edge === region.crop[k]);
}

const AXES = ["x", "y", "z"] as const;

/** What is wrong with a box of a scan of `size` voxels, as what was expected and what was found; null when it is good. */
export function faultOfCrop(size: Vec3, crop: readonly number[]): { expected: string; found: string } | null {
  if (crop.length !== 6) return { expected: "six whole numbers x0,y0,z0,x1,y1,z1", found: `${crop.length}` };
  for (const [axis, name] of AXES.entries()) {
    const [from, to, side] = [crop[axis]!, crop[axis + 3]!, size[axis]!];
    if (!Number.isSafeInteger(from) || !Number.isSafeInteger(to))
      return { expected: `whole numbers along ${name}`, found: `${from} to ${to}` };
    if (from < 0 || to > side) return { expected: `edges from 0 to ${side} along ${name}`, found: `${from} to ${to}` };
    if (to <= from)
      return { expected: `an end after the beginning along ${name} (the end itself is out)`, found: `${from} to ${to}` };
  }
  return null;
}

/** Voxels of what a region keeps, order xyz: sides rounded up, as in every pyramid. */
export function regionSize(region: Region): SizeXyz {
  const { crop, bin } = region;
  const side = (axis: 0 | 1 | 2) => Math.ceil((crop[axis + 3]! - crop[axis]!) / bin);
  return sizeXyz(side(0), side(1), side(2));
}

/**
 * The grid of what a region keeps of a scan: every kept voxel stays where it lies, and the centre of a mean is the middle of
 * its voxels (at a far edge of odd length, of the two it would have had, as in every pyramid).
 */
export function regionGrid(grid: VolumeGrid, region: Region): VolumeGrid {
  const { crop, bin } = region;
  const middle = (bin - 1) / 2;
  return {
    ...grid,
    size: regionSize(region),
    spacing: spacingMm(grid.spacing[0] * bin, grid.spacing[1] * bin, grid.spacing[2] * bin),
    origin: indexToMm(grid, [crop[0] + middle, crop[1] + middle, crop[2] + middle]),
  };
}

/** The same voxels counted in the scan whose slices come in reversed order. */
export function regionInMirror(region: Region, slices: number): Region {
  const [x0, y0, z0, x1, y1, z1] = region.crop;
  return { ...region, crop: [x0, y0, slices - z1, x1, y1, slices - z0] };
}

/** The whole scan that a part was made from, with the part counted in its voxels. */
export interface Derivation {
  /** SHA-256 (hex) of the whole scan's stored array. */
  readonly sha256: string;
  readonly crop?: readonly number[];
  readonly bin?: number;
}

/**
 * The derivation of a part of a scan that is itself a part: counted in the same whole scan. Null where the first part's own
 * place is not known.
 */
export function derivedTwice(first: Derivation, region: Region): Derivation | null {
  const { sha256, crop, bin } = first;
  if (crop?.length !== 6 || bin === undefined) return null;
  const edge = (k: number) => {
    const axis = k % 3;
    const at = crop[axis]! + region.crop[k]! * bin;
    return k < 3 ? at : Math.min(at, crop[axis + 3]!);
  };
  return { sha256, crop: [0, 1, 2, 3, 4, 5].map(edge), bin: bin * region.bin };
}

/** The sentence that says what was kept of a scan. */
export function regionSentence(region: Region): string {
  const { crop, bin } = region;
  const spans = AXES.map((name, axis) => `${name} ${crop[axis]} to ${crop[axis + 3]}`).join(", ");
  const means = bin === 1 ? "" : ` Each ${bin} x ${bin} x ${bin} of them are kept as their mean.`;
  return `Kept are the voxels ${spans} of the whole scan (the last of each is out).${means}`;
}
