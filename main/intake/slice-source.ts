import type { RawScan } from "#shared/volume/raw/raw-layout.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";
import type { SourceArray } from "#shared/volume/source-array.ts";

/** Whole slices of a scan: `count` planes from `z` on, shape [count, ny, nx], x fastest, in the source's own type. */
export interface PlaneRun {
  readonly z: number;
  readonly count: number;
  /** Borrowed: valid until the next run is asked for. */
  readonly data: SourceArray;
}

/** A scan as a stream of slices; the one thing every reader gives and intake takes. */
export interface SliceSource {
  /** File or folder name without its path. */
  readonly name: string;
  /** Path for messages. */
  readonly path: string;
  readonly header: ScanHeader;
  /** Bytes on disk that hold the voxels. */
  readonly bytes: number;
  /** False: slices come cheaply only from the first one on (a compressed stream); every call starts the stream again. */
  readonly seekable: boolean;
  /** Bytes of voxel data read from disk so far. */
  bytesRead(): number;
  /**
   * Slices [z0, z1) in order. @throws unreadable-input when the data ends early or cannot be decoded; cancelled by `signal`.
   */
  readPlanes(z0: number, z1: number, signal?: AbortSignal): AsyncGenerator<PlaneRun, void, void>;
  /** Changes whenever the files behind the source change (names, sizes, times of change). */
  fingerprint(): Promise<string>;
  close(): Promise<void>;
}

/** What a person may have to choose before a scan has one grey value per voxel. */
export interface ScanChoice {
  /** From 0. */
  readonly channel?: number;
  /** From 0. */
  readonly time?: number;
  /** Where a choice is missing the first is taken: for a look, never for an intake. */
  readonly orFirst?: boolean;
  /** The file has no header: its voxels lie as said here. */
  readonly raw?: RawScan;
}

/** Turns big-endian bytes to little-endian ones in place (or back). */
export function swapBytes(bytes: Buffer, bytesPerVoxel: number): void {
  if (bytesPerVoxel === 2) bytes.swap16();
  else if (bytesPerVoxel === 4) bytes.swap32();
  else if (bytesPerVoxel === 8) bytes.swap64();
}

/** Slices a run may hold: some 8 MB, so that memory stays small and calls few. */
export function planesPerRun(planeBytes: number): number {
  return Math.max(1, Math.floor((8 * 1024 * 1024) / planeBytes));
}
