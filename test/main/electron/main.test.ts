import { spawn } from "node:child_process";
import { once } from "node:events";
import { cp, mkdir, mkdtemp, readdir, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { diskFiles } from "#main/node/disk-files.ts";
import { processFacts, takeLease } from "#main/node/lease.ts";
import { BRIDGE_CHANNELS } from "#shared/api/bridge.ts";
import { countingBytes } from "#test/main/node/sample-log.ts";

const root = join(import.meta.dirname, "../../..");
const dist = process.env.TAUTLINE_DIST ?? join(root, "dist");

type Line = [what: string, ...details: unknown[]];

// The built main process over a stand-in for the electron module: its order of starting and stopping, without the binary.
describe("the desktop program's main process", () => {
  let folder: string;
  let library: string;
  beforeEach(async () => {
    folder = await mkdtemp(join(tmpdir(), "tautline-main-"));
    library = join(folder, "library");
    for (const part of ["main", "page"]) await cp(join(dist, part), join(folder, "dist", part), { recursive: true });
    await writeFile(join(folder, "package.json"), JSON.stringify({ type: "module", version: "1.2.3" }));
    const stub = join(folder, "node_modules", "electron");
    await mkdir(stub, { recursive: true });
    await writeFile(join(stub, "package.json"), JSON.stringify({ name: "electron", type: "module", exports: "./index.mjs" }));
    await cp(join(import.meta.dirname, "stub-electron-module.mjs"), join(stub, "index.mjs"));
  });
  afterEach(() => rm(folder, { recursive: true, maxRetries: 5 }));

  async function life(): Promise<{ lines: Line[]; code: number }> {
    const env = { ...process.env, TAUTLINE_LIBRARY: library };
    const child = spawn(process.execPath, [join(folder, "dist", "main", "electron.mjs")], {
      env,
      stdio: ["ignore", "pipe", "pipe"],
    });
    let output = "";
    let faults = "";
    child.stdout.on("data", (piece: Buffer) => {
      output += piece.toString();
    });
    child.stderr.on("data", (piece: Buffer) => {
      faults += piece.toString();
    });
    const [code] = (await once(child, "close")) as [number];
    try {
      return {
        lines: output
          .trim()
          .split("\n")
          .map((line) => JSON.parse(line) as Line),
        code,
      };
    } catch {
      throw new Error(`the main process said: ${output}\n${faults}`);
    }
  }

  it("starts in order: sandbox and scheme before ready, permissions refused, library, scheme, one window with its bridge", async () => {
    const { lines, code } = await life();
    expect(code).toBe(0);
    const steps = lines
      .map(([what]) => what)
      .filter((what) => !["contents", "ipc", "answer", "quit", "removeHandler"].includes(what));
    expect(steps).toEqual([
      "enableSandbox",
      "registerSchemesAsPrivileged",
      "requestSingleInstanceLock",
      "whenReady",
      "setPermissionRequestHandler",
      "setPermissionCheckHandler",
      "setDevicePermissionHandler",
      "handle",
      "BrowserWindow",
      "setWindowOpenHandler",
      "loadURL",
      "unhandle",
    ]);
    const [, url] = lines.find(([what]) => what === "loadURL")!;
    expect(url).toBe("tautline://app/");
    expect(lines.filter(([what]) => what === "contents").map(([, name]) => name)).toEqual([
      "will-navigate",
      "will-redirect",
      "will-frame-navigate",
      "will-attach-webview",
    ]);
    expect(lines.filter(([what]) => what === "ipc").map(([, channel]) => channel)).toEqual(Object.values(BRIDGE_CHANNELS));
    const [, options] = lines.find(([what]) => what === "BrowserWindow") as [string, { webPreferences: { preload: string } }];
    expect(options.webPreferences.preload).toBe(join(folder, "dist", "preload", "preload.cjs"));
  });

  it("answers page and requests by the scheme, and nothing outside the page", async () => {
    const { lines } = await life();
    const answers = lines.filter(([what]) => what === "answer");
    expect(answers.map(([, target, status]) => [target, status])).toEqual([
      ["", 200],
      ["api/hello", 200],
      ["..%2fpackage.json", 400],
    ]);
    expect(answers[0]![3]).toContain("<!doctype html>");
    expect(JSON.parse(answers[1]![3] as string)).toEqual({
      name: "Tautline",
      version: "1.2.3",
      shell: "electron",
      library,
      work: { waiting: 0, running: 0 },
    });
  });

  it("closes everything before it ends: bridge, scheme, library", async () => {
    const { lines } = await life();
    expect(lines.filter(([what]) => what === "quit")).toEqual([
      ["quit", 1],
      ["quit", 2],
    ]);
    expect(lines.filter(([what]) => what === "removeHandler")).toHaveLength(Object.keys(BRIDGE_CHANNELS).length);
    expect(await readdir(library)).toEqual(["specimens"]);
  });

  it("says in a dialog that the library is open in another place, and ends", async () => {
    const path = join(library, "lease.json");
    const lease = await takeLease({ files: diskFiles(), path, what: "server", facts: processFacts(), random: countingBytes() });
    const { lines, code } = await life();
    expect(code).toBe(0);
    const [, title, text] = lines.find(([what]) => what === "showErrorBox")!;
    expect(title).toBe("Tautline cannot open");
    expect(text).toMatch(/open in another place for writing/);
    expect(lines.some(([what]) => what === "BrowserWindow")).toBe(false);
    await lease.check();
    await lease.release();
  });
});
