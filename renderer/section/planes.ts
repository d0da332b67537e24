import { awayFrom, type PlaneAxes, stepped, type ViewPlane } from "#renderer/section/view-plane.ts";
import type { Matrix3, PointMm, SizeXyz, SpacingMm, Vec3 } from "#shared/geometry/types.ts";
import { frontDirection, type ValveAxes } from "#shared/geometry/valve-axes.ts";
import { cross, dot, norm, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";

export type FixedPlaneKind = "flat" | "front" | "side";

/** Where the scan lies, as far as planes need it. */
export interface ScanGrid {
  readonly size: SizeXyz;
  readonly spacing: SpacingMm;
  readonly origin: PointMm;
  readonly direction: Matrix3;
}

/**
 * Axes of a fixed plane. Upright valve: `front` has the leaflets at the top, `side` is the front turned by a quarter, `flat`
 * looks from the leaflets down. Before: the scan's voxel axes, x to the right and y downwards on `flat`, z upwards on the
 * others; a mirrored voxel order is turned, never shown mirrored.
 */
export function fixedAxes(kind: FixedPlaneKind, direction: Matrix3, valve: ValveAxes | null): PlaneAxes {
  if (valve !== null) return axesLookingAlong(kind, valve.up, valve.toAnteroLateral, frontDirection(valve));
  const x = normalise([direction[0], direction[3], direction[6]]);
  const yRaw: Vec3 = [direction[1], direction[4], direction[7]];
  const y = normalise(subtract(yRaw, scale(x, dot(yRaw, x))));
  const z = cross(x, y);
  if (kind === "flat") return { right: x, down: y };
  if (kind === "front") return { right: x, down: scale(z, -1) };
  return { right: y, down: scale(z, -1) };
}

function axesLookingAlong(kind: FixedPlaneKind, up: Vec3, side: Vec3, away: Vec3): PlaneAxes {
  const down = scale(up, -1);
  // right = down x away, from right x down = away.
  if (kind === "front") return { right: cross(down, away), down };
  if (kind === "side") return { right: cross(down, side), down };
  return { right: cross(scale(away, -1), down), down: scale(away, -1) };
}

/**
 * Axes of the plane at right angles to a strand. @param tangent along the strand, away from its origin; the viewer looks that way.
 * @param before axes shown before; the new ones turn as little as possible against them.
 */
export function acrossAxes(tangent: Vec3, before: PlaneAxes | null): PlaneAxes {
  const away = normalise(tangent);
  const right = before === null ? null : (flattened(before.right, away) ?? flattened(cross(before.down, away), away));
  const chosen = right ?? perpendicularFrame(away)[0];
  return { right: chosen, down: cross(away, chosen) };
}

/** Axes of a plane that contains the strand, which runs upwards in it; `turnDeg` turns the plane about the strand. */
export function alongAxes(tangent: Vec3, before: PlaneAxes | null, turnDeg = 0): PlaneAxes {
  const up = normalise(tangent);
  const seen = before === null ? null : (flattened(before.right, up) ?? flattened(awayFrom(before), up));
  const right = seen ?? perpendicularFrame(up)[0];
  const other = cross(up, right);
  const turn = (turnDeg * Math.PI) / 180;
  const turned = normalise([
    right[0] * Math.cos(turn) + other[0] * Math.sin(turn),
    right[1] * Math.cos(turn) + other[1] * Math.sin(turn),
    right[2] * Math.cos(turn) + other[2] * Math.sin(turn),
  ]);
  return { right: turned, down: scale(up, -1) };
}

function flattened(direction: Vec3, normal: Vec3): Vec3 | null {
  const flat = subtract(direction, scale(normal, dot(direction, normal)));
  return norm(flat) < 0.05 ? null : normalise(flat);
}

/** Distance of neighbouring planes along the line of sight: one voxel in that direction, millimetres. */
export function planeStepMm(axes: PlaneAxes, grid: ScanGrid): number {
  const n = awayFrom(axes);
  const d = grid.direction;
  const share = [0, 1, 2].map((k) => Math.abs(n[0] * d[k]! + n[1] * d[k + 3]! + n[2] * d[k + 6]!));
  const total = share[0]! + share[1]! + share[2]!;
  return (share[0]! * grid.spacing[0] + share[1]! * grid.spacing[1] + share[2]! * grid.spacing[2]) / total;
}

/** The plane `steps` voxels farther from the viewer. */
export function steppedBy(plane: ViewPlane, steps: number, grid: ScanGrid): ViewPlane {
  return stepped(plane, steps * planeStepMm(plane, grid));
}
