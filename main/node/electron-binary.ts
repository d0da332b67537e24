import { existsSync, readFileSync } from "node:fs";
import { dirname, join } from "node:path";

const DEFAULT_PATH: Readonly<Partial<Record<NodeJS.Platform, string>>> = {
  darwin: "Electron.app/Contents/MacOS/Electron",
  win32: "electron.exe",
};

/**
 * The Electron binary installed beside the program, or null. Looks at files only: asking the package itself would start a
 * download. `ELECTRON_OVERRIDE_DIST_PATH` is honoured as the package does.
 */
export function findElectronBinary(
  root: string,
  env: Readonly<Record<string, string | undefined>> = process.env,
  platform: NodeJS.Platform = process.platform,
): string | null {
  const home = packageFolder(root);
  if (!home) return null;
  const named = join(home, "path.txt");
  const path = existsSync(named) ? readFileSync(named, "utf8").trim() : (DEFAULT_PATH[platform] ?? "electron");
  const binary = join(env.ELECTRON_OVERRIDE_DIST_PATH || join(home, "dist"), path);
  return existsSync(binary) ? binary : null;
}

function packageFolder(root: string): string | null {
  for (let folder = root; ; folder = dirname(folder)) {
    const home = join(folder, "node_modules", "electron");
    if (existsSync(join(home, "package.json"))) return home;
    if (dirname(folder) === folder) return null;
  }
}
