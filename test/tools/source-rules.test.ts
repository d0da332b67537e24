import { readdirSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";

const root = fileURLToPath(new URL("../..", import.meta.url));
const SOURCE = /\.(ts|tsx|html|css|yml)$/;

/** Every source file of the program (not its tests), by path, without comments. */
const sources = new Map(
  ["main", "renderer", "shared"]
    .flatMap((folder) =>
      readdirSync(`${root}/${folder}`, { recursive: true, encoding: "utf8" }).map((name) => `${folder}/${name}`),
    )
    .filter((path) => SOURCE.test(path) && !path.endsWith(".bench.ts"))
    .map((path) => [path.replaceAll("\\", "/"), withoutComments(readFileSync(`${root}/${path}`, "utf8"))] as const),
);

function withoutComments(text: string): string {
  return text.replace(/\/\*[\s\S]*?\*\//g, "").replace(/(^|\s)\/\/.*$/gm, "$1");
}

/** Files whose code matches, but for those that may. */
function found(pattern: RegExp, except: readonly string[] = []): string[] {
  return [...sources].filter(([path, text]) => pattern.test(text) && !except.includes(path)).map(([path]) => path);
}

// The statements are those of Electron's own security guide (docs/tutorial/security.md), by what would break them in the source.
describe("the program's source", () => {
  it("was read whole", () => {
    expect(sources.size).toBeGreaterThan(100);
    expect(found(/registerSchemesAsPrivileged/)).toEqual(["main/electron/app-scheme.ts"]);
  });

  it("never weakens a page: web security, insecure content, experimental or Blink features, guest pages, pop-ups", () => {
    expect(
      found(/webSecurity|allowRunningInsecureContent|experimentalFeatures|enableBlinkFeatures|allowpopups|<webview/),
    ).toEqual([]);
    expect(found(/nodeIntegration\w*:\s*true|contextIsolation:\s*false|sandbox:\s*false|webviewTag:\s*true|bypassCSP/)).toEqual(
      [],
    );
  });

  it("turns the sandbox on for all pages before the app is ready", () => {
    const main = sources.get("main/electron/main.ts")!;
    expect(main.indexOf("app.enableSandbox()")).toBeGreaterThan(0);
    expect(main.indexOf("app.enableSandbox()")).toBeLessThan(main.indexOf("app.whenReady()"));
    expect(main.indexOf("registerScheme()")).toBeLessThan(main.indexOf("app.whenReady()"));
  });

  it("loads the app's own address into windows and nothing else", () => {
    const loads = [...sources.values()].flatMap((text) => text.match(/\.load(?:URL|File)\([^)]*\)/g) ?? []);
    expect(loads).toEqual([".loadURL(APP_URL)"]);
    expect(found(/new BrowserWindow\(/)).toEqual(["main/electron/main.ts"]);
  });

  it("touches ipcMain, ipcRenderer and the system's browser in one place each, and has no synchronous message", () => {
    expect(found(/\bipcMain\b/, ["main/electron/main.ts", "main/electron/bridge-host.ts"])).toEqual([]);
    expect(sources.get("main/electron/main.ts")!.match(/\bipcMain\b/g)).toHaveLength(2);
    expect(found(/\bipcRenderer\b/)).toEqual(["main/preload/preload.ts"]);
    expect(found(/shell\.openExternal|openPath\(/)).toEqual(["main/electron/external-opening.ts"]);
    expect(found(/sendSync|sendToHost|returnValue/)).toEqual([]);
    expect(found(/from "electron"/).filter((path) => !/^main\/(electron|preload)\//.test(path))).toEqual([]);
  });

  it("starts no process but a browser, Electron, and the engine's and intake's threads", () => {
    expect(found(/node:child_process/)).toEqual(["main/cli/run-server.ts", "main/node/browser-window.ts"]);
    expect(found(/\{[^}]*\b(fork|exec\w*)\b[^}]*\} from "node:child_process"|utilityProcess/)).toEqual([]);
  });

  it("makes no code out of text and puts no text into a page as markup", () => {
    expect(found(/\beval\(|new Function\(|dangerouslySetInnerHTML|\.innerHTML\s*=|insertAdjacentHTML|document\.write\(/)).toEqual(
      [],
    );
  });

  it("names no address of another computer: nothing is asked for there", () => {
    // Namespaces of XML formats, schema ids and the DOI of a cited method are names, not addresses that are opened.
    const names = /^https?:\/\/(www\.w3\.org|graphml\.graphdrawing\.org|json-schema\.org|ngff\.openmicroscopy\.org|doi\.org)\//;
    const addresses = [...sources].flatMap(([path, text]) =>
      [...text.matchAll(/\bhttps?:\/\/[^\s"'`)\\]+/g)].map(([address]) => [path, address!] as const),
    );
    const own = /^http:\/\/(127\.0\.0\.1|\$\{)/;
    expect(addresses.filter(([, address]) => !names.test(address) && !own.test(address))).toEqual([]);
    expect(found(/sendBeacon|autoUpdater|crashReporter|telemetry/i)).toEqual([]);
  });

  it("has no inline script, style or handler in its page", () => {
    const page = sources.get("renderer/index.html")!;
    expect(page).not.toMatch(/<script(?![^>]*\bsrc=)|<style|\son\w+=|\sstyle=|javascript:/i);
  });

  it("pins Electron to one exact version in the lock file", () => {
    const lock = JSON.parse(readFileSync(`${root}/package-lock.json`, "utf8"));
    const pinned = JSON.parse(readFileSync(`${root}/package.json`, "utf8")).devDependencies.electron;
    expect(pinned).toMatch(/^\d+\.\d+\.\d+$/);
    expect(lock.packages["node_modules/electron"].version).toBe(pinned);
  });
});
