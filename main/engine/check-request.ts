import type {
  FilmRequest,
  PlaneMm,
  SectionRequest,
  SnapRequest,
  SolveRequest,
  StripRequest,
  Ticket,
} from "#shared/api/engine.ts";
import { TautlineError } from "#shared/errors.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { isInside } from "#shared/volume/grid.ts";

/** Most pixels of one side of an answer. */
export const MOST_SIDE = 4096;
const MOST_PIXELS_OF_FILM = MOST_SIDE * MOST_SIDE;
const MOST_CURVE_POINTS = 200_000;
const MOST_STRANDS = 1000;
const MOST_PINS = 10_000;
const MOST_MM = 1e6;

// The engine is called by the request handler, which checks shapes, and by code: what would make a kernel run without end or
// without bounds is checked here for both.

function refuse(where: string, expected: string, found: unknown): never {
  const what = `${where}: expected ${expected}, found ${String(found)}`;
  throw new TautlineError("bad-request", `The engine was asked for something it cannot do. ${what}.`, { what, where });
}

function finite(where: string, values: ArrayLike<number>, most = MOST_MM): void {
  for (let n = 0; n < values.length; n++) {
    const value = values[n]!;
    if (!(Math.abs(value) <= most)) refuse(where, `finite numbers up to ${most}`, value);
  }
}

function whole(where: string, value: number, least: number, most: number): void {
  if (!Number.isInteger(value) || value < least || value > most) refuse(where, `a whole number from ${least} to ${most}`, value);
}

function range(where: string, value: number, least: number, most: number): void {
  if (!(value >= least && value <= most)) refuse(where, `a number from ${least} to ${most}`, value);
}

/** No string is thicker. */
const MOST_IMPASSABLE_RADIUS_MM = 10;
const LANES = ["section", "guide", "space", "job"];

/** @throws bad-request */
export function checkTicket(ticket: Ticket): void {
  if (typeof ticket.window !== "string" || ticket.window.length === 0) refuse("ticket.window", "a window's name", ticket.window);
  if (!LANES.includes(ticket.lane)) refuse("ticket.lane", `one of ${LANES.join(", ")}`, ticket.lane);
  whole("ticket.number", ticket.number, 0, Number.MAX_SAFE_INTEGER);
}

function checkPlane(plane: PlaneMm): void {
  finite("plane.origin", plane.origin);
  finite("plane.u", plane.u);
  finite("plane.v", plane.v);
  whole("plane.width", plane.width, 1, MOST_SIDE);
  whole("plane.height", plane.height, 1, MOST_SIDE);
  const [ux, uy, uz] = plane.u;
  const [vx, vy, vz] = plane.v;
  const area = Math.hypot(uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx);
  if (!(area > 1e-9 * Math.hypot(ux, uy, uz) * Math.hypot(vx, vy, vz))) {
    refuse("plane", "steps u and v that span a plane", `${plane.u} and ${plane.v}`);
  }
}

function checkDisplay(low: number, high: number): void {
  finite("low, high", [low, high], Number.MAX_VALUE);
}

/** @throws bad-request */
export function checkSection(request: SectionRequest): void {
  checkTicket(request.ticket);
  checkPlane(request.plane);
  range("slabMm", request.slabMm, 0, 1e4);
  if (request.slabMode !== "max" && request.slabMode !== "mean") refuse("slabMode", "max or mean", request.slabMode);
  if (request.quality !== "moving" && request.quality !== "still") refuse("quality", "moving or still", request.quality);
  checkDisplay(request.low, request.high);
}

function checkCurve(points: readonly number[]): void {
  if (points.length < 6 || points.length % 3 !== 0 || points.length > 3 * MOST_CURVE_POINTS) {
    refuse("points", `flat x, y, z of 2 to ${MOST_CURVE_POINTS} points`, `${points.length} numbers`);
  }
  finite("points", points);
}

