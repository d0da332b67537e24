import { givenChoice, RAW_HELP, RAW_OPTIONS } from "#main/cli/raw-option.ts";
import type { Verb } from "#main/cli/verb.ts";
import { scanInfoAndNotes } from "#main/intake/scan-info.ts";
import type { ScanInfo } from "#shared/api/routes.ts";

/** `tautline info`: what a scan says about itself, and what to doubt. */
export const info: Verb = {
  name: "info",
  summary: "size, voxel size, unit and value range of a scan, with warnings",
  help: `tautline info <volume> [--channel n] [--time n] [raw flags] [--json]

Reads a scan and says what its header and values are: NRRD, MetaImage, NIfTI-1 (plain or gzip), multi-page TIFF, a DICOM
series (its folder or one of its files), a folder of TIFF, PNG or BMP slices, OME-Zarr, raw voxels, or a specimen's folder.
An odd or missing voxel size is a warning here (exit 0); data shorter than the header says is not (exit 2).

  --channel n, --time n  which one to read where a scan has several, from 0
${RAW_HELP}`,
  options: { channel: { type: "string" }, time: { type: "string" }, ...RAW_OPTIONS },
  positionals: [1, 1],
  async run({ positionals, options, io, say }) {
    const { info: found, notes } = await scanInfoAndNotes(positionals[0]!, { choice: givenChoice(options), signal: io.signal });
    for (const sentence of [...found.warnings.map((warning) => warning.message), ...notes]) say(`${found.name}: ${sentence}`);
    return { json: found, text: inWords(found), exit: 0 };
  },
};

function inWords(found: ScanInfo): string {
  const [x, y, z] = found.size;
  const spacing = found.spacing ? `${found.spacing.join(" x ")} mm` : "not settled by the header";
  const asWritten = found.headerSpacing ? `${found.headerSpacing.join(", ")} ${found.unit ?? "(no unit)"}` : "none";
  const lines = [
    `${found.name}: ${found.family}, ${found.bytes} bytes`,
    `size        ${x} x ${y} x ${z} voxels, ${found.dtype}`,
    `voxel size  ${spacing}`,
    `in header   ${asWritten}`,
    `values      ${found.range.min} to ${found.range.max}${found.range.sampled ? " (of a sample of slices)" : ""}`,
    `frame       ${found.frame === "LPS" ? "LPS (left, posterior, superior)" : "the scan's own axes"}`,
  ];
  return lines.join("\n");
}
