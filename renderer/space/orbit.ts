import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { frontDirection, type ValveAxes } from "#shared/geometry/valve-axes.ts";
import { add, cross, dot, norm, normalise, scale, subtract } from "#shared/geometry/vec3.ts";

/** Where the viewer stands: turned about the upright axis, tilted, at a distance from a place that is looked at. */
export interface Orbit {
  readonly target: PointMm;
  readonly distanceMm: number;
  /** 0 = from the front; positive = the viewer walks to the right around the valve. */
  readonly turnDeg: number;
  /** Positive = from above. */
  readonly tiltDeg: number;
}

/** Upright direction, and the front view's line of sight (away from the viewer). */
export interface Upright {
  readonly up: Vec3;
  readonly front: Vec3;
}

/** Straight from above or below the upright axis would point at the viewer and turning would lose its sense. */
const MOST_TILT_DEG = 88;
/** Vertical opening of the view, degrees: narrow, so that lengths near and far stay comparable. */
export const OPENING_DEG = 24;

/** The valve's own axes once it stands upright, else the scan's z up and its y as the line of sight. */
export function uprightOf(valve: ValveAxes | null): Upright {
  return valve === null ? { up: [0, 0, 1], front: [0, 1, 0] } : { up: valve.up, front: frontDirection(valve) };
}

/** The corners of a scan's box hold air: so much of its half diagonal is enough to see the whole valve. */
const FILLED_SHARE = 0.88;

/** The valve inside a scan of half diagonal `radiusMm` about `centre`, from the front and a little from above. @param aspect width / height of the pane */
export function orbitAround(centre: PointMm, radiusMm: number, aspect: number): Orbit {
  const half = (OPENING_DEG * Math.PI) / 360;
  const narrower = aspect >= 1 || !(aspect > 0) ? half : Math.atan(Math.tan(half) * aspect);
  const distanceMm = (Math.max(radiusMm, 1e-3) * FILLED_SHARE) / Math.sin(narrower);
  return { target: centre, distanceMm, turnDeg: 0, tiltDeg: 12 };
}

export function turned(orbit: Orbit, turnDeg: number, tiltDeg: number): Orbit {
  const tilt = Math.max(-MOST_TILT_DEG, Math.min(MOST_TILT_DEG, orbit.tiltDeg + tiltDeg));
  return { ...orbit, turnDeg: (((orbit.turnDeg + turnDeg) % 360) + 360) % 360, tiltDeg: tilt };
}

/** @param factor above 1 = closer */
export function approached(orbit: Orbit, factor: number): Orbit {
  return { ...orbit, distanceMm: Math.max(0.5, Math.min(5000, orbit.distanceMm / factor)) };
}

/** Millimetres per pixel at the target, for a view of the given height. */
export function mmPerPixel(orbit: Orbit, heightPx: number): number {
  return (2 * orbit.distanceMm * Math.tan((OPENING_DEG * Math.PI) / 360)) / Math.max(1, heightPx);
}

/** The picture moved by so many pixels: the target goes the other way. */
export function shifted(orbit: Orbit, upright: Upright, dx: number, dy: number, heightPx: number): Orbit {
  const k = mmPerPixel(orbit, heightPx);
  const { right, up } = viewerAxes(orbit, upright);
  const p = add(orbit.target, add(scale(right, -dx * k), scale(up, dy * k)));
  return { ...orbit, target: pointMm(p[0], p[1], p[2]) };
}

/** The viewer's place and directions, unit vectors; `away` is the line of sight. */
export function viewerAxes(
  orbit: Orbit,
  { up, front }: Upright,
): { readonly eye: Vec3; readonly away: Vec3; readonly right: Vec3; readonly up: Vec3 } {
  const turn = (orbit.turnDeg * Math.PI) / 180;
  const tilt = (orbit.tiltDeg * Math.PI) / 180;
  const side = cross(front, up);
  const level = add(scale(front, Math.cos(turn)), scale(side, -Math.sin(turn)));
  const away = normalise(add(scale(level, Math.cos(tilt)), scale(up, -Math.sin(tilt))));
  const right = normalise(cross(away, up));
  return { eye: add(orbit.target, scale(away, -orbit.distanceMm)), away, right, up: cross(right, away) };
}

/** A place nearer to the upright axis than this lies on no side of it, millimetres. */
const ON_AXIS_MM = 1;
const FACING_TILT = 0.2;

/**
 * The orbit about a place, seen from outside: the viewer stands on that side of the upright axis through `centre` on which the
 * place lies, a little above. @param acrossMm so many millimetres fill the view's height; a view that is nearer stays as near
 */
export function facing(orbit: Orbit, upright: Upright, place: PointMm, centre: PointMm, acrossMm: number): Orbit {
  const distanceMm = Math.min(orbit.distanceMm, acrossMm / 2 / Math.tan((OPENING_DEG * Math.PI) / 360));
  const about = { ...orbit, target: place, distanceMm };
  const offset = subtract(place, centre);
  const outwards = subtract(offset, scale(upright.up, dot(offset, upright.up)));
  if (norm(outwards) < ON_AXIS_MM) return about;
  return lookingAlong(about, upright, subtract(scale(normalise(outwards), -1), scale(upright.up, FACING_TILT)));
}

/** The orbit, about the same target, whose line of sight comes nearest to `away`. */
export function lookingAlong(orbit: Orbit, { up, front }: Upright, away: Vec3): Orbit {
  const d = normalise(away);
  const side = cross(front, up);
  const tiltDeg = (Math.asin(Math.max(-1, Math.min(1, -dot(d, up)))) * 180) / Math.PI;
  const turnDeg = (Math.atan2(-dot(d, side), dot(d, front)) * 180) / Math.PI;
  return turned({ ...orbit, turnDeg: 0, tiltDeg: 0 }, Number.isFinite(turnDeg) ? turnDeg : 0, tiltDeg);
}
