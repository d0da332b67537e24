import type { Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, mix, normalise, scale, subtract } from "#shared/geometry/vec3.ts";
import type { Clearance } from "#shared/phantom/clearance.ts";
import { LEAFLET, MUSCLE } from "#shared/phantom/plant.ts";
import type { Solids } from "#shared/phantom/solids.ts";
import type { Muscle } from "#shared/trees/document.ts";

/**
 * The invented closed valve of the demo: millimetres, LPS (x to the left, y to the back, z up). The annulus lies above, the
 * muscles stand below the two commissures, the antero-lateral one at positive x. Proportions are own invention after the usual
 * description of the mitral valve.
 */
const ANNULUS = { a: 13, b: 10, z: 31 };
const COAPTATION = { halfWidth: 11.2, y: 3, z: 26.3 };
/** Thickness of the leaflet sheets, millimetres. */
export const LEAFLET_THICKNESS = 0.7;
const WALL = { radius: 13.2, thickness: 1.4, top: 7.5 };

export interface MuscleHead {
  readonly muscle: Muscle;
  readonly head: number;
  readonly centre: Vec3;
  readonly radius: number;
}

/** The papillary muscle heads, millimetres in the valve's own frame. */
export const HEADS: readonly MuscleHead[] = [
  { muscle: "antero-lateral", head: 1, centre: [6.4, -2.6, 10.4], radius: 2 },
  { muscle: "antero-lateral", head: 2, centre: [8.2, 2.4, 9.4], radius: 1.9 },
  { muscle: "postero-medial", head: 1, centre: [-6.3, -2.6, 10.7], radius: 2 },
  { muscle: "postero-medial", head: 2, centre: [-9, 0.8, 9.2], radius: 1.4 },
  { muscle: "postero-medial", head: 3, centre: [-7, 3.6, 9.2], radius: 1.7 },
];

export type LeafletSide = "anterior" | "posterior";

/** A place on the annulus; `turn` in radians from x towards y. */
export function annulusAt(turn: number): Vec3 {
  return [ANNULUS.a * Math.cos(turn), ANNULUS.b * Math.sin(turn), ANNULUS.z - 1.1 * Math.cos(2 * turn)];
}

/**
 * A place on the middle surface of a leaflet.
 * @param across -1 to 1 from the postero-medial to the antero-lateral commissure.
 * @param down 0 at the annulus, 0.7 where the leaflets meet, 1 at the free edge.
 */
export function leafletAt(side: LeafletSide, across: number, down: number): Vec3 {
  const sign = side === "anterior" ? -1 : 1;
  const turn = sign * (Math.PI / 2 - across * (Math.PI / 2) * 0.92);
  const ring = annulusAt(turn);
  const flat = 1 - across * across;
  const apart = 0.36 + 0.2 * flat;
  const meet: Vec3 = [
    COAPTATION.halfWidth * across,
    COAPTATION.y * flat - 0.4 + sign * apart,
    COAPTATION.z + 2 * across * across,
  ];
  if (down >= 0.7) {
    const scallop = 0.35 * Math.cos((side === "anterior" ? 5 : 8) * Math.PI * across);
    const edge: Vec3 = [meet[0], meet[1] + sign * 0.3, meet[2] - (3 - 1.1 * across * across) + scallop];
    return mix(meet, edge, (down - 0.7) / 0.3);
  }
  const t = down / 0.7;
  const belly = add(mix(ring, meet, 0.5), [0, 0, 1.6]);
  return mix(mix(ring, belly, t), mix(belly, meet, t), t);
}

/** Direction out of a leaflet towards the ventricle, where strings insert. */
export function ventricularSide(side: LeafletSide, across: number, down: number): Vec3 {
  if (down > 0.97) return [0, 0, -1];
  const e = 0.02;
  const u = subtract(leafletAt(side, across + e, down), leafletAt(side, across - e, down));
  const v = subtract(leafletAt(side, across, down + e), leafletAt(side, across, down - e));
  const normal = normalise(cross(u, v));
  const outwards: Vec3 = [0, side === "anterior" ? -1 : 1, -0.6];
  return dot(normal, outwards) < 0 ? scale(normal, -1) : normal;
}

/** A place on the inner face of the ventricular wall; `turn` in radians from x towards y. */
export function wallAt(turn: number, z: number): Vec3 {
  const radius = WALL.radius - WALL.thickness / 2;
  return [radius * Math.cos(turn), radius * Math.sin(turn), z];
}

/** Muscles, wall, annulus and leaflets, as solids and as what strings keep clear of. */
export function addValveBody(solids: Solids, clearance: Clearance): void {
  for (const sign of [1, -1]) {
    const trunk: Vec3[] = [
      [8 * sign, 1.2, -2],
      [7.7 * sign, 0.4, 5.6],
    ];
    muscleTube(solids, clearance, trunk, [3.5, 2.7]);
    const root: Vec3 = [Math.cos(0.62) * WALL.radius * sign, Math.sin(0.62) * WALL.radius, 1.5];
    muscleTube(solids, clearance, [[7.9 * sign, 1, 3], root], [1.9, 1.5]);
    for (const { centre, radius } of HEADS)
      if (Math.sign(centre[0]) === sign) muscleTube(solids, clearance, [trunk[1]!, centre], [2, radius]);
  }
  const turns = steps(-0.35, Math.PI + 0.35, 60);
  const wall = turns.map((turn) =>
    steps(-1, WALL.top + 0.6 * Math.sin(5 * turn), 6).map(
      (z): Vec3 => [WALL.radius * Math.cos(turn), WALL.radius * Math.sin(turn), z],
    ),
  );
  solids.addSheet("muscle", wall, WALL.thickness);
  const ring = steps(0, 2 * Math.PI, 96).map(annulusAt);
  solids.addTube(
    "leaflet",
    ring,
    ring.map(() => 0.8),
  );
  for (const side of ["anterior", "posterior"] as const) {
    const rows = steps(-1, 1, 32).map((across) => steps(0, 1, 16).map((down) => leafletAt(side, across, down)));
    solids.addSheet("leaflet", rows, LEAFLET_THICKNESS);
    for (const row of rows)
      clearance.occupy(
        LEAFLET,
        row,
        row.map(() => LEAFLET_THICKNESS / 2 + 0.1),
      );
  }
}

function muscleTube(solids: Solids, clearance: Clearance, points: readonly Vec3[], radii: readonly number[]): void {
  solids.addTube("muscle", points, radii);
  const shares = steps(0, 1, 12);
  clearance.occupy(
    MUSCLE,
    shares.map((t) => mix(points[0]!, points[1]!, t)),
    shares.map((t) => radii[0]! + (radii[1]! - radii[0]!) * t),
  );
}

function steps(from: number, to: number, count: number): number[] {
  return Array.from({ length: count + 1 }, (_, i) => from + ((to - from) * i) / count);
}
