import type { Progress } from "#main/node/jobs.ts";
import type { Engine } from "#shared/api/engine.ts";
import type { ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type { IntakeRequest, LookRequest, ScanLookAnswer } from "#shared/api/routes.ts";
import type { SpecimenRecord, SpecimenVolume } from "#shared/api/specimen.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import type { LogRecord } from "#shared/log/records.ts";
import type { Turn } from "#shared/study/turn.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";

/** What a new specimen needs that no worker can know by itself. */
export interface SpecimenOrder {
  /** The library's folder. */
  readonly library: string;
  /** Fresh id of the specimen. */
  readonly id: string;
  /** UTC milliseconds. */
  readonly created: number;
}

/** A turned copy that grows in the folder `library` as in a library of its own; nothing in it tells the specimen. */
export interface TurnedScanOrder extends Pick<SpecimenOrder, "library" | "id"> {
  /** Folder of the scan's store. */
  readonly store: string;
  readonly volume: SpecimenVolume;
  readonly turn: Turn;
  readonly code: string;
  readonly polarity: Polarity;
  readonly synthetic: boolean;
}

export interface WorkHooks {
  readonly signal: AbortSignal;
  onProgress(progress: Progress): void;
}

/** An invented annotator's pass over the demo valve. */
export interface DemoPass {
  readonly annotator: string;
  readonly file: ChordaeFile;
}

/** An invented annotator's pass of the demo study as its log; the specimen goes by its name. */
export interface DemoStudyLog {
  readonly specimen: string;
  readonly annotator: string;
  readonly pass: number;
  /** A whole log, header first; its ids of pass and specimen mean nothing here. */
  readonly records: readonly LogRecord[];
}

/** What the entry points bring in from the engine's and the intake's folders. */
export interface Abilities {
  readonly engine: Engine;
  look(request: LookRequest): Promise<ScanLookAnswer>;
  /** Three projections of a scan and a sample of packing. */
  runProjections(request: ProjectionsRequest, hooks: WorkHooks): Promise<ProjectionsAnswer>;
  runIntake(order: SpecimenOrder & IntakeRequest, hooks: WorkHooks): Promise<{ readonly record: SpecimenRecord }>;
  /** Makes the demo valve's specimen. */
  runDemo(
    order: SpecimenOrder,
    hooks: WorkHooks,
  ): Promise<{ readonly record: SpecimenRecord; readonly passes: readonly DemoPass[] }>;
  /** Makes a specimen's turned copy for an assignment. */
  runTurned(order: TurnedScanOrder, hooks: WorkHooks): Promise<{ readonly record: SpecimenRecord }>;
  /** The demo valve's passes alone; its stored voxels have this hash. */
  runDemoPasses(sha256: string): Promise<readonly DemoPass[]>;
  /** Makes one of the demo study's small specimens, which goes by its name. */
  runDemoSpecimen(
    order: SpecimenOrder & { readonly name: string },
    hooks: WorkHooks,
  ): Promise<{ readonly record: SpecimenRecord }>;
  /** The logs of all passes of the demo study. */
  runDemoStudyLogs(hooks: Pick<WorkHooks, "signal">): Promise<readonly DemoStudyLog[]>;
  /** Writes trees as a label volume (NRRD, gzip) to a file that is not there yet; resolves once it is on the disk. */
  runLabels(file: ChordaeFile, path: string): Promise<void>;
  /** Asks the engine to let go of a specimen's store before its folder is removed. */
  forgetSpecimen?(specimen: string): Promise<void>;
}
