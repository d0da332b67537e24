import { basename, join } from "node:path";
import { refuseHugeSlice } from "#main/intake/nrrd/nrrd-source.ts";
import { fingerprintOf, ReadFile, stopIfAborted } from "#main/intake/read-file.ts";
import { BMP_SLICE } from "#main/intake/slice-folder/bmp-slice.ts";
import type { PictureKind, PictureSlice } from "#main/intake/slice-folder/picture-slice.ts";
import { PNG_SLICE } from "#main/intake/slice-folder/png-slice.ts";
import { TIFF_SLICE } from "#main/intake/slice-folder/tiff-slice.ts";
import type { PlaneRun, SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { PLACELESS, type ScanHeader } from "#shared/volume/scan-header.ts";
import { orderSliceNames } from "#shared/volume/slice-names/order-slices.ts";
import { viewAs } from "#shared/volume/source-array.ts";

/** Kinds of pictures that slices may be. */
export const PICTURE_KINDS: readonly PictureKind[] = [TIFF_SLICE, PNG_SLICE, BMP_SLICE];

/**
 * A slice source over pictures of one kind in a folder, one a slice, in the natural order of their names.
 * @param names the pictures among the folder's files. @throws unreadable-input, naming a gap in the numbering or the slice that differs.
 */
export async function openSliceFolder(folder: string, kind: PictureKind, names: readonly string[]): Promise<SliceSource> {
  if (names.length < 2)
    throw unreadable(basename(folder), "a folder of many slices", `one ${kind.name} file`, undefined, "Choose the file itself.");
  const ordered = orderSliceNames(names, basename(folder));
  const paths = ordered.names.map((name) => join(folder, name));
  let first: PictureSlice | undefined;
  let bytes = 0;
  for (const path of paths) {
    const { slice, size } = await openSlice(path, kind);
    first ??= slice;
    bytes += size;
    if (inWords(slice) !== inWords(first))
      throw unreadable(
        basename(path),
        `${inWords(first)} as in ${ordered.names[0]}`,
        inWords(slice),
        undefined,
        "Move what is no slice to another folder.",
      );
  }
  const planeBytes = first!.width * first!.height * BYTES_OF_DTYPE[first!.dtype];
  refuseHugeSlice(paths[0]!, planeBytes);
  const counter = { bytes: 0 };
  return {
    name: basename(folder),
    path: folder,
    header: headerOf(kind, first!, paths.length, ordered.notes),
    bytes,
    seekable: true,
    bytesRead: () => counter.bytes,
    readPlanes: (z0, z1, signal) => readSlices(paths, kind, first!, counter, z0, z1, signal),
    fingerprint: () => fingerprintOf(paths),
    close: async () => {},
  };
}

async function openSlice(path: string, kind: PictureKind): Promise<{ slice: PictureSlice; size: number }> {
  const file = await ReadFile.open(path);
  try {
    return { slice: await kind.open(file), size: file.size };
  } finally {
    await file.close();
  }
}

/** Slices in order; the next one is unpacked while the last one is worked on. */
async function* readSlices(
  paths: readonly string[],
  kind: PictureKind,
  like: PictureSlice,
  counter: { bytes: number },
  z0: number,
  z1: number,
  signal: AbortSignal | undefined,
): AsyncGenerator<PlaneRun, void, void> {
  const voxels = like.width * like.height;
  const buffers = [0, 1].map(() => new ArrayBuffer(voxels * BYTES_OF_DTYPE[like.dtype]));
  const fetchSlice = async (z: number) => {
    const file = await ReadFile.open(paths[z]!);
    try {
      const now = await kind.open(file);
      if (inWords(now) !== inWords(like)) throw unreadable(basename(paths[z]!), `${inWords(like)} as before`, inWords(now));
      await kind.read(file, new Uint8Array(buffers[z % 2]!));
    } finally {
      counter.bytes += file.bytesRead;
      await file.close();
    }
  };
  let coming: Promise<void> | undefined;
  try {
    for (let z = z0; z < z1; z++) {
      stopIfAborted(signal, "reading the scan");
      await (coming ?? fetchSlice(z));
      coming = z + 1 < z1 ? fetchSlice(z + 1) : undefined;
      coming?.catch(() => {}); // awaited in the next turn or in the finally; never an unhandled rejection in between
      yield { z, count: 1, data: viewAs(like.dtype, buffers[z % 2]!, 0, voxels) };
    }
  } finally {
    await coming?.catch(() => {});
  }
}

/** Pictures say nothing of the distance of slices, so the voxel size is never complete. */
function headerOf(kind: PictureKind, first: PictureSlice, slices: number, notes: readonly string[]): ScanHeader {
  const common = {
    ...PLACELESS,
    family: `${kind.name} slices`,
    dtype: first.dtype,
    size: sizeXyz(first.width, first.height, slices),
    notes: [...notes, ...first.notes],
  } as const;
  if (!first.resolution) return common;
  const { x, y, unit, mmPerUnit: f } = first.resolution;
  const size = `${Number(x.toPrecision(6))} x ${Number(y.toPrecision(6))} mm`;
  const spacingRemark = `The header gives ${size} within a slice, and no distance between slices.`;
  return { ...common, unit, mmPerUnit: [f, f, f], originMmPerUnit: [f, f, f], spacingRemark };
}

function inWords(slice: PictureSlice): string {
  return `${slice.width} x ${slice.height} ${slice.dtype}`;
}
