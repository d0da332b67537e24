declare const brand: unique symbol;
type Branded<T, Name extends string> = T & { readonly [brand]: Name };

/** Three numbers in the order x, y, z. */
export type Vec3 = readonly [number, number, number];

/** A place in the specimen's frame, order xyz, millimetres. */
export type PointMm = Branded<Vec3, "PointMm">;
/** A continuous voxel index, order xyz; an integer is a voxel's centre. */
export type IndexVoxel = Branded<Vec3, "IndexVoxel">;
/** Numbers of voxels, order xyz, positive integers. */
export type SizeXyz = Branded<Vec3, "SizeXyz">;
/** Distances between voxel centres, order xyz, millimetres, positive. */
export type SpacingMm = Branded<Vec3, "SpacingMm">;
/** A 3 x 3 matrix, row-major. */
export type Matrix3 = readonly [number, number, number, number, number, number, number, number, number];

/** Brands three numbers as a place in millimetres. */
export function pointMm(x: number, y: number, z: number): PointMm {
  return [x, y, z] as Vec3 as PointMm;
}

/** Brands three numbers as a continuous voxel index. */
export function indexVoxel(x: number, y: number, z: number): IndexVoxel {
  return [x, y, z] as Vec3 as IndexVoxel;
}

/** Brands three numbers as a size in voxels. */
export function sizeXyz(x: number, y: number, z: number): SizeXyz {
  return [x, y, z] as Vec3 as SizeXyz;
}

/** Brands three numbers as a voxel spacing in millimetres. */
export function spacingMm(x: number, y: number, z: number): SpacingMm {
  return [x, y, z] as Vec3 as SpacingMm;
}

/** Directions of the voxel axes when a source says nothing. */
export const IDENTITY3: Matrix3 = [1, 0, 0, 0, 1, 0, 0, 0, 1];

/** `value` rounded to 1e-6 mm, the resolution of files and of committed geometry; never -0. */
export function roundMm(value: number): number {
  return Math.round(value * 1e6) / 1e6 + 0;
}

/** A point rounded to 1e-6 mm. Pins and nodes are rounded when they are placed, so that files hold exactly what was traced. */
export function roundPoint(p: Vec3): PointMm {
  return pointMm(roundMm(p[0]), roundMm(p[1]), roundMm(p[2]));
}
