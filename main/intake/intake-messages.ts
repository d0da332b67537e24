import type { IntakeProgress } from "#main/intake/progress.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import type { ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type { IntakeRequest, ScanLookAnswer } from "#shared/api/routes.ts";
import type { SpecimenRecord, SpecimenVolume } from "#shared/api/specimen.ts";
import type { ErrorBody } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import type { LogRecord } from "#shared/log/records.ts";
import type { Turn } from "#shared/study/turn.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { RawScan } from "#shared/volume/raw/raw-layout.ts";

/** A scan to be taken in, with all that the worker cannot know by itself. */
export interface IntakeOrder extends Omit<IntakeRequest, "polarity"> {
  readonly library: string;
  /** Fresh id of the specimen. */
  readonly id: string;
  /** UTC milliseconds. */
  readonly created: number;
  /** Absent: as the values suggest. */
  readonly polarity?: Polarity;
  /** The file has no header: its voxels lie as said here. */
  readonly raw?: RawScan;
}

/** A finished intake. */
export interface IntakeOutcome {
  readonly record: SpecimenRecord;
  readonly bytesRead: number;
  readonly bytesWritten: number;
  readonly storeBytes: number;
  readonly plainBytes: number;
  readonly seconds: number;
}

/** A specimen's turned copy, for an assignment. */
export interface TurnedOrder {
  /** Folder of the scan's store. */
  readonly store: string;
  readonly volume: SpecimenVolume;
  readonly turn: Turn;
  /** Folder that the copy grows in as in a library of its own; it exists. */
  readonly library: string;
  /** Id and name of the copy. */
  readonly id: string;
  readonly code: string;
  readonly polarity: Polarity;
  readonly synthetic: boolean;
}

/** The demo valve to be made. */
export type DemoOrder = Pick<IntakeOrder, "library" | "id" | "created">;

/** The demo valve's specimen and its invented annotators' passes. */
export interface DemoOutcome extends IntakeOutcome {
  readonly passes: readonly { readonly annotator: string; readonly file: ChordaeFile }[];
}

/** One of the demo study's small specimens to be made. */
export interface DemoSpecimenOrder extends DemoOrder {
  readonly name: string;
}

/** A pass of the demo study as its log; the specimen goes by its name. */
export interface DemoStudyLog {
  readonly specimen: string;
  readonly annotator: string;
  readonly pass: number;
  readonly records: readonly LogRecord[];
}

/** What the worker is started for (its `workerData`). */
export type WorkerTask =
  | { readonly task: "intake"; readonly order: IntakeOrder }
  | { readonly task: "demo"; readonly order: DemoOrder }
  | { readonly task: "turn"; readonly order: TurnedOrder }
  | { readonly task: "demo-specimen"; readonly order: DemoSpecimenOrder }
  | { readonly task: "demo-study-logs" }
  | { readonly task: "demo-passes"; readonly sha256: string }
  | { readonly task: "labels"; readonly file: ChordaeFile; readonly path: string }
  | { readonly task: "look"; readonly path: string; readonly choice?: ScanChoice }
  | { readonly task: "project"; readonly request: ProjectionsRequest };

export type WorkerResult =
  | IntakeOutcome
  | DemoOutcome
  | DemoOutcome["passes"]
  | readonly DemoStudyLog[]
  | ScanLookAnswer
  | ProjectionsAnswer
  | { readonly bytes: number };

/** To the worker. */
export type WorkerRequest = { readonly stop: true };

/** From the worker; the last message is `done` or `failed`. */
export type WorkerMessage =
  | { readonly type: "progress"; readonly progress: IntakeProgress }
  | { readonly type: "done"; readonly result: WorkerResult }
  | { readonly type: "failed"; readonly error: ErrorBody };
