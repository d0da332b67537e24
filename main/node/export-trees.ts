import { basename, dirname, isAbsolute, join, relative, sep } from "node:path";
import type { ExportPort } from "#main/http/ports.ts";
import { makeFolder } from "#main/node/disk-fault.ts";
import { type ExportedFile, writeFormat } from "#main/node/export-formats.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Library } from "#main/node/library.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import { zipped } from "#main/node/zipped.ts";
import { TautlineError } from "#shared/errors.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { headerOfSpecimen } from "#shared/formats/chordae/header-of-specimen.ts";

export interface ExportOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly softwareVersion: string;
}

/** Writes the trees of a pass, as its journal on disk stands, in the format that is asked for. */
export function exportTrees({ library, files, softwareVersion }: ExportOptions): ExportPort {
  return {
    async exportTrees({ specimen: id, pass, format, path }) {
      const specimen = await library.specimen(id);
      const history = await library.passes.history(id, pass);
      const { annotator, number } = history.header;
      // The time of the last record, not of the export: the same trees give the same bytes.
      const created = new Date(history.changed).toISOString();
      const header = headerOfSpecimen(specimen, { annotator, pass: number, created, softwareVersion });
      const stem = safeName(`${specimen.name}-${annotator}-${number}`);
      const { written, lost } = writeFormat(format, fileFromDocument(history.document, header), stem);
      if (path === undefined) return { ...download(written, stem), lost };
      const target = checkedTarget(path, library.layout.root);
      const places = written.map((file) => (format === "tables" ? join(target, file.name) : target));
      await makeFolder(files, format === "tables" ? target : dirname(target));
      for (const [i, file] of written.entries()) await writeWhole(files, places[i]!, file.bytes);
      return { written: places, lost };
    },
  };
}

/** One file as it is; several in a zip. */
function download(written: readonly ExportedFile[], stem: string): { name: string; type: string; bytes: Uint8Array } {
  const [only] = written;
  if (written.length === 1 && only) return only;
  return { name: `${stem}.zip`, type: "application/zip", bytes: zipped(written) };
}

/** @throws bad-request for a place that is no whole path or lies in the library, whose files are the program's own */
function checkedTarget(path: string, root: string): string {
  const way = relative(root, path);
  const inLibrary = way === "" || !(way === ".." || way.startsWith(`..${sep}`) || isAbsolute(way));
  if (isAbsolute(path) && !inLibrary) return path;
  const what = inLibrary ? "a place outside the library was expected" : "a whole path was expected";
  throw new TautlineError("bad-request", `The trees cannot be written to ${basename(path)}: ${what}. Choose another place.`, {
    what,
    where: "body.path",
  });
}

/** A file name of letters, digits, dots and hyphens. */
function safeName(name: string): string {
  return name.replace(/[^\p{L}\p{N}.]+/gu, "-").replace(/^[.-]+|[.-]+$/g, "") || "trees";
}
