import type { ReadFile } from "#main/intake/read-file.ts";
import type { SourceDtype } from "#shared/volume/dtype.ts";

/** One slice's file, its header understood. */
export interface PictureSlice {
  readonly width: number;
  readonly height: number;
  readonly dtype: SourceDtype;
  /** Millimetres per pixel, and the header's own unit; null when it does not say. */
  readonly resolution: { readonly x: number; readonly y: number; readonly unit: string; readonly mmPerUnit: number } | null;
  readonly notes: readonly string[];
}

/** A kind of picture that slices may be: how its header is read, and its voxels. */
export interface PictureKind {
  readonly name: "TIFF" | "PNG" | "BMP";
  isOne(head: Uint8Array): boolean;
  /** @throws unreadable-input when it is not one picture of grey values, whole. */
  open(file: ReadFile): Promise<PictureSlice>;
  /** Fills `out` (little-endian, rows from the top) with the voxels of the same file. @throws unreadable-input */
  read(file: ReadFile, out: Uint8Array<ArrayBuffer>): Promise<void>;
}

/** A resolution that was written in pixels per metre. */
export function perMetre(resolution: { readonly x: number; readonly y: number } | null): PictureSlice["resolution"] {
  return resolution && { ...resolution, unit: "m", mmPerUnit: 1000 };
}
