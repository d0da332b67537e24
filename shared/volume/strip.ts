import type { FilmHeader, FilmRequest, StripHeader, StripRequest } from "#shared/api/engine.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { add, scale } from "#shared/geometry/vec3.ts";
import type { BrickPyramid } from "#shared/volume/bricks.ts";
import { finestSpacing, latticeOnLevel, levelForPixel } from "#shared/volume/section/lattice.ts";
import { type CurveFrame, framesAlong, pointsOfFlat } from "#shared/volume/section/moving-frames.ts";
import { type AbortSignalLike, sampleLatticeInto } from "#shared/volume/section/sample-lattice.ts";

/**
 * A strand laid straight: each row is a line across it, rows at equal steps of arc length, the first point at the bottom
 * edge and the last at the top edge (rows stand at their pixel centres). At `turn` 0 the line lies along the `across`
 * vector of the film's sections, and a greater turn goes from it towards their downward axis.
 * @throws cancelled when the signal says so.
 */
export function strip(
  bricks: BrickPyramid,
  request: Omit<StripRequest, "ticket" | "specimen">,
  signal?: AbortSignalLike,
): BinaryFrame<StripHeader> {
  const { width, height, halfWidthMm } = request;
  const points = pointsOfFlat(request.points);
  const lengthMm = polylineLength(points);
  const pixel = (2 * halfWidthMm) / width;
  const level = levelForPixel(bricks.levels, pixel);
  const at = Array.from({ length: height }, (_, row) => (lengthMm * (row + 0.5)) / height);
  const frames = framesAlong(points, at, Math.max(lengthMm / height, finestSpacing(bricks.levels[0]!)));
  const angle = (request.turn * Math.PI) / 180;
  const body = new Uint8Array(width * height);
  frames.forEach((frame, fromBottom) => {
    const across = add(scale(frame.across, Math.cos(angle)), scale(frame.other, Math.sin(angle)));
    const row = height - 1 - fromBottom;
    const lattice = latticeOnLevel(bricks.levels[level]!, {
      at: add(frame.point, scale(across, pixel / 2 - halfWidthMm)),
      u: scale(across, pixel),
      v: NOWHERE,
      w: NOWHERE,
      width,
      height: 1,
      depth: 1,
    });
    sampleLatticeInto(bricks, level, lattice, "max", request, body.subarray(row * width, (row + 1) * width), signal);
  });
  return { header: { dtype: "uint8", width, height, lengthMm }, body };
}

const NOWHERE: Vec3 = [0, 0, 0];

/**
 * Small sections across a strand at equal steps of arc length, ends included (the middle, when there is only one). Rows run
 * along the frame's `across` vector; looking at them one looks along the strand.
 * @throws cancelled when the signal says so.
 */
export function film(
  bricks: BrickPyramid,
  request: Omit<FilmRequest, "ticket" | "specimen">,
  signal?: AbortSignalLike,
): BinaryFrame<FilmHeader> {
  const { count, side, halfWidthMm } = request;
  const points = pointsOfFlat(request.points);
  const length = polylineLength(points);
  const at = Array.from({ length: count }, (_, n) => (count === 1 ? length / 2 : (length * n) / (count - 1)));
  const pixel = (2 * halfWidthMm) / side;
  const level = levelForPixel(bricks.levels, pixel);
  const reach = 2 * finestSpacing(bricks.levels[0]!);
  const body = new Uint8Array(count * side * side);
  framesBetween(points, at, reach, length).forEach((frame, n) => {
    const corner = add(scale(frame.across, pixel / 2 - halfWidthMm), scale(frame.other, pixel / 2 - halfWidthMm));
    const lattice = latticeOnLevel(bricks.levels[level]!, {
      at: add(frame.point, corner),
      u: scale(frame.across, pixel),
      v: scale(frame.other, pixel),
      w: NOWHERE,
      width: side,
      height: side,
      depth: 1,
    });
    sampleLatticeInto(bricks, level, lattice, "max", request, body.subarray(n * side * side, (n + 1) * side * side), signal);
  });
  return { header: { dtype: "uint8", count, side, at }, body };
}

/** Frames at few places, carried along at small steps from the strand's start, so that they agree with the strip's. */
function framesBetween(points: readonly Vec3[], at: readonly number[], reach: number, length: number): CurveFrame[] {
  const most = 4096;
  const step = Math.max(reach / 2, length / most);
  const places: number[] = [];
  const wanted: number[] = [];
  let s = 0;
  for (const next of at) {
    for (; s < next; s += step) places.push(s);
    wanted.push(places.length);
    places.push(next);
  }
  const frames = framesAlong(points, places, reach);
  return wanted.map((index) => frames[index]!);
}
