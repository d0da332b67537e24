import type { FilePort } from "#main/node/file-port.ts";
import { Library } from "#main/node/library.ts";
import { writeJson } from "#main/node/whole-file.ts";
import type { ServerEvent } from "#shared/api/routes.ts";
import { countingBytes, sampleSpecimen } from "#test/main/node/sample-log.ts";

export const SPECIMEN = "s0000000000000000001";

/** A library over a file port; its events are collected. */
export function sampleLibrary(files: FilePort, random = countingBytes()): { library: Library; events: ServerEvent[] } {
  const events: ServerEvent[] = [];
  const library = new Library({
    root: "/library",
    files,
    random,
    now: () => 5,
    mayWrite: async () => {},
    emit: (event) => void events.push(event),
  });
  return { library, events };
}

/** Puts a specimen into the library's folder as an intake does. */
export async function putSpecimen(files: FilePort, library: Library, id = SPECIMEN): Promise<void> {
  await files.makeFolder(library.layout.specimen(id));
  await writeJson(files, library.layout.specimenFile(id), sampleSpecimen(id));
}
