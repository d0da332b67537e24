import type { Polarity } from "#shared/tracing/strand-request.ts";

/** Which of several channels and time points of a scan is meant, from 0; absent: it has one. */
export interface ReadingChoice {
  readonly channel?: number;
  readonly time?: number;
}

export interface ProjectionsRequest extends ReadingChoice {
  readonly path: string;
  /** Dark strings are shown by minima instead of maxima. */
  readonly polarity: Polarity;
}

/** A grey picture, rows from the top. */
export interface ProjectionPicture {
  readonly width: number;
  readonly height: number;
  /** uint8, shape [height, width], base64. */
  readonly data: string;
}

/** A scan seen along its three axes; each picture covers the whole scan, edge to edge. */
export interface ProjectionsAnswer {
  /** x to the right, y downwards. */
  readonly alongZ: ProjectionPicture;
  /** x to the right, z downwards. */
  readonly alongY: ProjectionPicture;
  /** y to the right, z downwards. */
  readonly alongX: ProjectionPicture;
  /** Slices that were looked at, of how many; fewer for large scans, evenly spread. */
  readonly slices: number;
  readonly of: number;
  /** What a packed store would cost, measured on a sample; null where it cannot be told. */
  readonly packing: PackingSample | null;
}

/** What packing the voxels gains and costs, measured on bricks of the scan on this computer. */
export interface PackingSample {
  /** Packed bytes over plain bytes. */
  readonly ratio: number;
  /** Milliseconds of one core to unpack one brick of the store. */
  readonly unpackMs: number;
  /** Plain bytes packed in one second of one core. */
  readonly packedBytesPerSecond: number;
  readonly bricks: number;
}
