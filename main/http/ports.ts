import type { Engine } from "#shared/api/engine.ts";
import type { OverlookedAnswer, OverlookedRequest, SearchRequest } from "#shared/api/overlooked.ts";
import type { ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type {
  AppendAnswer,
  AppendRequest,
  ExportAnswer,
  ExportRequest,
  FolderAnswer,
  HelloAnswer,
  IntakeRequest,
  JobState,
  LogAnswer,
  LookRequest,
  ScanLookAnswer,
  ServerEvent,
  ShelfAnswer,
  SpecimenPatch,
} from "#shared/api/routes.ts";
import type { PassState, PassSummary, SpecimenRecord } from "#shared/api/specimen.ts";
import type {
  AnalysisAnswer,
  AssignmentView,
  ExportPassesRequest,
  PacketLook,
  PacketRequest,
  ProtocolRequest,
  ReturnRequest,
  ReviseRequest,
  SetAsideRequest,
  SignatureAnswer,
  StudiesAnswer,
  StudyDraft,
  StudyPassesAnswer,
  StudyPatch,
  StudyView,
  TakeInRequest,
} from "#shared/api/study.ts";

/** Specimens and passes on disk. Errors are tagged (`shared/errors.ts`). */
export interface LibraryPort {
  shelf(): Promise<ShelfAnswer>;
  specimen(id: string): Promise<SpecimenRecord>;
  changeSpecimen(id: string, patch: SpecimenPatch): Promise<SpecimenRecord>;
  removeSpecimen(id: string, force: boolean): Promise<void>;
  createPass(specimen: string, annotator: string): Promise<PassSummary>;
  readLog(specimen: string, pass: string, from: number): Promise<LogAnswer>;
  /** Resolves once the lines are on disk and synced. */
  appendLog(specimen: string, pass: string, request: AppendRequest): Promise<AppendAnswer>;
  keepBranch(specimen: string, pass: string, lines: readonly string[], name: string): Promise<PassSummary>;
  rebuildLog(specimen: string, pass: string, lines: readonly string[]): Promise<AppendAnswer>;
  claimPass(specimen: string, pass: string, window: string): Promise<boolean>;
  releasePass(specimen: string, pass: string, window: string): Promise<void>;
  setPassState(specimen: string, pass: string, state: PassState): Promise<PassSummary>;
}

/** Studies that this library leads. */
export interface StudyPort {
  studies(): Promise<StudiesAnswer>;
  create(draft: StudyDraft): Promise<StudyView>;
  study(study: string): Promise<StudyView>;
  change(study: string, patch: StudyPatch): Promise<StudyView>;
  remove(study: string): Promise<void>;
  changeProtocol(study: string, request: ProtocolRequest): Promise<StudyView>;
  freezeProtocol(study: string): Promise<StudyView>;
  reviseProtocol(study: string, request: ReviseRequest): Promise<StudyView>;
  /** Keeps a PNG without the texts in it; its name is the SHA-256 of what is kept. */
  addPicture(study: string, bytes: Uint8Array): Promise<{ picture: string }>;
  picture(study: string, picture: string): Promise<Uint8Array>;
  makePackets(study: string, request: PacketRequest): Promise<{ job: string }>;
  setAside(study: string, assignment: string, request: SetAsideRequest): Promise<StudyView>;
  analysis(study: string): Promise<AnalysisAnswer>;
  passes(study: string): Promise<StudyPassesAnswer>;
  exportPasses(study: string, request: ExportPassesRequest): Promise<ExportAnswer>;
}

/** Packets in, and the assignments that this library has taken in. */
export interface PacketPort {
  look(path: string): Promise<PacketLook>;
  takeIn(request: TakeInRequest): Promise<{ job: string }>;
  signature(): Promise<SignatureAnswer>;
  assignment(specimen: string): Promise<AssignmentView>;
  assignmentPicture(specimen: string, picture: string): Promise<Uint8Array>;
  makeReturn(specimen: string, request: ReturnRequest): Promise<{ job: string }>;
  reopen(specimen: string): Promise<AssignmentView>;
}

/** Long work with progress and cancel; states go out as events. */
export interface JobsPort {
  startIntake(request: IntakeRequest): Promise<{ job: string }>;
  openDemo(): Promise<{ job: string }>;
  openDemoStudy(): Promise<{ job: string }>;
  cancel(job: string): Promise<void>;
  jobs(): readonly JobState[];
}

/** The search for strings that no strand explains. */
export interface SearchPort {
  /** Begins the search of a scan, or goes on with it; the job that runs already when one does. */
  start(specimen: string, request: SearchRequest): Promise<{ job: string }>;
  overlooked(request: OverlookedRequest): Promise<OverlookedAnswer>;
}

export interface ScansPort {
  look(request: LookRequest): Promise<ScanLookAnswer>;
  startProjections(request: ProjectionsRequest): Promise<{ job: string }>;
  /** Of a job that is done. @throws not-found */
  projections(job: string): Promise<ProjectionsAnswer>;
}

export interface FoldersPort {
  list(path: string | undefined): Promise<FolderAnswer>;
}

export interface ExportPort {
  /** Writes to the request's path, or gives the bytes when it has none. */
  exportTrees(
    request: ExportRequest,
  ): Promise<ExportAnswer | { name: string; type: string; bytes: Uint8Array; lost: readonly string[] }>;
}

export interface EventsPort {
  /** Calls `listener` for each event until the returned function is called. */
  subscribe(listener: (event: ServerEvent) => void): () => void;
}

/** Files of the built page, by path under the build root; undefined when there is none. */
export interface PagePort {
  read(path: string): Promise<{ bytes: Uint8Array; type: string } | undefined>;
}

/** All abilities the request handler has; it knows neither Node nor Electron. */
export interface Ports {
  readonly hello: () => HelloAnswer;
  readonly library: LibraryPort;
  readonly engine: Engine;
  readonly jobs: JobsPort;
  readonly search: SearchPort;
  readonly scans: ScansPort;
  readonly folders: FoldersPort;
  readonly exports: ExportPort;
  readonly studies: StudyPort;
  readonly packets: PacketPort;
  readonly events: EventsPort;
  readonly page: PagePort;
  /** An event stream of this window was opened (`seen`) or has ended (`left`); a window is open as long as it has one. */
  readonly windows: { seen(window: string): void; left(window: string): void };
}
