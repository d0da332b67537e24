import type { FollowAnswer, FollowMoreRequest, FollowOpenRequest } from "#shared/api/follow.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { Lane, Ticket } from "#shared/api/ticket.ts";
import type { PointMm, Vec3 } from "#shared/geometry/types.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import type { ExplainingLine } from "#shared/tracing/overlooked/find-stretches.ts";
import type { FoundPoints } from "#shared/tracing/overlooked/search-block.ts";
import type { OverlookedStretch } from "#shared/tracing/overlooked/stretch.ts";
import type { Polarity, StrandRequest, TraceParameters } from "#shared/tracing/strand-request.ts";
import type { MadeBy } from "#shared/trees/document.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

export type { Lane, Ticket };

/** A pane's plane: the centre of pixel (i, j) lies at origin + (i + 0.5) u + (j + 0.5) v. */
export interface PlaneMm {
  /** Top left corner, millimetres. */
  readonly origin: PointMm;
  /** Step along a row, millimetres per pixel. */
  readonly u: Vec3;
  /** Step down a column, millimetres per pixel. */
  readonly v: Vec3;
  readonly width: number;
  readonly height: number;
}

export interface SectionRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  readonly plane: PlaneMm;
  /** Thickness of the slab along the normal, half of it to each side of the plane, millimetres; 0 = a plane without thickness. */
  readonly slabMm: number;
  readonly slabMode: "max" | "mean";
  /** Grey values shown as 0 and 255. */
  readonly low: number;
  readonly high: number;
  /** `moving` may answer from a coarser level; the answer has the pixels asked for, so ask for half of them a side. */
  readonly quality: "moving" | "still";
}

/** Body: uint8, width x height, rows from the top. Outside the scan is 0. */
export interface SectionHeader {
  readonly dtype: "uint8";
  readonly width: number;
  readonly height: number;
  readonly plane: PlaneMm;
  readonly level: number;
}

export interface ValueAnswer {
  /** Null outside the scan. */
  readonly value: number | null;
  readonly index: readonly [number, number, number];
}

export interface HistogramAnswer {
  readonly min: number;
  readonly max: number;
  /** Counts of equal bins between min and max. */
  readonly counts: readonly number[];
  /** Suggested display window. */
  readonly low: number;
  readonly high: number;
}

export interface SnapRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  /** Where the pointer meets the section plane. */
  readonly at: PointMm;
  /** Unit normal of the section, away from the viewer. */
  readonly normal: Vec3;
  readonly slabMm: number;
  /** A few screen pixels, as millimetres. */
  readonly reachMm: number;
  readonly polarity: Polarity;
}

export interface SnapCandidate {
  readonly point: PointMm;
  /** Along the normal from the section plane. */
  readonly depthMm: number;
  /** 0-1, relative ridge strength. */
  readonly strength: number;
}

/** Strongest first; empty when no string is in reach. */
export interface SnapAnswer {
  readonly candidates: readonly SnapCandidate[];
}

export interface GuideOpenRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  readonly from: PointMm;
  readonly parameters: TraceParameters;
  /** Strings that the guide may not enter, but for leaving the one that its pin is on; absent = none. */
  readonly impassable?: readonly ImpassableString[];
}

export interface GuidePreviewRequest {
  readonly ticket: Ticket;
  readonly session: string;
  readonly to: PointMm;
}

export interface GuidePreviewAnswer {
  /** Flat xyz, millimetres, from the session's pin to `to`. */
  readonly points: readonly number[];
  /** True while the front has not arrived and a coarse-level path is shown. */
  readonly coarse: boolean;
  readonly imageFit: number | null;
  /** Index of the first point of each stretch that leaves the string. */
  readonly doubtful: readonly (readonly [number, number])[];
}

export interface SolveRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  readonly strands: readonly StrandRequest[];
  readonly parameters: TraceParameters;
}

/** A traced curve in JSON: flat xyz points; null radius = below resolution. */
export interface SolvedCurve {
  readonly points: readonly number[];
  readonly radii: readonly (number | null)[];
  readonly madeBy: readonly (readonly [number, number, MadeBy])[];
  readonly imageFit: number | null;
  readonly followed: boolean;
}

