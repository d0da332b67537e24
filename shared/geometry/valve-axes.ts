import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, norm, normalise, perpendicularFrame, scale, subtract } from "#shared/geometry/vec3.ts";
import type { Landmarks } from "#shared/trees/document.ts";

/** The valve's own directions, unit vectors at right angles: right x down = away, seen from the front. */
export interface ValveAxes {
  /** Middle of the landmarks, millimetres. */
  readonly centre: PointMm;
  /** From the papillary muscles to the leaflets. */
  readonly up: Vec3;
  /** From the postero-medial to the antero-lateral side. */
  readonly toAnteroLateral: Vec3;
}

/**
 * The axes on which the valve stands upright, or null while the landmarks do not settle them: at least one muscle head, and
 * one place of the annulus, the commissures or the free edges. The side direction comes from the two muscles, else from the
 * two commissures (the first one taken as antero-lateral), else any direction at right angles, chosen the same way each time.
 * @source own derivation
 */
export function valveAxes(landmarks: Landmarks): ValveAxes | null {
  const heads = landmarks.muscleHeads ?? [];
  const bottom = mean(heads.map((head) => head.position));
  const top =
    mean(landmarks.annulus?.points ?? []) ?? mean(landmarks.commissures ?? []) ?? mean((landmarks.freeEdges ?? []).flat());
  if (bottom === null || top === null) return null;
  const up = normalise(subtract(top, bottom));
  if (norm(up) === 0) return null;
  const antero = mean(heads.filter((head) => head.muscle === "antero-lateral").map((head) => head.position));
  const postero = mean(heads.filter((head) => head.muscle === "postero-medial").map((head) => head.position));
  const [first, second] = landmarks.commissures ?? [];
  const side =
    (antero !== null && postero !== null ? upright(subtract(antero, postero), up) : null) ??
    (first !== undefined && second !== undefined ? upright(subtract(first, second), up) : null) ??
    perpendicularFrame(up)[0];
  const middle = scale(add(bottom, top), 0.5);
  return { centre: pointMm(middle[0], middle[1], middle[2]), up, toAnteroLateral: side };
}

/** Direction of the front view's line of sight, away from the viewer: the viewer has the antero-lateral side at the left. */
export function frontDirection(axes: ValveAxes): Vec3 {
  return normalise(cross(axes.toAnteroLateral, axes.up));
}

function upright(direction: Vec3, up: Vec3): Vec3 | null {
  const flat = subtract(direction, scale(up, dot(direction, up)));
  return norm(flat) < 1e-6 * Math.max(1, norm(direction)) ? null : normalise(flat);
}

function mean(points: readonly Vec3[]): Vec3 | null {
  if (points.length === 0) return null;
  return scale(
    points.reduce<Vec3>((sum, p) => add(sum, p), [0, 0, 0]),
    1 / points.length,
  );
}
