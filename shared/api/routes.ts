import type { EngineLoad } from "#shared/api/engine.ts";
import type { ReadingChoice } from "#shared/api/projections.ts";
import type { Handedness, ShelfSpecimen, SpecimenFacts } from "#shared/api/specimen.ts";
import type { MadePacket, TakenPacket } from "#shared/api/study.ts";
import type { LogHead } from "#shared/log/records.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { Landmarks } from "#shared/trees/document.ts";
import type { SourceDtype } from "#shared/volume/dtype.ts";
import type { Region } from "#shared/volume/region/region.ts";
import type { ScanReadings } from "#shared/volume/scan-header.ts";

/**
 * Every route: method and path. `:name` is a path parameter. Bodies are JSON unless said; binary answers are frames
 * (`frame.ts`). Request and answer types stand beside each other below or in `engine.ts`.
 */
export const ROUTES = {
  hello: { method: "GET", path: "/api/hello" }, // -> HelloAnswer
  events: { method: "GET", path: "/api/events" }, // -> JSON Lines of ServerEvent, one stream per window (?window=)
  shelf: { method: "GET", path: "/api/shelf" }, // -> ShelfAnswer
  listFolder: { method: "POST", path: "/api/folders/list" }, // FolderRequest -> FolderAnswer
  lookAtScan: { method: "POST", path: "/api/scans/look" }, // LookRequest -> ScanLookAnswer
  startProjections: { method: "POST", path: "/api/scans/projections" }, // ProjectionsRequest -> {job}, "look"
  projections: { method: "GET", path: "/api/scans/projections/:job" }, // -> ProjectionsAnswer of a job that is done
  startIntake: { method: "POST", path: "/api/intake" }, // IntakeRequest -> {job}
  openDemo: { method: "POST", path: "/api/demo" }, // {} -> {job} (specimen id in the job's result; at once when it exists)
  openDemoStudy: { method: "POST", path: "/api/demo-study" }, // {} -> {job} (study id in the job's result; the demo valve is made with it)
  cancelJob: { method: "POST", path: "/api/jobs/:job/cancel" }, // {} -> {}
  specimen: { method: "GET", path: "/api/specimens/:specimen" }, // -> SpecimenRecord
  changeSpecimen: { method: "PATCH", path: "/api/specimens/:specimen" }, // SpecimenPatch -> SpecimenRecord
  removeSpecimen: { method: "DELETE", path: "/api/specimens/:specimen" }, // refused while it has passes with edits, unless {force:true}
  picture: { method: "GET", path: "/api/specimens/:specimen/picture" }, // -> frame SectionHeader: small projection
  createPass: { method: "POST", path: "/api/specimens/:specimen/passes" }, // {annotator} -> PassSummary
  readLog: { method: "GET", path: "/api/passes/:specimen/:pass/log" }, // ?from=seq -> LogAnswer
  appendLog: { method: "POST", path: "/api/passes/:specimen/:pass/log" }, // AppendRequest -> AppendAnswer
  keepBranch: { method: "POST", path: "/api/passes/:specimen/:pass/branches" }, // {lines, name} -> {pass: PassSummary} the window's forked log as a recovered pass
  rebuildLog: { method: "POST", path: "/api/passes/:specimen/:pass/rebuild" }, // {lines} -> AppendAnswer; only when the disk has no journal
  claimPass: { method: "POST", path: "/api/passes/:specimen/:pass/claim" }, // {window} -> {writer: boolean}
  releasePass: { method: "POST", path: "/api/passes/:specimen/:pass/release" }, // {window} -> {}
  finishPass: { method: "POST", path: "/api/passes/:specimen/:pass/state" }, // {state} -> PassSummary
  section: { method: "POST", path: "/api/engine/section" },
  value: { method: "POST", path: "/api/engine/value" }, // {specimen, at} -> ValueAnswer
  histogram: { method: "POST", path: "/api/engine/histogram" }, // {specimen} -> HistogramAnswer
  snap: { method: "POST", path: "/api/engine/snap" },
  openGuide: { method: "POST", path: "/api/engine/guide/open" },
  previewGuide: { method: "POST", path: "/api/engine/guide/preview" },
  closeGuide: { method: "POST", path: "/api/engine/guide/close" }, // {session} -> {}
  solve: { method: "POST", path: "/api/engine/solve" },
  openFollow: { method: "POST", path: "/api/engine/follow/open" }, // FollowOpenRequest (`follow.ts`) -> {session}
  moreFollow: { method: "POST", path: "/api/engine/follow/more" }, // FollowMoreRequest -> FollowAnswer, until `done`
  closeFollow: { method: "POST", path: "/api/engine/follow/close" }, // {session} -> {}
  startSearch: { method: "POST", path: "/api/specimens/:specimen/search" }, // SearchRequest (`overlooked.ts`) -> {job}; cancelJob stops it
  overlooked: { method: "POST", path: "/api/overlooked" }, // OverlookedRequest -> OverlookedAnswer
  strip: { method: "POST", path: "/api/engine/strip" },
  film: { method: "POST", path: "/api/engine/film" },
  surface: { method: "POST", path: "/api/engine/surface" },
  exportTrees: { method: "POST", path: "/api/export" }, // ExportRequest -> ExportAnswer, or the file's bytes when `path` is absent
  bye: { method: "POST", path: "/api/bye" }, // {window}: the page is closing
  // Studies; types in `study.ts`. The lead's library:
  studies: { method: "GET", path: "/api/studies" }, // -> StudiesAnswer (also the assignments this library has taken in)
  createStudy: { method: "POST", path: "/api/studies" }, // StudyDraft -> StudyView
  study: { method: "GET", path: "/api/studies/:study" }, // -> StudyView
  changeStudy: { method: "PATCH", path: "/api/studies/:study" }, // StudyPatch -> StudyView
  removeStudy: { method: "DELETE", path: "/api/studies/:study" }, // {} -> {}; refused once a packet is out
  changeProtocol: { method: "POST", path: "/api/studies/:study/protocol" }, // ProtocolRequest -> StudyView; only while unfrozen
  freezeProtocol: { method: "POST", path: "/api/studies/:study/protocol/freeze" }, // {} -> StudyView; draws what is not drawn yet
  reviseProtocol: { method: "POST", path: "/api/studies/:study/protocol/revise" }, // ReviseRequest -> StudyView: the next version, unfrozen
  addPicture: { method: "POST", path: "/api/studies/:study/pictures" }, // a PNG's bytes (4 MB at most) -> {picture}: its name for a point rule
  studyPicture: { method: "GET", path: "/api/studies/:study/pictures/:picture" }, // -> the PNG
  makePackets: { method: "POST", path: "/api/studies/:study/packets" }, // PacketRequest -> {job}
  setAsidePass: { method: "POST", path: "/api/studies/:study/assignments/:assignment/aside" }, // SetAsideRequest -> StudyView
  studyAnalysis: { method: "GET", path: "/api/studies/:study/analysis" }, // -> AnalysisAnswer
  studyPasses: { method: "GET", path: "/api/studies/:study/passes" }, // -> StudyPassesAnswer: what the agreement is made of
  exportPasses: { method: "POST", path: "/api/studies/:study/passes" }, // ExportPassesRequest -> ExportAnswer
  // Either library:
  lookAtPacket: { method: "POST", path: "/api/packets/look" }, // {path} -> PacketLook
  takeInPacket: { method: "POST", path: "/api/packets" }, // TakeInRequest -> {job}
  signature: { method: "GET", path: "/api/signature" }, // -> SignatureAnswer; the key is made when first asked for
  // The annotator's library; `:specimen` is the assignment's:
  assignment: { method: "GET", path: "/api/assignments/:specimen" }, // -> AssignmentView
  assignmentPicture: { method: "GET", path: "/api/assignments/:specimen/pictures/:picture" }, // -> the PNG
  makeReturn: { method: "POST", path: "/api/assignments/:specimen/return" }, // ReturnRequest -> {job}; finishes and seals the pass
  reopenAssignment: { method: "POST", path: "/api/assignments/:specimen/reopen" }, // {} -> AssignmentView: to mend and return again
} as const;

