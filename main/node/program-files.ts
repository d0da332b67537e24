import { readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

/** Where the built program's own parts lie, and its version. */
export interface ProgramFiles {
  /** Folder of `package.json`. */
  readonly root: string;
  /** Folder of the built page. */
  readonly page: string;
  readonly version: string;
}

/** The parts of the program that the bundle at `moduleUrl` (in `dist/main/`) belongs to. */
export function programFiles(moduleUrl: string): ProgramFiles {
  const dist = dirname(dirname(fileURLToPath(moduleUrl)));
  const root = dirname(dist);
  const { version } = JSON.parse(readFileSync(join(root, "package.json"), "utf8")) as { version: string };
  return { root, page: join(dist, "page"), version };
}
