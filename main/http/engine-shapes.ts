import {
  flag,
  list,
  matching,
  nullable,
  number,
  object,
  oneOf,
  optional,
  type Shape,
  text,
  triple,
  whole,
} from "#main/http/shape.ts";
import type {
  FilmRequest,
  GuideOpenRequest,
  GuidePreviewRequest,
  PlaneMm,
  SectionRequest,
  SnapRequest,
  SolveRequest,
  StripRequest,
  SurfaceRequest,
  Ticket,
} from "#shared/api/engine.ts";
import type { FollowMoreRequest, FollowOpenRequest } from "#shared/api/follow.ts";
import type { OverlookedRequest, SearchRequest } from "#shared/api/overlooked.ts";
import { type PointMm, pointMm } from "#shared/geometry/types.ts";
import type { StrandRequest, TraceParameters } from "#shared/tracing/strand-request.ts";

/** Ids of specimens, passes and jobs: lower-case ASCII, no path can hide in one. */
export const id = matching(/^[a-z0-9][a-z0-9-]{0,63}$/, "an id");
/** What a page calls itself. */
export const windowName = matching(/^[A-Za-z0-9_-]{1,64}$/, "a window's name");

/** Millimetres; a kilometre is more than any specimen. */
const mm = number(-1e6, 1e6);
const grey = number(-1e12, 1e12);
/** Pixels of one side of an answer. */
const side = whole(1, 4096);

/** A place, millimetres. */
export const point: Shape<PointMm> = (value, where) => pointMm(...triple(mm)(value, where));

const ticket: Shape<Ticket> = object({
  window: windowName,
  lane: oneOf("section", "guide", "space", "job"),
  number: whole(0, Number.MAX_SAFE_INTEGER),
});

const plane: Shape<PlaneMm> = object({ origin: point, u: triple(mm), v: triple(mm), width: side, height: side });

export const polarity = oneOf("bright", "dark");
const parameters: Shape<TraceParameters> = object({ polarity, blurFwhmMm: nullable(number(1e-6, 1e3)) });

const pins = list(point, 10_000);
const strand: Shape<StrandRequest> = object({
  from: point,
  via: pins,
  to: point,
  legs: optional(list(oneOf("guide", "straight"), 10_001)),
});

/** Flat xyz of at least two points. */
const flatPoints: Shape<number[]> = (value, where) => {
  const points = list(mm, 3_000_000)(value, where);
  if (points.length < 6 || points.length % 3 !== 0) return list(mm, 0)(points, `${where} (two or more places of three numbers)`);
  return points;
};

export const sectionRequest: Shape<SectionRequest> = object({
  ticket,
  specimen: id,
  plane,
  slabMm: number(0, 1e4),
  slabMode: oneOf("max", "mean"),
  low: grey,
  high: grey,
  quality: oneOf("moving", "still"),
});
export const valueRequest = object({ specimen: id, at: point });
export const histogramRequest = object({ specimen: id });
export const snapRequest: Shape<SnapRequest> = object({
  ticket,
  specimen: id,
  at: point,
  normal: triple(number(-1.01, 1.01)),
  slabMm: number(0, 1e4),
  reachMm: number(0, 1e3),
  polarity,
});
export const guideOpenRequest: Shape<GuideOpenRequest> = object({
  ticket,
  specimen: id,
  from: point,
  parameters,
  impassable: optional(list(object({ points: flatPoints, radiusMm: number(0, 10) }), 1_000)),
});
export const guidePreviewRequest: Shape<GuidePreviewRequest> = object({ ticket, session: text(128, 1), to: point });
export const guideCloseRequest = object({ session: text(128, 1) });
export const followOpenRequest: Shape<FollowOpenRequest> = object({
  ticket,
  specimen: id,
  at: point,
  parameters,
  traced: optional(list(flatPoints, 10_000)),
});
export const followMoreRequest: Shape<FollowMoreRequest> = object({ ticket, session: text(128, 1) });
const corners = object({ from: point, to: point });
export const searchRequest: Shape<SearchRequest> = object({ polarity, region: optional(corners) });
export const overlookedRequest: Shape<OverlookedRequest> = object({
  specimen: id,
  pass: id,
  polarity,
  minimumMm: optional(number(0, 1e3)),
  withDismissed: optional(flag),
});
export const solveRequest: Shape<SolveRequest> = object({ ticket, specimen: id, strands: list(strand, 1_000), parameters });
export const stripRequest: Shape<StripRequest> = object({
  ticket,
  specimen: id,
  points: flatPoints,
  width: side,
  height: side,
  halfWidthMm: number(1e-6, 1e3),
  turn: number(-1e6, 1e6),
  low: grey,
  high: grey,
});
export const filmRequest: Shape<FilmRequest> = object({
  ticket,
  specimen: id,
  points: flatPoints,
  count: whole(1, 1024),
  side: whole(1, 512),
  halfWidthMm: number(1e-6, 1e3),
  low: grey,
  high: grey,
});
export const surfaceRequest: Shape<SurfaceRequest> = object({ ticket, specimen: id, limit: whole(1, 2_000_000), polarity });
