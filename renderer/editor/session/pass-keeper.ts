import type { ReadonlySignal } from "@preact/signals";
import type { HistoryEntry } from "#shared/log/history.ts";
import type { LoggedOperation } from "#shared/log/history-tree.ts";
import type { Curve, TreeDocument } from "#shared/trees/document.ts";
import type { IdSource } from "#shared/trees/ids.ts";
import type { Operation } from "#shared/trees/operations.ts";

/** How safe the edits are: what the head line says. */
export type SavedState =
  /** Everything is on disk; `at` = UTC milliseconds of the last answer, null = nothing was to be saved since opening. */
  | { readonly kind: "saved"; readonly at: number | null }
  | { readonly kind: "saving"; readonly records: number }
  /** Kept in this browser, waiting for the server. */
  | { readonly kind: "waiting"; readonly records: number }
  /** The journal refuses them; the message says why. */
  | { readonly kind: "stuck"; readonly records: number; readonly message: string };

/** The history of the open pass, kept: what the editor needs of storage. Changes take effect in memory at once. */
export interface PassKeeper {
  readonly document: TreeDocument;
  readonly pointer: number;
  readonly canUndo: boolean;
  readonly canRedo: boolean;
  readonly edits: number;
  readonly readOnly: boolean;
  readonly saved: ReadonlySignal<SavedState>;
  ids(): IdSource;
  entries(): readonly HistoryEntry[];
  /** Edits of the current path, from the first to the newest. */
  path(): readonly LoggedOperation[];
  commit(operation: Operation, label: string, curves: readonly Curve[]): Promise<void>;
  undo(): Promise<void>;
  redo(): Promise<void>;
  jump(seq: number): Promise<void>;
  mark(name: string): Promise<void>;
  /** Calls `listener` whenever the history changed, also by lines that came from the journal. */
  onChange(listener: () => void): () => void;
  /** Resolves when every edit made so far is on disk, or cannot be for now. */
  settled(): Promise<void>;
  close(): Promise<void>;
}