export type RouteName = keyof typeof ROUTES;

/** Header that carries the per-run token; the page takes it from the URL fragment and keeps it in session storage. */
export const TOKEN_HEADER = "x-tautline-token";

/** Header of every error's answer, with its tag: the status alone does not tell (a superseded request is answered 200). */
export const ERROR_HEADER = "x-tautline-error";

export interface HelloAnswer {
  readonly name: "Tautline";
  readonly version: string;
  readonly shell: "electron" | "loopback";
  readonly library: string;
  readonly work: EngineLoad;
}

export interface ShelfAnswer {
  readonly specimens: readonly ShelfSpecimen[];
  /** Things in the library folder that could not be read, one sentence each. */
  readonly problems: readonly string[];
}

export interface FolderRequest {
  /** Absent: the folder to begin in. */
  readonly path?: string;
}

export interface FolderAnswer {
  readonly path: string;
  readonly parent: string | null;
  readonly entries: readonly { readonly name: string; readonly path: string; readonly folder: boolean; readonly bytes: number }[];
}

export type ScanWarningCode =
  | "no-unit"
  | "no-spacing"
  | "bad-spacing"
  | "spacing-one"
  | "anisotropic"
  | "spacing-range"
  | "size-range"
  | "no-frame";

/** What a scan's header says; spacing in millimetres, null exactly when unsettled. */
export interface ScanInfo {
  readonly family: string;
  readonly name: string;
  readonly bytes: number;
  readonly size: readonly [number, number, number];
  readonly spacing: readonly [number, number, number] | null;
  readonly headerSpacing: readonly [number, number, number] | null;
  readonly unit: string | null;
  readonly dtype: SourceDtype;
  readonly range: { readonly min: number; readonly max: number; readonly sampled: boolean };
  readonly frame: "LPS" | "scan";
  readonly warnings: readonly { readonly code: ScanWarningCode; readonly message: string }[];
}

