import type { PlaneMm } from "#shared/api/engine.ts";
import { type PointMm, pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { add, cross, dot, scale, subtract } from "#shared/geometry/vec3.ts";

/** Two unit vectors at right angles that span a plane. `right` x `down` points away from the viewer, so nothing is mirrored. */
export interface PlaneAxes {
  readonly right: Vec3;
  readonly down: Vec3;
}

/** What a section pane shows: a plane, its middle on screen, and the scale. */
export interface ViewPlane extends PlaneAxes {
  /** The place in the middle of the pane. */
  readonly centre: PointMm;
  /** Millimetres per CSS pixel. */
  readonly mmPerPx: number;
}

/** Size of a pane in CSS pixels, and device pixels per CSS pixel. */
export interface PaneSize {
  readonly width: number;
  readonly height: number;
  readonly ratio: number;
}

/** A place as the pane sees it: CSS pixels from its top left corner, and millimetres behind (+) or before (-) the plane. */
export interface PanePoint {
  readonly x: number;
  readonly y: number;
  readonly depthMm: number;
}

export function awayFrom(axes: PlaneAxes): Vec3 {
  return cross(axes.right, axes.down);
}

export function toPane(plane: ViewPlane, size: PaneSize, p: Vec3): PanePoint {
  const d = subtract(p, plane.centre);
  return {
    x: size.width / 2 + dot(d, plane.right) / plane.mmPerPx,
    y: size.height / 2 + dot(d, plane.down) / plane.mmPerPx,
    depthMm: dot(d, awayFrom(plane)),
  };
}

/** The place under a point of the pane, on the plane itself. */
export function fromPane(plane: ViewPlane, size: PaneSize, x: number, y: number): PointMm {
  return moved(plane.centre, plane, (x - size.width / 2) * plane.mmPerPx, (y - size.height / 2) * plane.mmPerPx);
}

/** The plane to ask the engine for; `share` 1 = every device pixel, 0.5 = half of them each way. */
export function requestPlane(plane: ViewPlane, size: PaneSize, share: number): PlaneMm {
  const width = Math.max(1, Math.round(size.width * size.ratio * share));
  const height = Math.max(1, Math.round(size.height * size.ratio * share));
  return {
    origin: fromPane(plane, size, 0, 0),
    u: scale(plane.right, (size.width * plane.mmPerPx) / width),
    v: scale(plane.down, (size.height * plane.mmPerPx) / height),
    width,
    height,
  };
}

/** The plane after dragging its picture by so many CSS pixels. */
export function panned(plane: ViewPlane, dx: number, dy: number): ViewPlane {
  return { ...plane, centre: moved(plane.centre, plane, -dx * plane.mmPerPx, -dy * plane.mmPerPx) };
}

/** The plane with its scale changed by `factor` (above 1 = closer), the place `at` staying where it is in the pane. */
export function zoomed(plane: ViewPlane, factor: number, at: PointMm, limits: ZoomLimits = ZOOM_LIMITS): ViewPlane {
  const mmPerPx = Math.min(limits.coarsest, Math.max(limits.finest, plane.mmPerPx / factor));
  const offset = subtract(at, plane.centre);
  const keep = mmPerPx / plane.mmPerPx;
  const right = dot(offset, plane.right) * (1 - keep);
  const down = dot(offset, plane.down) * (1 - keep);
  return { ...plane, mmPerPx, centre: moved(plane.centre, plane, right, down) };
}

export interface ZoomLimits {
  /** Millimetres per CSS pixel. */
  readonly finest: number;
  readonly coarsest: number;
}

/** From a thousandth of a millimetre to a millimetre on one pixel: beyond both, nothing of a valve can be seen. */
export const ZOOM_LIMITS: ZoomLimits = { finest: 0.001, coarsest: 1 };

/** The plane moved along its line of sight, positive = away from the viewer. */
export function stepped(plane: ViewPlane, mm: number): ViewPlane {
  const p = add(plane.centre, scale(awayFrom(plane), mm));
  return { ...plane, centre: pointMm(p[0], p[1], p[2]) };
}

function moved(from: PointMm, axes: PlaneAxes, right: number, down: number): PointMm {
  const p = add(from, add(scale(axes.right, right), scale(axes.down, down)));
  return pointMm(p[0], p[1], p[2]);
}
