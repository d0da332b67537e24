/**
 * Places in the code where the process may be killed and everything acknowledged must still be there after restart. Tests
 * stop at every one of them over a port that throws unsynced bytes away.
 */
export const CRASH_POINTS = [
  "whole-file:before-write",
  "whole-file:after-write",
  "whole-file:after-sync",
  "whole-file:after-rename",
  "whole-file:after-folder-sync",
  "journal:before-append",
  "journal:after-append",
  "journal:after-sync",
  "journal:after-create",
  "journal:before-tail-drop",
  "journal:after-tail-drop",
  "pass:after-folder",
  "removal:after-rename",
] as const;

/** The same on the way of packets, out and in. */
export const PACKET_CRASH_POINTS = [
  "packet:before-rename",
  "take-in:after-scan-files",
  "take-in:after-scan",
  "take-in:after-pictures",
  "take-in:after-own-pass",
  "take-in:after-evidence",
  "take-in:after-returned-pass",
] as const;
export type CrashPoint = (typeof CRASH_POINTS)[number] | (typeof PACKET_CRASH_POINTS)[number];

/** A file held open for appending by the process that owns it. */
export interface AppendFile {
  /** Writes at the end; the bytes are not safe until {@link sync} resolves. A failure may leave part of them. */
  append(bytes: Uint8Array): Promise<void>;
  /** Resolves once all bytes are on the disk. */
  sync(): Promise<void>;
  /** Cuts the file to `size` bytes; not safe until {@link sync} resolves. */
  truncate(size: number): Promise<void>;
  close(): Promise<void>;
}

/** What a name on the disk stands for, links not followed. */
export interface FileFacts {
  readonly kind: "file" | "folder" | "link" | "other";
  readonly bytes: number;
}

export interface FolderEntry {
  readonly name: string;
  readonly folder: boolean;
}

/** Every access of library and journal to the disk. Failures are the system's own errors (`code`, `path`). */
export interface FilePort {
  /** Bytes of a file from `start` to `end` (excluded); undefined when there is no such file. */
  read(path: string, start?: number, end?: number): Promise<Uint8Array | undefined>;
  /** What `path` is; undefined when there is nothing. */
  facts(path: string): Promise<FileFacts | undefined>;
  /** Entries of a folder; undefined when there is no such folder. */
  list(folder: string): Promise<FolderEntry[] | undefined>;
  /** Makes a folder and those above it, durably. */
  makeFolder(folder: string): Promise<void>;
  /**
   * Creates a file that must not exist yet; not safe until synced, neither its bytes nor its name. `secret`: only the person
   * who runs the program may read it, where the system knows of such things.
   */
  create(path: string, bytes: Uint8Array, secret?: boolean): Promise<void>;
  syncFile(path: string): Promise<void>;
  /** Makes creations, renames and removals in a folder durable. */
  syncFolder(folder: string): Promise<void>;
  /** Replaces `to`; bounded retries where another program holds the file for a moment. */
  rename(from: string, to: string): Promise<void>;
  /** Removes a file or a folder with all in it; no error when there is none. */
  remove(path: string): Promise<void>;
  openAppend(path: string): Promise<AppendFile>;
  /** Bytes free on the disk that holds `path`. */
  freeBytes(path: string): Promise<number>;
  /** Called at each named crash point; does nothing outside tests. */
  reach(point: CrashPoint): void;
}
