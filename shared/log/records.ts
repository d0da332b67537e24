import type { Curve } from "#shared/trees/document.ts";
import type { Operation } from "#shared/trees/operations.ts";

/** Name in the header line of a pass's log. */
export const LOG_FORMAT = "tautline-pass-log";
/** Newest version of the log that this program writes and reads. */
export const LOG_VERSION = 1;

/** Body of line 0: names the pass, and an epoch that tells two logs of one pass apart. */
export interface LogHeader {
  readonly format: typeof LOG_FORMAT;
  readonly version: typeof LOG_VERSION;
  readonly pass: string;
  readonly specimen: string;
  readonly annotator: string;
  readonly number: number;
  readonly epoch: string;
}

/** A curve as the log writes it: JSON numbers, null radius = below resolution. */
export interface CurveBody {
  readonly id: Curve["id"];
  readonly points: readonly number[];
  readonly radii: readonly (number | null)[];
  readonly madeBy: Curve["madeBy"];
  readonly imageFit: number | null;
}

export type RecordBody =
  | { readonly kind: "header"; readonly body: LogHeader }
  /** An edit; `parent` of the record says which operation it follows. */
  | { readonly kind: "op"; readonly body: Operation }
  /** The history pointer moves to the operation with this seq; 0 = before the first edit. */
  | { readonly kind: "at"; readonly body: { readonly at: number; readonly how: "undo" | "redo" | "jump" } }
  | { readonly kind: "mark"; readonly body: { readonly name: string } }
  | { readonly kind: "curve"; readonly body: CurveBody }
  | { readonly kind: "session"; readonly body: { readonly state: "opened" | "closed" | "idle" } };

/**
 * One line of a pass's log. `seq` counts without gaps from 0 (the header); `parent` is the seq of the operation that this
 * one follows (0 = none); `prev` is the SHA-256 (hex) of the previous line's UTF-8 bytes without its newline, empty for the
 * header; `t` UTC milliseconds; `mono` milliseconds since the session opened. Order is always `seq`, never the clock.
 */
export type LogRecord = {
  readonly seq: number;
  readonly parent: number;
  readonly prev: string;
  readonly t: number;
  readonly mono: number;
  readonly session: string;
  readonly label: string;
} & RecordBody;

/** The end of a chain: the last line's seq and its SHA-256. */
export interface LogHead {
  readonly seq: number;
  readonly hash: string;
}
