import { join } from "node:path";
import { makeFolder } from "#main/node/disk-fault.ts";
import type { FilePort } from "#main/node/file-port.ts";
import type { Library } from "#main/node/library.ts";
import { studyFiles } from "#main/node/study/study-files.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import type { ExportAnswer } from "#shared/api/routes.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import type { StudyRecord } from "#shared/study/study-record.ts";

export interface ExportPassesOptions {
  readonly library: Library;
  readonly files: FilePort;
  readonly study: StudyRecord;
  readonly folder: string;
  readonly softwareVersion: string;
}

/** Writes the passes that count as tree files into a folder, for `tautline agree`. @throws conflict, disk-full, write-failed */
export async function exportStudyPasses(options: ExportPassesOptions): Promise<ExportAnswer> {
  const { library, files, study, folder, softwareVersion } = options;
  const passes = await studyFiles(library, study, softwareVersion);
  await makeFolder(files, folder);
  const written: string[] = [];
  for (const { name, file } of passes) {
    const path = join(folder, name);
    await writeWhole(files, path, new TextEncoder().encode(writeChordaeFile(file)));
    written.push(path);
  }
  return { written, lost: [] };
}
