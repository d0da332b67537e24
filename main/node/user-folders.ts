import { homedir } from "node:os";
import { join, resolve } from "node:path";

type Environment = Readonly<Record<string, string | undefined>>;

/** The library's folder: the one given, else `TAUTLINE_LIBRARY`, else `Tautline` in the user's documents. */
export function libraryFolder(given: string | undefined, env: Environment = process.env): string {
  return resolve(given ?? env.TAUTLINE_LIBRARY ?? join(homedir(), "Documents", "Tautline"));
}

/** A private folder of this user for what concerns runs of the program, not the library; `TAUTLINE_STATE` moves it. */
export function stateFolder(env: Environment = process.env, platform: NodeJS.Platform = process.platform): string {
  if (env.TAUTLINE_STATE) return resolve(env.TAUTLINE_STATE);
  if (platform === "win32") return join(env.LOCALAPPDATA ?? join(homedir(), "AppData", "Local"), "Tautline");
  if (platform === "darwin") return join(homedir(), "Library", "Application Support", "Tautline");
  return join(env.XDG_STATE_HOME ?? join(homedir(), ".local", "state"), "tautline");
}
