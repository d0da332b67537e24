import { basename } from "node:path";
import { refuseHugeSlice } from "#main/intake/nrrd/nrrd-source.ts";
import { fingerprintOf, ReadFile, stopIfAborted } from "#main/intake/read-file.ts";
import type { PlaneRun, SliceSource } from "#main/intake/slice-source.ts";
import { readPage } from "#main/intake/tiff/tiff-blocks.ts";
import { readValues, tiffChain } from "#main/intake/tiff/tiff-directories.ts";
import { unreadable } from "#shared/errors.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { PLACELESS, type ScanHeader } from "#shared/volume/scan-header.ts";
import { viewAs } from "#shared/volume/source-array.ts";
import { type TiffForm, tiffForm } from "#shared/volume/tiff/tiff-entries.ts";
import { isSidePage, pageResolution, type TiffPage, type TiffValues, tiffPage } from "#shared/volume/tiff/tiff-page.ts";

/** A slice source over a multi-page TIFF or BigTIFF, one page a slice. @throws unreadable-input when pages differ or are not whole. */
export async function openTiff(path: string): Promise<SliceSource> {
  const file = await ReadFile.open(path);
  try {
    const name = basename(path);
    const form = tiffForm(await file.readUpTo(0, 16), name);
    const pages: number[] = [];
    let first: { page: TiffPage; values: TiffValues } | undefined;
    let number = 0;
    for (const at of await tiffChain(file, form)) {
      number++;
      const values = await readValues(file, form, at, number);
      if (isSidePage(values)) continue;
      const page = tiffPage(values, file.size, name, `page ${number}`);
      first ??= { page, values };
      if (inWords(page) !== inWords(first.page))
        throw unreadable(name, `pages alike, ${inWords(first.page)}`, inWords(page), `page ${number}`);
      pages.push(at);
    }
    if (!first || pages.length < 2)
      throw unreadable(
        name,
        "a TIFF of many pages, one a slice",
        `${pages.length === 1 ? "one page" : "no page"}`,
        undefined,
        "Where each slice is a file, choose their folder.",
      );
    const { width, height, dtype } = first.page;
    refuseHugeSlice(path, width * height * BYTES_OF_DTYPE[dtype]);
    return {
      name,
      path,
      header: headerOf(first.page, first.values, pages.length),
      bytes: file.size,
      seekable: true,
      bytesRead: () => file.bytesRead,
      readPlanes: (z0, z1, signal) => readPages(file, form, pages, z0, z1, signal),
      fingerprint: () => fingerprintOf([path]),
      close: () => file.close(),
    };
  } catch (error) {
    await file.close();
    throw error;
  }
}

async function* readPages(
  file: ReadFile,
  form: TiffForm,
  pages: readonly number[],
  z0: number,
  z1: number,
  signal: AbortSignal | undefined,
): AsyncGenerator<PlaneRun, void, void> {
  const name = basename(file.path);
  let buffer: ArrayBuffer | undefined;
  for (let z = z0; z < z1; z++) {
    stopIfAborted(signal, "reading the scan");
    const where = `slice ${z + 1}`;
    const page = tiffPage(await readValues(file, form, pages[z]!, z + 1), file.size, name, where);
    const voxels = page.width * page.height;
    buffer ??= new ArrayBuffer(voxels * BYTES_OF_DTYPE[page.dtype]);
    await readPage(file, page, form.littleEndian, new Uint8Array(buffer), where);
    yield { z, count: 1, data: viewAs(page.dtype, buffer, 0, voxels) };
  }
}

/** A TIFF says nothing of the distance of its pages, so its voxel size is never complete. */
function headerOf(page: TiffPage, values: TiffValues, slices: number): ScanHeader {
  const across = pageResolution(values);
  const notes: string[] = [];
  if ((values.photometric?.[0] ?? 1) === 0) notes.push("The header calls the greatest value black; values are kept as they are.");
  if ((values.orientation?.[0] ?? 1) !== 1)
    notes.push("The header's page orientation is not applied; check that the scan is not mirrored.");
  const common = {
    ...PLACELESS,
    family: "TIFF",
    dtype: page.dtype,
    size: sizeXyz(page.width, page.height, slices),
    notes,
  } as const;
  if (!across) return common;
  const f = across.mmPerUnit;
  const size = `${Number(across.x.toPrecision(6))} x ${Number(across.y.toPrecision(6))} mm`;
  const spacingRemark = `The header gives ${size} within a slice, and no distance between slices.`;
  return { ...common, unit: across.unit, mmPerUnit: [f, f, f], originMmPerUnit: [f, f, f], spacingRemark };
}

function inWords(page: TiffPage): string {
  return `${page.width} x ${page.height} ${page.dtype}`;
}
