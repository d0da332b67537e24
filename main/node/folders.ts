import { readdir, realpath, stat } from "node:fs/promises";
import { homedir } from "node:os";
import { basename, dirname, join, resolve } from "node:path";
import type { FoldersPort } from "#main/http/ports.ts";
import type { FolderAnswer } from "#shared/api/routes.ts";
import { TautlineError } from "#shared/errors.ts";

/** Entries shown at most; a folder of single slices may hold thousands. */
const MOST = 5_000;

/** Folders of this computer, for choosing a scan where no system dialog can be asked; hidden entries are left out. */
export function folders(begin: () => string = homedir): FoldersPort {
  return {
    async list(path) {
      const folder = resolve(path ?? begin());
      try {
        const real = await realpath(folder);
        const found = await readdir(real, { withFileTypes: true });
        const shown = found.filter((entry) => !entry.name.startsWith(".")).slice(0, MOST);
        const entries: FolderAnswer["entries"][number][] = [];
        for (const entry of shown) {
          const full = join(real, entry.name);
          const about = await stat(full).catch(() => undefined);
          if (!about || !(about.isDirectory() || about.isFile())) continue;
          entries.push({ name: entry.name, path: full, folder: about.isDirectory(), bytes: about.isFile() ? about.size : 0 });
        }
        entries.sort((a, b) => Number(b.folder) - Number(a.folder) || a.name.localeCompare(b.name, "en", { numeric: true }));
        return { path: real, parent: dirname(real) === real ? null : dirname(real), entries };
      } catch (error) {
        const code = (error as NodeJS.ErrnoException).code;
        if (code === undefined) throw error;
        const reason =
          code === "ENOENT" ? "it does not exist" : code === "ENOTDIR" ? "it is a file" : `the system refused (${code})`;
        throw new TautlineError("not-found", `The folder cannot be listed: ${reason}. Choose another one.`, {
          what: "folder",
          id: basename(folder),
        });
      }
    },
  };
}
