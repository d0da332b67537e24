import type { ExportFormat } from "#shared/api/routes.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { graphmlLosses, writeGraphml } from "#shared/formats/graphml/write-graphml.ts";
import { type LabelsOf, labelLosses, labelNrrd, labelVolume } from "#shared/formats/labels/label-volume.ts";
import { tablesLosses, writeTables } from "#shared/formats/tables/write-tables.ts";
import { vtpLosses, writeVtp } from "#shared/formats/vtp/write-vtp.ts";

/** One file of an export. */
export interface ExportPart {
  /** File name with ending. */
  readonly name: string;
  /** Media type. */
  readonly type: string;
  /** Its bytes, made as they are asked for; large label volumes need no more memory than a few slices. */
  readonly chunks: () => Iterable<Uint8Array>;
}

export interface Exported {
  readonly parts: readonly ExportPart[];
  /** What the format does not keep of this file, one sentence each. */
  readonly lost: readonly string[];
}

/** Every format that trees are written in. */
export const EXPORT_FORMATS: readonly ExportFormat[] = ["chordae", "graphml", "vtp", "tables", "labels"];

/**
 * The trees of a file in another format; nothing is computed before a part's chunks are asked for, except checks.
 * @param stem name of the files without ending. @param fileName of the trees, for messages.
 * @throws unreadable-input when labels are asked for and the file does not give the scan's grid.
 */
export function exportTrees(
  format: ExportFormat,
  file: ChordaeFile,
  stem: string,
  fileName: string,
  labelsOf: LabelsOf = "trees",
): Exported {
  switch (format) {
    case "chordae":
      return { parts: [textPart(`${stem}.chordae.json`, "application/json", () => writeChordaeFile(file))], lost: [] };
    case "graphml":
      return {
        parts: [textPart(`${stem}.graphml`, "application/graphml+xml", () => writeGraphml(file))],
        lost: graphmlLosses(file),
      };
    case "vtp":
      return { parts: [textPart(`${stem}.vtp`, "application/xml", () => writeVtp(file))], lost: vtpLosses(file) };
    case "tables":
      return {
        parts: writeTables(file).map(({ name, text }) => textPart(name, "text/csv", () => text)),
        lost: tablesLosses(file),
      };
    case "labels": {
      const labels = labelVolume(file, labelsOf, fileName);
      const part = { name: `${stem}-labels.nrrd`, type: "application/octet-stream", chunks: () => labelNrrd(labels) };
      return { parts: [part], lost: labelLosses(file) };
    }
  }
}

/** All bytes of a part in one array. */
export function bytesOfPart(part: ExportPart): Uint8Array<ArrayBuffer> {
  const chunks = [...part.chunks()];
  const bytes = new Uint8Array(chunks.reduce((sum, chunk) => sum + chunk.length, 0));
  let at = 0;
  for (const chunk of chunks) {
    bytes.set(chunk, at);
    at += chunk.length;
  }
  return bytes;
}

function textPart(name: string, type: string, text: () => string): ExportPart {
  return { name, type: `${type}; charset=utf-8`, chunks: () => [new TextEncoder().encode(text())] };
}
