import { basename, dirname, join } from "node:path";
import { refuseHugeSlice } from "#main/intake/nrrd/nrrd-source.ts";
import { RawPlanes } from "#main/intake/raw-planes.ts";
import { fingerprintOf, ReadFile } from "#main/intake/read-file.ts";
import { filesIn } from "#main/intake/slice-folder/files-in.ts";
import type { PlaneRun, SliceSource } from "#main/intake/slice-source.ts";
import { unreadable } from "#shared/errors.ts";
import { isDicom, walkDicom } from "#shared/volume/dicom/dicom-elements.ts";
import { orderSeries } from "#shared/volume/dicom/dicom-series.ts";
import { type DicomSlice, dicomSlice } from "#shared/volume/dicom/dicom-slice.ts";
import { keepStoredBits } from "#shared/volume/dicom/stored-bits.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";

type SliceFile = DicomSlice & { readonly path: string; readonly bytes: number };

/** A slice source over the series that a DICOM file belongs to: all slices of the same series in its folder. */
export async function openDicomFile(path: string): Promise<SliceSource> {
  const own = await readSlice(path);
  if (!own)
    throw unreadable(
      basename(path),
      "a DICOM slice",
      "a DICOM file without an image",
      undefined,
      "Choose the folder of the slices.",
    );
  return openSeries(dirname(path), path, await dicomFilesIn(dirname(path)), own.series);
}

/** A slice source over a folder's one series. @param paths the DICOM files in it. */
export async function openDicomFolder(folder: string, paths: readonly string[]): Promise<SliceSource> {
  return openSeries(folder, folder, paths, null);
}

async function openSeries(folder: string, chosen: string, paths: readonly string[], only: string | null): Promise<SliceSource> {
  const bySeries = new Map<string, SliceFile[]>();
  for (const path of paths) {
    const slice = await readSlice(path);
    if (!slice || (only !== null && slice.series !== only)) continue;
    const alike = bySeries.get(slice.series);
    if (alike) alike.push(slice);
    else bySeries.set(slice.series, [slice]);
  }
  if (bySeries.size > 1) {
    const each = [...bySeries.values()].map((list) => `${list.length} slices with ${list[0]!.file}`).slice(0, 5);
    throw unreadable(
      basename(folder),
      "one series",
      `${bySeries.size}: ${each.join(", ")}`,
      undefined,
      "Choose one file of the series.",
    );
  }
  const found = [...bySeries.values()][0] ?? [];
  const { slices, scan } = orderSeries(found, basename(folder));
  const [first] = slices as [SliceFile];
  const sliceVoxels = first.columns * first.rows;
  refuseHugeSlice(first.path, sliceVoxels * BYTES_OF_DTYPE[first.dtype]);
  const order = slices.find((slice) => slice.littleEndian !== first.littleEndian || slice.swappedPairs !== first.swappedPairs);
  if (order) throw unreadable(order.file, `the byte order of ${first.file}`, "another");
  const planes = new RawPlanes({
    parts: slices.map((slice) => ({ path: slice.path, offset: slice.offset })),
    slicesPerPart: 1,
    dtype: first.dtype,
    littleEndian: first.littleEndian,
    sliceVoxels,
  });
  const watched = slices.map((slice) => slice.path);
  return {
    name: basename(chosen),
    path: chosen,
    header: scan,
    bytes: slices.reduce((sum, slice) => sum + slice.bytes, 0),
    seekable: true,
    bytesRead: () => planes.bytesRead(),
    readPlanes: (z0, z1, signal) => cleaned(planes.read(z0, z1, signal), first),
    fingerprint: () => fingerprintOf(watched),
    close: () => planes.close(),
  };
}

/** Slices with the bits that do not count set as the sign says, and pairs of one-byte voxels in their order. */
async function* cleaned(runs: AsyncGenerator<PlaneRun, void, void>, first: DicomSlice): AsyncGenerator<PlaneRun, void, void> {
  for await (const run of runs) {
    if (first.swappedPairs) Buffer.from(run.data.buffer, run.data.byteOffset, run.data.byteLength).swap16();
    keepStoredBits(run.data, first.bitsStored);
    yield run;
  }
}

/** Files of a folder that begin as DICOM files do, in the order of their names. */
async function dicomFilesIn(folder: string): Promise<string[]> {
  const paths: string[] = [];
  for (const name of await filesIn(folder)) {
    const file = await ReadFile.open(join(folder, name));
    try {
      if (isDicom(await file.readUpTo(0, 132))) paths.push(join(folder, name));
    } finally {
      await file.close();
    }
  }
  return paths;
}

const BLOCK_BYTES = 16 * 1024;

/** Reads what the walk over a file's elements asks for, a block at a time. */
async function readSlice(path: string): Promise<SliceFile | null> {
  const file = await ReadFile.open(path);
  try {
    const walk = walkDicom(file.size, basename(path));
    let block: Uint8Array = new Uint8Array(0);
    let blockAt = 0;
    let turn = walk.next();
    while (!turn.done) {
      const { at, length } = turn.value;
      if (at < blockAt || at + length > blockAt + block.length) {
        block = await file.readUpTo(at, Math.max(length, BLOCK_BYTES));
        blockAt = at;
      }
      turn = walk.next(block.subarray(at - blockAt, at - blockAt + length));
    }
    const slice = dicomSlice(turn.value, file.size, basename(path));
    return slice ? { ...slice, path, bytes: file.size } : null;
  } finally {
    await file.close();
  }
}