/** @throws bad-request */
export function checkStrip(request: StripRequest): void {
  checkTicket(request.ticket);
  checkCurve(request.points);
  whole("width", request.width, 1, MOST_SIDE);
  whole("height", request.height, 1, MOST_SIDE);
  range("halfWidthMm", request.halfWidthMm, 1e-6, 1e3);
  finite("turn", [request.turn]);
  checkDisplay(request.low, request.high);
}

/** @throws bad-request */
export function checkFilm(request: FilmRequest): void {
  checkTicket(request.ticket);
  checkCurve(request.points);
  whole("count", request.count, 1, MOST_SIDE);
  whole("side", request.side, 1, MOST_SIDE);
  whole("pixels", request.count * request.side * request.side, 1, MOST_PIXELS_OF_FILM);
  range("halfWidthMm", request.halfWidthMm, 1e-6, 1e3);
  checkDisplay(request.low, request.high);
}

/** @throws bad-request */
export function checkSnap(request: SnapRequest): void {
  checkTicket(request.ticket);
  finite("at", request.at);
  finite("normal", request.normal, 1.01);
  if (!(Math.abs(Math.hypot(...request.normal) - 1) < 0.01)) refuse("normal", "a unit vector", request.normal);
  range("slabMm", request.slabMm, 0, 1e4);
  range("reachMm", request.reachMm, 0, 1e3);
}

/** @throws bad-request */
export function checkParameters(parameters: TraceParameters): void {
  const { polarity, blurFwhmMm } = parameters;
  if (polarity !== "bright" && polarity !== "dark") refuse("polarity", "bright or dark", polarity);
  if (blurFwhmMm !== null) range("blurFwhmMm", blurFwhmMm, 1e-6, 1e3);
}

/** A place that must lie in the scan. @throws bad-request */
export function checkInScan(where: string, point: readonly [number, number, number], grid: VolumeGrid): void {
  finite(where, point);
  if (!isInside(grid, point)) refuse(where, "a place in the scan", point.join(", "));
}

/** @throws bad-request */
export function checkSolve(request: SolveRequest, grid: VolumeGrid): void {
  checkTicket(request.ticket);
  checkParameters(request.parameters);
  whole("strands", request.strands.length, 0, MOST_STRANDS);
  request.strands.forEach((strand, n) => {
    whole(`strands[${n}].via`, strand.via.length, 0, MOST_PINS);
    if (strand.legs) whole(`strands[${n}].legs`, strand.legs.length, strand.via.length + 1, strand.via.length + 1);
    for (const pin of [strand.from, ...strand.via, strand.to]) checkInScan(`strands[${n}]`, pin, grid);
  });
}

/** @throws bad-request */
export function checkImpassable(strings: readonly ImpassableString[]): void {
  whole("impassable", strings.length, 0, MOST_STRANDS);
  let points = 0;
  strings.forEach((string, n) => {
    if (string.points.length < 3 || string.points.length % 3 !== 0)
      refuse(`impassable[${n}].points`, "flat x, y, z of at least one point", `${string.points.length} numbers`);
    finite(`impassable[${n}].points`, string.points);
    range(`impassable[${n}].radiusMm`, string.radiusMm, 0, MOST_IMPASSABLE_RADIUS_MM);
    points += string.points.length / 3;
  });
  whole("points of impassable strings", points, 0, MOST_CURVE_POINTS);
}

/** Lines of the strands that a run must not enter. @throws bad-request */
export function checkTraced(lines: readonly (readonly number[])[]): void {
  whole("traced", lines.length, 0, MOST_PINS);
  let points = 0;
  lines.forEach((flat, n) => {
    if (flat.length < 6 || flat.length % 3 !== 0) refuse(`traced[${n}]`, "flat x, y, z of at least two points", flat.length);
    finite(`traced[${n}]`, flat);
    points += flat.length / 3;
  });
  whole("points of traced strands", points, 0, 10 * MOST_CURVE_POINTS);
}

/** @throws bad-request */
export function checkWhole(where: string, value: number, least: number, most: number): void {
  whole(where, value, least, most);
}

/** @throws bad-request */
export function checkPoint(where: string, point: readonly [number, number, number]): void {
  if (point.length !== 3) refuse(where, "three numbers", point.length);
  finite(where, point);
}
