import type { ExportFormat } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";

export interface ExportedFile {
  readonly name: string;
  readonly type: string;
  readonly bytes: Uint8Array;
}

export interface Exported {
  readonly written: readonly ExportedFile[];
  /** What the format cannot hold, one sentence each. */
  readonly lost: readonly string[];
}

/** The trees in a format. @param stem name of the files without ending */
export function writeFormat(format: ExportFormat, trees: ChordaeFile, stem: string): Exported {
  switch (format) {
    case "chordae":
      return { written: [text(`${stem}.chordae.json`, "application/json", writeChordaeFile(trees))], lost: [] };
    default:
      throw new TautlineError("internal", `The format ${format} is not written yet.`, { what: format });
  }
}

function text(name: string, type: string, content: string): ExportedFile {
  return { name, type: `${type}; charset=utf-8`, bytes: new TextEncoder().encode(content) };
}
