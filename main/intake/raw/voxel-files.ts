import { basename } from "node:path";
import { GzipPlanes, MOST_EXPANSION } from "#main/intake/gzip-planes.ts";
import { refuseHugeSlice } from "#main/intake/nrrd/nrrd-source.ts";
import { RawPlanes } from "#main/intake/raw-planes.ts";
import { fingerprintOf } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";

/** Voxels slice after slice in one file or in equal shares, plain or as one compressed stream a file. */
export interface VoxelFiles {
  /** The scan's own file, for messages. */
  readonly path: string;
  readonly header: ScanHeader;
  readonly littleEndian: boolean;
  /** `gzip`: a gzip stream; `zlib`: a zlib or a gzip stream. */
  readonly encoding: "raw" | "gzip" | "zlib";
  /**
   * In slice order, of equal numbers of slices. `offset`: byte where voxels or stream begin (`atEnd`: the voxels are the last bytes);
   * `skip`: bytes to drop after decompression.
   */
  readonly parts: readonly {
    readonly path: string;
    readonly size: number;
    readonly offset: number;
    readonly atEnd?: boolean;
    readonly skip?: number;
  }[];
}

/** A slice source over {@link VoxelFiles}; the sizes that the header declares are checked against the files first. @throws unreadable-input */
export function voxelFilesSource(files: VoxelFiles): SliceSource {
  const { path, header, encoding, parts } = files;
  const [nx, ny, nz] = header.size;
  const sliceVoxels = nx * ny;
  const slicesPerPart = nz / parts.length;
  const partBytes = sliceVoxels * slicesPerPart * BYTES_OF_DTYPE[header.dtype];
  refuseHugeSlice(path, sliceVoxels * BYTES_OF_DTYPE[header.dtype]);
  for (const part of parts) {
    const room = Math.max(0, part.atEnd ? part.size : part.size - part.offset);
    const raw = encoding === "raw";
    if ((raw ? room : room * MOST_EXPANSION) >= partBytes + (raw ? 0 : (part.skip ?? 0))) continue;
    const found = raw ? `${room} bytes` : `${room} compressed bytes, which cannot hold them`;
    const next = "The file was cut short or its header is wrong; copy it again from where it was made.";
    throw unreadable(basename(part.path), `${partBytes} bytes of voxels as the header says`, found, "voxels", next);
  }
  const shared = { slicesPerPart, dtype: header.dtype, littleEndian: files.littleEndian, sliceVoxels };
  const planes =
    encoding === "raw"
      ? new RawPlanes({
          ...shared,
          parts: parts.map((part) => ({ path: part.path, offset: part.atEnd ? part.size - partBytes : part.offset })),
        })
      : new GzipPlanes({
          ...shared,
          zlib: encoding === "zlib",
          parts: parts.map((part) => ({ path: part.path, offset: part.offset, skip: part.skip ?? 0 })),
        });
  const watched = [...new Set([path, ...parts.map((part) => part.path)])];
  return {
    name: basename(path),
    path,
    header,
    bytes: parts.reduce((sum, part) => sum + part.size, 0),
    seekable: encoding === "raw",
    bytesRead: () => planes.bytesRead(),
    readPlanes: (z0, z1, signal) => planes.read(z0, z1, signal),
    fingerprint: () => fingerprintOf(watched),
    close: async () => {
      if (planes instanceof RawPlanes) await planes.close();
    },
  };
}
