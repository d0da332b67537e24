import type { StudyFile } from "#shared/agreement/study/study.ts";
import type { PassState } from "#shared/api/specimen.ts";
import type { DrawingRules, ProtocolContent, ProtocolVersion } from "#shared/study/protocol.ts";
import type { ProtocolTouch } from "#shared/study/protocol-change.ts";
import type { ReturnedPass, StudyAnnotator, StudyEvent } from "#shared/study/study-record.ts";

// What the study routes carry. The lead's window gets names and states but no turns and no seed; the annotator's window gets
// codes alone. Every long act is a job: its end comes as a `job` event, what it made in the job's result.

/** `createStudy`: specimens (ids of this library), annotators' names, passes each. The training specimens are not among the others. */
export interface StudyDraft {
  readonly name: string;
  readonly specimens: readonly string[];
  readonly training: readonly string[];
  readonly annotators: readonly string[];
  /** 1 to 9. */
  readonly passes: number;
}

/**
 * `changeStudy`: whole new lists. Once assignments are drawn (with the first freeze) specimens, annotators and passes can be
 * added; what is drawn already stays, and taking something away is refused once its packet is out.
 */
export type StudyPatch = Partial<StudyDraft>;

/** `studies`: the shelf's rows. */
export interface StudiesAnswer {
  /** Studies this library leads. */
  readonly studies: readonly StudySummary[];
  /** Assignments this library has taken in, to be worked on here. */
  readonly assignments: readonly AssignmentSummary[];
  /** Files that could not be read, one sentence each. */
  readonly problems: readonly string[];
}

export interface StudySummary {
  readonly id: string;
  readonly name: string;
  readonly created: number;
  readonly specimens: number;
  readonly annotators: number;
  readonly protocol: { readonly version: number; readonly frozen: boolean };
  /** Of the passes that count (training left out). */
  readonly counts: { readonly planned: number; readonly out: number; readonly returned: number };
}

/** An assignment in an annotator's library, as the shelf lists it: its scan stands there under the code. */
export interface AssignmentSummary {
  /** The specimen's id in this library; also the assignment's. */
  readonly specimen: string;
  readonly code: string;
  /** The pass to work on. Empty of edits when taken in. */
  readonly pass: string;
  /** `returned`: handed back; not on the shelf, and not to be opened until it is reopened. */
  readonly state: "under-way" | "returned";
  readonly passState: PassState;
  readonly taken: number;
}

/** `assignment`: what the annotator's desk may show of the assignment: the rules, and nothing that tells which valve it is. */
export interface AssignmentView extends AssignmentSummary {
  readonly training: boolean;
  readonly rules: DrawingRules;
  readonly protocolVersion: number;
  /** Fingerprint of the lead's key when the packet was signed. */
  readonly from: string | null;
  /** Ends of kind `open`: a return with any of these is refused unless the lead allows it. */
  readonly openEnds: readonly OpenEnd[];
  readonly returned: { readonly at: number; readonly files: readonly string[] } | null;
}

/** An unfinished end, named so that it can be found. */
export interface OpenEnd {
  readonly tree: string;
  readonly treeName: string;
  readonly node: string;
}

/** `study`, and the answer of every change: all that the lead's screen shows. */
export interface StudyView {
  readonly id: string;
  readonly name: string;
  readonly created: number;
  readonly specimens: readonly {
    readonly id: string;
    readonly name: string;
    readonly training: boolean;
    /** Sentence when the scan is missing from the library or is another one; else null. */
    readonly problem: string | null;
  }[];
  readonly annotators: readonly StudyAnnotator[];
  readonly passes: number;
  readonly protocol: ProtocolVersion & {
    /** What keeps it from being frozen; empty when nothing does. */
    readonly missing: readonly string[];
    readonly remarks: readonly string[];
    /** Of an unfrozen version after the first: what it changes against the last frozen one, and what that touches. */
    readonly touches: readonly ProtocolTouch[];
  };
  /** Earlier and current versions, oldest first. */
  readonly versions: readonly {
    readonly version: number;
    readonly frozen: ProtocolVersion["frozen"];
    readonly reason: string;
    readonly touches: readonly ProtocolTouch[];
  }[];
  readonly assignments: readonly AssignmentCell[];
  readonly events: readonly StudyEvent[];
}

/** One cell of the grid specimens x annotators x passes. */
export interface AssignmentCell {
  readonly id: string;
  readonly code: string;
  readonly annotator: string;
  readonly specimen: string;
  readonly pass: number;
  readonly training: boolean;
  /** Place in the annotator's order, from 1. */
  readonly place: number;
  readonly state: "planned" | "out" | "returned";
  readonly out: { readonly at: number; readonly protocolVersion: number } | null;
  readonly returned: ReturnedPass | null;
  readonly setAside: readonly { readonly pass: string; readonly reason: string; readonly setAsideAt: number }[];
  /** UTC milliseconds from which its packet may go out (days after the pass before); null = no earlier pass to wait for. */
  readonly earliest: number | null;
  /** Sentence when its packet cannot be made now; null when it can. */
  readonly why: string | null;
  /** The sentence above is about days between repeats alone: `makePackets` with `waiveWashout` goes ahead and notes it. */
  readonly waivable: boolean;
  /** The pass takes part in the analysis as things stand; else the reason. Null while there is no pass. */
  readonly counts: { readonly yes: boolean; readonly reason: string | null } | null;
}

