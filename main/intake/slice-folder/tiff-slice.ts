import { basename } from "node:path";
import type { ReadFile } from "#main/intake/read-file.ts";
import type { PictureKind } from "#main/intake/slice-folder/picture-slice.ts";
import { readPage } from "#main/intake/tiff/tiff-blocks.ts";
import { readValues, tiffChain } from "#main/intake/tiff/tiff-directories.ts";
import { unreadable } from "#shared/errors.ts";
import { isTiff, type TiffForm, tiffForm } from "#shared/volume/tiff/tiff-entries.ts";
import { isSidePage, pageResolution, type TiffPage, type TiffValues, tiffPage } from "#shared/volume/tiff/tiff-page.ts";

/** TIFF pictures of one page. */
export const TIFF_SLICE: PictureKind = {
  name: "TIFF",
  isOne: isTiff,
  async open(file) {
    const { page, values } = await onePage(file);
    const notes: string[] = [];
    if ((values.photometric?.[0] ?? 1) === 0)
      notes.push("The header calls the greatest value black; values are kept as they are.");
    if ((values.orientation?.[0] ?? 1) !== 1)
      notes.push("The header's page orientation is not applied; check that the scan is not mirrored.");
    const { width, height, dtype } = page;
    return { width, height, dtype, resolution: pageResolution(values), notes };
  },
  async read(file, out) {
    const { page, form } = await onePage(file);
    await readPage(file, page, form.littleEndian, out, "voxels");
  },
};

async function onePage(file: ReadFile): Promise<{ page: TiffPage; values: TiffValues; form: TiffForm }> {
  const name = basename(file.path);
  const form = tiffForm(await file.readUpTo(0, 16), name);
  const pages: TiffValues[] = [];
  for (const [k, at] of (await tiffChain(file, form)).entries()) {
    const values = await readValues(file, form, at, k + 1);
    if (!isSidePage(values)) pages.push(values);
  }
  const [values] = pages;
  if (!values || pages.length > 1)
    throw unreadable(
      name,
      "one page a file in a folder of slices",
      `${pages.length} pages`,
      undefined,
      "Choose the file itself.",
    );
  return { page: tiffPage(values, file.size, name, "page 1"), values, form };
}