/** The strand laid straight: rows along its arc length from its first point (bottom row) to its last (top row). */
export interface StripRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  /** Flat xyz, millimetres. */
  readonly points: readonly number[];
  readonly width: number;
  readonly height: number;
  readonly halfWidthMm: number;
  /** Turn of the cutting direction about the strand, degrees. */
  readonly turn: number;
  readonly low: number;
  readonly high: number;
}

/** Body: uint8, width x height. */
export interface StripHeader {
  readonly dtype: "uint8";
  readonly width: number;
  readonly height: number;
  readonly lengthMm: number;
}

/** Small sections across the strand at equal steps of arc length, side by side from first to last point. */
export interface FilmRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  readonly points: readonly number[];
  readonly count: number;
  /** Pixels of one side of each small section. */
  readonly side: number;
  readonly halfWidthMm: number;
  readonly low: number;
  readonly high: number;
}

/** Body: uint8, `count` squares of side x side one after another. */
export interface FilmHeader {
  readonly dtype: "uint8";
  readonly count: number;
  readonly side: number;
  /** Arc length of each section from the first point, millimetres. */
  readonly at: readonly number[];
}

/** Bright surface points of a coarse level. Body: float32 xyz per point, millimetres, at most `limit` points. */
export interface SurfaceRequest {
  readonly ticket: Ticket;
  readonly specimen: string;
  readonly limit: number;
  readonly polarity: Polarity;
}

export interface SurfaceHeader {
  readonly dtype: "float32";
  readonly count: number;
  readonly level: number;
  readonly threshold: number;
}

/** Points that a search found, and the strands that explain some of them. */
export interface StretchesRequest {
  readonly specimen: string;
  readonly polarity: Polarity;
  readonly found: readonly FoundPoints[];
  readonly lines: readonly ExplainingLine[];
  readonly minimumMm: number;
}

/** Requests that the engine has queued, and that it works on now (those no longer wanted that have not stopped yet included). */
export interface EngineLoad {
  readonly waiting: number;
  readonly running: number;
}

/** What the engine can do; the request handler and the command line both speak to this. */
export interface Engine {
  section(request: SectionRequest): Promise<BinaryFrame<SectionHeader>>;
  value(specimen: string, at: PointMm): Promise<ValueAnswer>;
  histogram(specimen: string): Promise<HistogramAnswer>;
  snap(request: SnapRequest): Promise<SnapAnswer>;
  openGuide(request: GuideOpenRequest): Promise<{ session: string }>;
  previewGuide(request: GuidePreviewRequest): Promise<GuidePreviewAnswer>;
  closeGuide(session: string): Promise<void>;
  solve(request: SolveRequest): Promise<{ curves: readonly SolvedCurve[] }>;
  /** @throws bad-request when the place lies outside the scan */
  openFollow(request: FollowOpenRequest): Promise<{ session: string }>;
  /** @throws not-found when the run is over or made way for a newer one */
  moreFollow(request: FollowMoreRequest): Promise<FollowAnswer>;
  closeFollow(session: string): Promise<void>;
  /** The level that a scan is searched on, whose blocks `blockCounts` tells. */
  searchLevel(specimen: string, polarity: Polarity): Promise<PyramidLevel>;
  /** The string points of one block; gives way to everything that a person waits for. */
  searchBlock(specimen: string, polarity: Polarity, block: number): Promise<FoundPoints>;
  /** What no line explains among the points found; see `findStretches`. */
  stretches(request: StretchesRequest): Promise<readonly OverlookedStretch[]>;
  /** Lets go of what was kept for a search. */
  endSearch(): void;
  strip(request: StripRequest): Promise<BinaryFrame<StripHeader>>;
  film(request: FilmRequest): Promise<BinaryFrame<FilmHeader>>;
  surface(request: SurfaceRequest): Promise<BinaryFrame<SurfaceHeader>>;
  load(): EngineLoad;
  close(): Promise<void>;
}
