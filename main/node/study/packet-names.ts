import { isAbsolute, relative, sep } from "node:path";
import type { FilePort } from "#main/node/file-port.ts";
import { refuseTaken } from "#main/node/packet/bag-writer.ts";
import { TautlineError } from "#shared/errors.ts";

/**
 * Checks that packets may be written into a folder: a whole path, an existing folder, outside the library.
 * @throws bad-request
 */
export async function checkPacketFolder(files: FilePort, folder: string, library: string): Promise<void> {
  const refuse = (what: string) =>
    new TautlineError("bad-request", `The packets cannot be written there: ${what}. Choose another folder.`, {
      what,
      where: "body.folder",
    });
  if (!isAbsolute(folder)) throw refuse("a whole path was expected");
  const way = relative(library, folder);
  const inLibrary = way === "" || !(way === ".." || way.startsWith(`..${sep}`) || isAbsolute(way));
  if (inLibrary) throw refuse("it lies in the library, whose files are the program's own");
  if ((await files.facts(folder))?.kind !== "folder") throw refuse("there is no such folder");
}

/** @throws conflict naming the first of these places where something stands already */
export async function refuseAnyTaken(files: FilePort, paths: readonly string[]): Promise<void> {
  for (const path of paths) await refuseTaken(files, path);
}
