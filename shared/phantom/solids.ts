import type { Vec3 } from "#shared/geometry/types.ts";

/** What a place of the phantom is made of; where solids overlap the first in this order shows. */
export const MATERIALS = ["string", "muscle", "leaflet"] as const;
export type Material = (typeof MATERIALS)[number];

/** Numbers of one swept piece: start x, y, z, radius, end x, y, z, radius; millimetres. */
export const NUMBERS_PER_CONE = 8;
/** Numbers of one sheet piece: three corners x, y, z and half the thickness; millimetres. */
export const NUMBERS_PER_TRIANGLE = 10;

/** Solids of one material as flat numbers, {@link NUMBERS_PER_CONE} and {@link NUMBERS_PER_TRIANGLE} each. */
export interface SolidList {
  readonly material: Material;
  readonly cones: readonly number[];
  readonly triangles: readonly number[];
}

/** Collects the analytic solids of a phantom: swept tubes with round ends, and sheets of even thickness. Millimetres. */
export class Solids {
  private readonly cones: Record<Material, number[]> = { string: [], muscle: [], leaflet: [] };
  private readonly triangles: Record<Material, number[]> = { string: [], muscle: [], leaflet: [] };

  /** A tube along `points`, with a radius at each point and round ends. */
  addTube(material: Material, points: readonly Vec3[], radii: readonly number[]): void {
    for (let i = 1; i < points.length; i++) this.cones[material].push(...points[i - 1]!, radii[i - 1]!, ...points[i]!, radii[i]!);
  }

  /** A sheet through a grid of places, `rows[i][j]`, all rows of one length. */
  addSheet(material: Material, rows: readonly (readonly Vec3[])[], thickness: number): void {
    const half = thickness / 2;
    for (let i = 1; i < rows.length; i++) {
      for (let j = 1; j < rows[i]!.length; j++) {
        const [a, b, c, d] = [rows[i - 1]![j - 1]!, rows[i - 1]![j]!, rows[i]![j - 1]!, rows[i]![j]!];
        this.triangles[material].push(...a, ...b, ...c, half, ...d, ...c, ...b, half);
      }
    }
  }

  lists(): SolidList[] {
    return MATERIALS.map((material) => ({ material, cones: this.cones[material], triangles: this.triangles[material] }));
  }
}
