import { readFile, realpath } from "node:fs/promises";
import { extname, isAbsolute, relative, resolve, sep } from "node:path";
import type { PagePort } from "#main/http/ports.ts";

const TYPES: Readonly<Record<string, string>> = {
  ".html": "text/html; charset=utf-8",
  ".js": "text/javascript; charset=utf-8",
  ".css": "text/css; charset=utf-8",
  ".json": "application/json; charset=utf-8",
  ".svg": "image/svg+xml",
  ".png": "image/png",
  ".woff2": "font/woff2",
};

/** The built page's files under `root`; anything outside it, also by a symbolic link, does not exist. */
export function pageFiles(root: string): PagePort {
  return {
    async read(path) {
      const wanted = resolve(root, path);
      const type = TYPES[extname(wanted)];
      if (!type || !isBelow(root, wanted)) return undefined;
      try {
        const real = await realpath(wanted);
        if (!isBelow(await realpath(root), real)) return undefined;
        return { bytes: await readFile(real), type };
      } catch (error) {
        if (["ENOENT", "ENOTDIR", "EISDIR", "ENAMETOOLONG"].includes((error as NodeJS.ErrnoException).code ?? ""))
          return undefined;
        throw error;
      }
    },
  };
}

function isBelow(root: string, path: string): boolean {
  const way = relative(root, path);
  return way !== "" && way !== ".." && !way.startsWith(`..${sep}`) && !isAbsolute(way);
}