export interface LookRequest extends ReadingChoice {
  readonly path: string;
}

export interface ScanLookAnswer {
  readonly info: ScanInfo;
  /** The middle slice, uint8, at most 512 a side, base64. */
  readonly slice: { readonly width: number; readonly height: number; readonly data: string };
  readonly histogram: { readonly min: number; readonly max: number; readonly counts: readonly number[] };
  /** Type conversions and other things that intake would do, one sentence each. */
  readonly conversions: readonly string[];
  readonly suggestedPolarity: Polarity;
  /** How many channels and time points there are, when more than one; a look without a choice is at the first. */
  readonly readings?: ScanReadings;
  /** Of an OME-Zarr: whether its own store can be used where it lies. */
  readonly inPlace?: InPlaceVerdict;
}

/** Whether a store can be used in place; if not, why not, in a sentence. */
export type InPlaceVerdict = { readonly fits: true } | { readonly fits: false; readonly why: string };

/** How a specimen's voxels are kept: a plain copy, a packed one, or the scan's own store used where it lies. */
export type KeptAs = "plain" | "packed" | "in-place";

export interface IntakeRequest extends ReadingChoice {
  readonly path: string;
  readonly name: string;
  /** Millimetres; always sent by the window (a person confirmed it). */
  readonly spacing: readonly [number, number, number];
  readonly handedness: Handedness;
  /** The person saw the mirrored view as the right one: the slice order is reversed on the way in. */
  readonly mirror?: boolean;
  /** The part to keep, in voxels as the file has them; absent: all of it. */
  readonly region?: Region;
  /** Absent: plain. */
  readonly keep?: KeptAs;
  readonly polarity: Polarity;
  readonly facts: SpecimenFacts;
}

export interface SpecimenPatch {
  readonly name?: string;
  readonly facts?: SpecimenFacts;
  readonly landmarks?: Landmarks;
  readonly polarity?: Polarity;
  readonly display?: { readonly low: number; readonly high: number };
  readonly blurFwhmMm?: number | null;
  readonly handedness?: Handedness;
}

export interface LogAnswer {
  readonly epoch: string;
  /** Lines from `from` on, without newlines. */
  readonly lines: readonly string[];
  readonly head: LogHead;
  /** Hash of the line before `from`, for checking that a base is on the chain; empty at 0. */
  readonly before: string;
}

export interface AppendRequest {
  readonly window: string;
  readonly epoch: string;
  /** The chain's end that the lines continue. */
  readonly base: LogHead;
  readonly lines: readonly string[];
}

/** `appended`: on disk and synced. `known`: these lines are already there (a resend). */
export interface AppendAnswer {
  readonly outcome: "appended" | "known";
  readonly head: LogHead;
}

export type ExportFormat = "chordae" | "graphml" | "vtp" | "tables" | "labels";

export interface ExportRequest {
  readonly specimen: string;
  readonly pass: string;
  readonly format: ExportFormat;
  /** Where to write; a folder for `tables`. Absent: the bytes come back (a zip for `tables`). */
  readonly path?: string;
}

/** Header beside exported bytes: what the format could not carry, as URI-encoded JSON (a list of sentences). */
export const LOST_HEADER = "x-tautline-lost";

export interface ExportAnswer {
  readonly written: readonly string[];
  readonly lost: readonly string[];
}

export type ServerEvent =
  | { readonly event: "job"; readonly job: JobState }
  | { readonly event: "shelf" } // something on the shelf changed
  | { readonly event: "studies" } // a study or an assignment changed
  | { readonly event: "pass"; readonly pass: string; readonly head: LogHead } // the journal grew
  | { readonly event: "beat" }; // every few seconds, so that a dead stream is noticed

export interface JobState {
  readonly id: string;
  readonly what: "intake" | "demo" | "demo-study" | "look" | "search" | "export" | "packets" | "take-in" | "return";
  readonly state: "running" | "done" | "failed" | "cancelled";
  /** 0-1 */
  readonly progress: number;
  /** What is being done now, in words. */
  readonly step: string;
  readonly bytesPerSecond: number | null;
  readonly secondsLeft: number | null;
  readonly result?: JobResult;
  readonly error?: { readonly tag: string; readonly message: string };
}

/** What a job made. */
export interface JobResult {
  /** The specimen of an intake, of the demo valve, or of an assignment or pass that was taken in. */
  readonly specimen?: string;
  /** The demo study. */
  readonly study?: string;
  /** Packets that were written. */
  readonly packets?: readonly MadePacket[];
  /** The packet that was taken in. */
  readonly taken?: TakenPacket;
}
