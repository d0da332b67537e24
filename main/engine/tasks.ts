import type { CacheFigures, CacheMemory } from "#main/engine/brick-cache.ts";
import type {
  FilmHeader,
  FilmRequest,
  GuidePreviewAnswer,
  HistogramAnswer,
  SectionHeader,
  SectionRequest,
  SnapAnswer,
  SnapRequest,
  SolvedCurve,
  SolveRequest,
  StripHeader,
  StripRequest,
  SurfaceHeader,
  SurfaceRequest,
  ValueAnswer,
} from "#shared/api/engine.ts";
import type { FollowAnswer } from "#shared/api/follow.ts";
import type { BinaryFrame } from "#shared/api/frame.ts";
import type { SpecimenVolume } from "#shared/api/specimen.ts";
import type { ErrorBody } from "#shared/errors.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { ImpassableString } from "#shared/tracing/guide/impassable.ts";
import type { ExplainingLine } from "#shared/tracing/overlooked/find-stretches.ts";
import type { FoundPoints } from "#shared/tracing/overlooked/search-block.ts";
import type { OverlookedStretch } from "#shared/tracing/overlooked/stretch.ts";
import type { Polarity, TraceParameters } from "#shared/tracing/strand-request.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";

/** A specimen's store as workers know it; a store that is forgotten and opened again has another number. */
export interface StoreRef {
  readonly number: number;
  /** The specimen's folder. */
  readonly folder: string;
  readonly volume: SpecimenVolume;
  /** As the person confirmed it; requests carry their own. */
  readonly polarity: Polarity;
}

/** A guide session; complete, so that any worker can make it (again) from this alone. */
export interface GuideRef {
  readonly session: string;
  readonly from: PointMm;
  readonly parameters: TraceParameters;
  /** Strings that the guide may not enter. */
  readonly impassable: readonly ImpassableString[];
}

/** A run along a string from a clicked place. */
export interface FollowRef {
  readonly session: string;
  readonly at: PointMm;
  readonly parameters: TraceParameters;
  /** Lines of the strands traced already, each flat xyz, millimetres. */
  readonly traced: readonly (readonly number[])[];
}

/** What a worker computes: input and answer of each kind of task. */
export interface EngineTasks {
  section: { input: SectionRequest; answer: BinaryFrame<SectionHeader> };
  strip: { input: StripRequest; answer: BinaryFrame<StripHeader> };
  film: { input: FilmRequest; answer: BinaryFrame<FilmHeader> };
  surface: { input: SurfaceRequest; answer: BinaryFrame<SurfaceHeader> };
  value: { input: PointMm; answer: ValueAnswer };
  histogram: { input: null; answer: HistogramAnswer };
  snap: { input: SnapRequest; answer: SnapAnswer };
  solve: { input: SolveRequest; answer: { curves: readonly SolvedCurve[] } };
  warm: { input: { backwards: boolean }; answer: null };
  "open-guide": { input: GuideRef; answer: null };
  "preview-guide": { input: { guide: GuideRef; to: PointMm }; answer: GuidePreviewAnswer };
  "open-follow": { input: FollowRef; answer: null };
  "more-follow": { input: { session: string }; answer: FollowAnswer };
  "search-level": { input: Polarity; answer: PyramidLevel };
  "search-block": { input: { polarity: Polarity; block: number }; answer: FoundPoints };
  stretches: {
    input: { polarity: Polarity; found: readonly FoundPoints[]; lines: readonly ExplainingLine[]; minimumMm: number };
    answer: readonly OverlookedStretch[];
  };
  figures: { input: null; answer: CacheFigures };
  forget: { input: null; answer: null };
}

export type TaskKind = keyof EngineTasks;

/** Messages to a worker. */
export type ToWorker =
  | {
      readonly type: "run";
      readonly id: number;
      readonly kind: TaskKind;
      readonly store: StoreRef | null;
      readonly input: unknown;
    }
  | { readonly type: "close-guide" | "close-follow"; readonly session: string }
  /** No search goes on: what was kept for it may go. */
  | { readonly type: "end-search" };

/** Messages from a worker. */
export type FromWorker =
  | { readonly type: "ready" }
  | { readonly type: "done"; readonly id: number; readonly answer: unknown }
  | { readonly type: "failed"; readonly id: number; readonly error: ErrorBody };

/** What a worker is started with. */
export interface WorkerStart {
  readonly worker: number;
  readonly memory: CacheMemory;
  /** Ridge tiles that the workers share; null where sharing is not worth while. */
  readonly ridges: CacheMemory | null;
  /** What the pool tells its workers while they compute; see `Calls`. */
  readonly calls: SharedArrayBuffer;
  /** Bytes this worker may keep for ridge tiles and grey values, and for the fronts of guide sessions. */
  readonly ridgeBytes: number;
  readonly frontBytes: number;
}