/** `changeProtocol`: the whole content; refused when the current version is frozen (revise it first). */
export interface ProtocolRequest {
  readonly content: ProtocolContent;
}

/** `reviseProtocol`: opens the next version, a copy of the frozen one. */
export interface ReviseRequest {
  readonly reason: string;
}

/** Folder of files, or one zip file; both are BagIt bags. */
export type PacketForm = "folder" | "zip";

/** `makePackets` -> {job}; the job's result holds `packets`. */
export interface PacketRequest {
  /** Ids of assignments. */
  readonly assignments: readonly string[];
  /** An existing folder; packets are named after the codes, and a name that is taken is refused. */
  readonly folder: string;
  readonly form: PacketForm;
  /** `within`: one packet with rules and turned scan. `apart`: the scan in a packet of its own. `without`: the annotator has it. */
  readonly scan: "within" | "apart" | "without";
  readonly sign: boolean;
  /** Send although the days between repeats have not passed; noted among the study's events. */
  readonly waiveWashout?: boolean;
}

/** A packet that was written. */
export interface MadePacket {
  readonly path: string;
  readonly kind: PacketKind;
  readonly code: string;
  readonly bytes: number;
}

export type PacketKind = "assignment" | "scan" | "return";

/** `lookAtPacket`: what a packet says it is, before its bytes are verified. */
export interface PacketLook {
  readonly kind: PacketKind;
  readonly code: string;
  readonly study: string;
  /** Null for a scan. */
  readonly protocolVersion: number | null;
  readonly files: number;
  readonly bytes: number;
  readonly fingerprint: string | null;
  /** What taking in would do, one sentence. */
  readonly meaning: string;
  /** Sentence when taking in would be refused as things stand; else null. */
  readonly refusal: string | null;
}

/** `takeInPacket` -> {job}; the job's result holds `taken`. Everything is verified first; nothing is ever overwritten. */
export interface TakeInRequest {
  readonly path: string;
  /** The lead takes a pass with `open` ends; noted among the study's events. */
  readonly allowOpenEnds?: boolean;
}

export interface TakenPacket {
  readonly kind: PacketKind;
  readonly code: string;
  /** `known`: the very same packet had been taken in before; nothing was changed. */
  readonly outcome: "taken" | "known";
  /** The study of a return, the specimen of an assignment or scan. */
  readonly study: string | null;
  readonly specimen: string;
  readonly pass: string | null;
  readonly fingerprint: string | null;
  /** Things to know, one sentence each. */
  readonly notes: readonly string[];
}

/** `makeReturn` -> {job}; the job's result holds `packets`. The pass is finished and sealed by it. */
export interface ReturnRequest {
  /** An existing folder; the packet is named after the code. */
  readonly folder: string;
  readonly form: PacketForm;
  readonly sign: boolean;
}

/** `setAsidePass`: takes a returned pass out of the analysis, so that the annotator's next return can be taken in. */
export interface SetAsideRequest {
  readonly reason: string;
}

/** `signature`: this library's public key, as people compare it. */
export interface SignatureAnswer {
  /** SHA-256 of the public key, groups of four hex digits. */
  readonly fingerprint: string;
}

/** `studyAnalysis`: whether the numbers may be made, and from what. */
export interface AnalysisAnswer {
  /** Sentence when analysis is refused (no frozen protocol, fewer than two passes ...); null when it can be made. */
  readonly refusal: string | null;
  readonly protocol: { readonly version: number; readonly sha256: string } | null;
  readonly passes: readonly {
    readonly assignment: string;
    readonly annotator: string;
    readonly specimen: string;
    readonly specimenName: string;
    readonly pass: number;
    readonly effort: ReturnedPass["effort"];
    readonly drawn: ReturnedPass["drawn"];
  }[];
  /** Returned passes that take no part, with the reason. */
  readonly leftOut: readonly { readonly assignment: string; readonly reason: string }[];
  /** Cells without a pass yet. */
  readonly awaited: number;
  readonly notes: readonly string[];
}

/** `studyPasses`: the passes of the analysis as tree files in the true frame, the same that `exportPasses` writes. */
export interface StudyPassesAnswer {
  readonly files: readonly StudyFile[];
}

/** `exportPasses`: the passes of the analysis as tree files in the true frame, for `tautline agree`. */
export interface ExportPassesRequest {
  readonly folder: string;
}
