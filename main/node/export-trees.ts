import { basename, dirname, isAbsolute, join, relative, sep } from "node:path";
import type { ExportPort } from "#main/http/ports.ts";
import type { Abilities } from "#main/node/abilities.ts";
import { makeFolder, writeFault } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Library } from "#main/node/library.ts";
import { UNFINISHED, writeWhole } from "#main/node/whole-file.ts";
import { zipped } from "#main/node/zipped.ts";
import { TautlineError } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { headerOfSpecimen } from "#shared/formats/chordae/header-of-specimen.ts";
import { bytesOfPart, exportTrees as exported } from "#shared/formats/export.ts";

export interface ExportOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly softwareVersion: string;
  readonly runLabels: Abilities["runLabels"];
  readonly newId: () => string;
}

/** Writes the trees of a pass, as its journal on disk stands, in the format that is asked for. */
export function exportTrees(options: ExportOptions): ExportPort {
  const { library, files, softwareVersion } = options;
  return {
    async exportTrees({ specimen: id, pass, format, path }) {
      const specimen = await library.specimen(id);
      const history = await library.passes.history(id, pass);
      const { annotator, number } = history.header;
      // The time of the last record, not of the export: the same trees give the same bytes.
      const created = new Date(history.changed).toISOString();
      const header = headerOfSpecimen(specimen, { annotator, pass: number, created, softwareVersion });
      const trees = fileFromDocument(history.document, header);
      const stem = safeName(`${specimen.name}-${annotator}-${number}`);
      const target = path === undefined ? null : checkedTarget(path, library.layout.root);
      const { parts, lost } = exported(format, trees, stem, "the trees");
      // Labels are voxels: a thread makes them, slab by slab.
      if (format === "labels") {
        const { name, type } = parts[0]!;
        if (target === null) return { name, type, bytes: await labelBytes(options, trees), lost };
        await writeLabels(options, trees, target);
        return { written: [target], lost };
      }
      const written = parts.map((part) => ({ name: part.name, type: part.type, bytes: bytesOfPart(part) }));
      if (target === null) return { ...download(written, stem), lost };
      const places = written.map((file) => (format === "tables" ? join(target, file.name) : target));
      await makeFolder(files, format === "tables" ? target : dirname(target));
      for (const [i, file] of written.entries()) await writeWhole(files, places[i]!, file.bytes);
      return { written: places, lost };
    },
  };
}

interface NamedBytes {
  readonly name: string;
  readonly type: string;
  readonly bytes: Uint8Array;
}

/** One file as it is; several in a zip. */
function download(written: readonly NamedBytes[], stem: string): NamedBytes {
  const [only] = written;
  if (written.length === 1 && only) return only;
  return { name: `${stem}.zip`, type: "application/zip", bytes: zipped(written) };
}

/** Writes a label volume under a temporary name beside its place, then puts it there. */
async function writeLabels({ files, runLabels }: ExportOptions, trees: ChordaeFile, path: string): Promise<void> {
  const temporary = `${path}${UNFINISHED}`;
  await makeFolder(files, dirname(path));
  try {
    await files.remove(temporary);
    await runLabels(trees, temporary);
    await files.rename(temporary, path);
    await files.syncFolder(dirname(path));
  } catch (error) {
    const fault = await writeFault(files, path, error);
    await files.remove(temporary).catch(() => undefined);
    throw fault;
  }
}

/** The bytes of a label volume, made in the library's folder for unfinished things, which is emptied at every start. */
async function labelBytes({ library, files, runLabels, newId }: ExportOptions, trees: ChordaeFile): Promise<Uint8Array> {
  const path = join(library.layout.unfinished, `labels-${newId()}.nrrd`);
  await makeFolder(files, dirname(path));
  try {
    await runLabels(trees, path);
    return (await files.read(path)) ?? new Uint8Array(0);
  } finally {
    await files.remove(path).catch(() => undefined);
  }
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
