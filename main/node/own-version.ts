import { readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

/** Folders above a module in which the program's `package.json` is looked for. */
const MOST_PARENTS = 5;

/** The program's version, for what it writes; "unknown" where its `package.json` is not above the module. @param moduleUrl of any of its modules */
export function ownVersion(moduleUrl: string): string {
  let folder = dirname(fileURLToPath(moduleUrl));
  for (let k = 0; k < MOST_PARENTS; k++, folder = dirname(folder)) {
    try {
      const { name, version } = JSON.parse(readFileSync(join(folder, "package.json"), "utf8")) as Record<string, unknown>;
      if (name === "tautline" && typeof version === "string") return version;
    } catch {
      // Not in this folder.
    }
  }
  return "unknown";
}
