import { basename, dirname, resolve } from "node:path";
import { GzipPlanes, MOST_EXPANSION } from "#main/intake/gzip-planes.ts";
import { RawPlanes } from "#main/intake/raw-planes.ts";
import { fingerprintOf, ReadFile } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { NRRD_HEADER_LIMIT, splitNrrdHeader } from "#shared/volume/nrrd/nrrd-fields.ts";
import { type NrrdHeader, parseNrrdHeader } from "#shared/volume/nrrd/nrrd-header.ts";

/** A slice source over an NRRD file, its voxels attached or in files of their own. @throws unreadable-input when it is not whole. */
export async function openNrrd(path: string): Promise<SliceSource> {
  const file = await ReadFile.open(path);
  try {
    const head = await file.readUpTo(0, NRRD_HEADER_LIMIT + 1);
    const split = splitNrrdHeader(head, basename(path));
    const header = parseNrrdHeader(split, basename(path));
    const names = header.data.files;
    const parts: { path: string; size: number; offset: number }[] = [];
    if (!names) parts.push({ path, size: file.size, offset: await skipLines(file, split.length, header.data.lineSkip) });
    for (const name of names ?? []) {
      const partPath = resolve(dirname(path), name);
      const part = await ReadFile.open(partPath);
      try {
        parts.push({ path: partPath, size: part.size, offset: await skipLines(part, 0, header.data.lineSkip) });
      } finally {
        await part.close();
      }
    }
    return sourceOver(path, header, parts);
  } finally {
    await file.close();
  }
}

function sourceOver(
  path: string,
  header: NrrdHeader,
  parts: readonly { path: string; size: number; offset: number }[],
): SliceSource {
  const { scan, data } = header;
  const [nx, ny, nz] = scan.size;
  const sliceVoxels = nx * ny;
  const slicesPerPart = nz / parts.length;
  const partBytes = sliceVoxels * slicesPerPart * BYTES_OF_DTYPE[scan.dtype];
  refuseHugeSlice(path, sliceVoxels * BYTES_OF_DTYPE[scan.dtype]);
  const shared = { slicesPerPart, dtype: scan.dtype, littleEndian: data.littleEndian, sliceVoxels };
  const skip = Math.max(0, data.byteSkip);
  for (const part of parts) {
    const room = part.size - part.offset - (data.encoding === "raw" ? skip : 0);
    const most = data.encoding === "raw" ? room : room * MOST_EXPANSION;
    if (most < partBytes) {
      const found = data.encoding === "raw" ? `${Math.max(0, room)} bytes` : `${room} compressed bytes, which cannot hold them`;
      throw unreadable(
        basename(part.path),
        `${partBytes} bytes of voxels as the header says`,
        found,
        "after the header",
        CUT_SHORT,
      );
    }
  }
  const planes =
    data.encoding === "raw"
      ? new RawPlanes({
          ...shared,
          parts: parts.map((part) => ({
            path: part.path,
            offset: data.byteSkip === -1 ? part.size - partBytes : part.offset + skip,
          })),
        })
      : new GzipPlanes({ ...shared, parts: parts.map((part) => ({ path: part.path, offset: part.offset, skip })) });
  const files = [...new Set([path, ...parts.map((part) => part.path)])];
  return {
    name: basename(path),
    path,
    header: scan,
    bytes: parts.reduce((sum, part) => sum + part.size, 0),
    seekable: data.encoding === "raw",
    bytesRead: () => planes.bytesRead(),
    readPlanes: (z0, z1, signal) => planes.read(z0, z1, signal),
    fingerprint: () => fingerprintOf(files),
    close: async () => {
      if (planes instanceof RawPlanes) await planes.close();
    },
  };
}

const CUT_SHORT = "The file was cut short or its header is wrong; copy it again from where it was made.";
const MOST_SLICE_BYTES = 1024 ** 3;

/** Refuses slices no reader could hold. @throws unreadable-input */
export function refuseHugeSlice(path: string, bytes: number): void {
  if (bytes > MOST_SLICE_BYTES)
    throw unreadable(basename(path), `slices of at most ${MOST_SLICE_BYTES} bytes`, `${bytes} bytes a slice`, "size");
}

/** Byte after `lines` line ends from `from` on. */
async function skipLines(file: ReadFile, from: number, lines: number): Promise<number> {
  let at = from;
  let left = lines;
  while (left > 0) {
    const bytes = await file.readUpTo(at, 64 * 1024);
    if (bytes.length === 0) throw unreadable(basename(file.path), `${lines} lines to skip`, `${lines - left}`, "line skip");
    for (let i = 0; i < bytes.length && left > 0; i++) {
      at++;
      if (bytes[i] === 10) left--;
    }
  }
  return at;
}
