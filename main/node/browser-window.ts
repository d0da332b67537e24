import { spawn } from "node:child_process";
import { accessSync, constants, realpathSync } from "node:fs";
import { delimiter, join, sep } from "node:path";
import { pathToFileURL } from "node:url";

type Environment = Readonly<Record<string, string | undefined>>;

/** Programs of the Chromium family, the ones that have an app window, as their installers name them. */
const ON_PATH = [
  "chromium",
  "chromium-browser",
  "google-chrome",
  "google-chrome-stable",
  "microsoft-edge",
  "microsoft-edge-stable",
];
const ON_MAC = [
  "/Applications/Chromium.app/Contents/MacOS/Chromium",
  "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
  "/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge",
];
const ON_WINDOWS = [
  "Chromium\\Application\\chrome.exe",
  "Google\\Chrome\\Application\\chrome.exe",
  "Microsoft\\Edge\\Application\\msedge.exe",
];

/** An installed browser of the Chromium family; `TAUTLINE_BROWSER` names another. Null when there is none. */
export function findBrowser(env: Environment = process.env, platform: NodeJS.Platform = process.platform): string | null {
  if (env.TAUTLINE_BROWSER) return isProgram(env.TAUTLINE_BROWSER) ? env.TAUTLINE_BROWSER : null;
  return candidates(env, platform).find(isProgram) ?? null;
}

function candidates(env: Environment, platform: NodeJS.Platform): string[] {
  if (platform === "darwin") return ON_MAC;
  if (platform === "win32") {
    const roots = [env.ProgramFiles, env["ProgramFiles(x86)"], env.LOCALAPPDATA].filter((root) => root !== undefined);
    return roots.flatMap((root) => ON_WINDOWS.map((name) => join(root, name)));
  }
  const folders = (env.PATH ?? "").split(delimiter).filter(Boolean);
  return ON_PATH.flatMap((name) => folders.map((folder) => join(folder, name)));
}

/** True when windows can be shown here. */
export function hasDisplay(env: Environment = process.env, platform: NodeJS.Platform = process.platform): boolean {
  return platform === "darwin" || platform === "win32" || Boolean(env.DISPLAY || env.WAYLAND_DISPLAY);
}

/** Arguments that open the page as a window of its own, with a profile of its own below `state`. */
export function windowArguments(browser: string, state: string, opener: string, url: string): string[] {
  // A confined package reads neither hidden folders nor the private opener file: it gets the address itself.
  if (isConfined(browser)) return [`--app=${url}`];
  return [
    `--app=${pathToFileURL(opener).href}`,
    `--user-data-dir=${join(state, "browser")}`,
    "--no-first-run",
    "--no-default-browser-check",
    "--disable-background-networking",
  ];
}

/** A browser that cannot run here says so within this time; one that hands over to a running one ends well within it. */
const FAILS_WITHIN_MS = 1_500;

/** Opens the page in a window of the browser; the browser goes on by itself. Resolves false when it could not be started. */
export function openWindow(browser: string, args: readonly string[]): Promise<boolean> {
  return new Promise((resolve) => {
    const child = spawn(browser, args, { detached: true, stdio: "ignore" });
    const timer = setTimeout(() => settle(true), FAILS_WITHIN_MS);
    const settle = (opened: boolean) => {
      clearTimeout(timer);
      child.unref();
      resolve(opened);
    };
    child.once("error", () => settle(false));
    child.once("exit", (code) => settle(code === 0));
  });
}

function isProgram(path: string): boolean {
  try {
    accessSync(path, constants.X_OK);
    return true;
  } catch {
    return false;
  }
}

function isConfined(browser: string): boolean {
  try {
    return realpathSync(browser).split(sep).includes("snap");
  } catch {
    return false;
  }
}
