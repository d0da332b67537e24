import type { PassEffort } from "#shared/log/pass-effort.ts";
import type { ProtocolVersion } from "#shared/study/protocol.ts";
import type { Turn } from "#shared/study/turn.ts";

/** Name in `studies/<id>/study.json`. */
export const STUDY_FORMAT = "tautline-study";
/** Newest version of the study file that this program writes and reads. */
export const STUDY_VERSION = 1;

/** A specimen's part in a study. */
export interface StudySpecimenEntry {
  /** The specimen's id in this library. */
  readonly id: string;
  readonly name: string;
  /** Of the training round: everyone does it first and once, and it does not count. */
  readonly training: boolean;
  /** SHA-256 of the stored voxels when the specimen was put in; another scan under the same id is refused. */
  readonly sha256: string;
}

export interface StudyAnnotator {
  readonly name: string;
  /** Fingerprint of the key that signed this annotator's first signed return; null = none yet. */
  readonly fingerprint: string | null;
}

/** A pass that came back, and what is known of it. */
export interface ReturnedPass {
  /** UTC milliseconds of taking in, by this library's clock. */
  readonly at: number;
  /** The pass under its specimen, in the true frame. */
  readonly pass: string;
  /** Head of the log as the annotator handed it over. */
  readonly head: { readonly seq: number; readonly hash: string };
  /** Protocol version it was drawn under. */
  readonly protocolVersion: number;
  readonly trees: number;
  readonly openEnds: number;
  readonly doubts: number;
  /** From the log, by the annotator's own clock. */
  readonly effort: PassEffort;
  /** UTC milliseconds of the first and last edit, by the annotator's own clock; null without edits. */
  readonly drawn: { readonly from: number; readonly to: number } | null;
  /** Fingerprint of the key that signed the packet; null = unsigned. */
  readonly fingerprint: string | null;
}

/** One annotator's one go at one specimen, and where it stands. */
export interface Assignment {
  /** Opaque, from the study's seed; also the specimen's id in the annotator's library. */
  readonly id: string;
  /** What the annotator sees instead of a name. */
  readonly code: string;
  readonly annotator: string;
  readonly specimen: string;
  /** The annotator's how-many-th pass over this specimen, from 1. */
  readonly pass: number;
  readonly training: boolean;
  /** Place in the annotator's order, from 1; training first. */
  readonly place: number;
  /** How the annotator sees the specimen. Kept by the lead alone. */
  readonly turn: Turn;
  /** The packet that went out last; null = none yet. */
  readonly out: { readonly at: number; readonly protocolVersion: number; readonly protocolSha256: string } | null;
  readonly returned: ReturnedPass | null;
  /** Returned passes that the lead set aside; they stay in the library and take no part in the analysis. */
  readonly setAside: readonly (ReturnedPass & { readonly reason: string; readonly setAsideAt: number })[];
}

/** Something that was done to a study; the list only grows. */
export interface StudyEvent {
  /** UTC milliseconds, by this library's clock. */
  readonly at: number;
  readonly what:
    | "made"
    | "changed"
    | "protocol-frozen"
    | "protocol-revised"
    | "drawn"
    | "packet-made"
    | "pass-taken-in"
    | "open-ends-allowed"
    | "washout-waived"
    | "set-aside";
  /** One sentence. */
  readonly text: string;
}

/** `studies/<id>/study.json`: everything the lead keeps, the key to all codes and turns included. */
export interface StudyRecord {
  readonly format: typeof STUDY_FORMAT;
  readonly version: typeof STUDY_VERSION;
  readonly id: string;
  readonly name: string;
  /** UTC milliseconds. */
  readonly created: number;
  /** 64 hex digits from a secure source; codes, turns and orders follow from it. Never leaves this library. */
  readonly seed: string;
  readonly specimens: readonly StudySpecimenEntry[];
  readonly annotators: readonly StudyAnnotator[];
  /** Passes of each annotator over each specimen outside the training round. */
  readonly passes: number;
  /** Oldest first; only the last may be unfrozen. */
  readonly protocols: readonly ProtocolVersion[];
  readonly assignments: readonly Assignment[];
  readonly events: readonly StudyEvent[];
}
