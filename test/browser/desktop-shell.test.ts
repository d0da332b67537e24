import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { _electron, type ElectronApplication, type Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { hasDisplay } from "#main/node/browser-window.ts";
import { findElectronBinary } from "#main/node/electron-binary.ts";
import { BRIDGE_CHANNELS } from "#shared/api/bridge.ts";

const root = join(import.meta.dirname, "../..");
const binary = findElectronBinary(root);
const reason = !binary
  ? "the Electron binary is not installed here"
  : !hasDisplay()
    ? "there is no display (xvfb-run brings one)"
    : null;
if (reason) console.log(`Skipped: the tests of the desktop shell on the real binary, because ${reason}.`);

// What the security statements demand of the running desktop program, looked at from inside its page and its main process.
describe.skipIf(reason !== null)("the desktop program", () => {
  let app: ElectronApplication;
  let page: Page;
  let folder: string;
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), "tautline-desktop-"));
    app = await _electron.launch({
      executablePath: binary!,
      args: [root, ...(process.getuid?.() === 0 ? ["--no-sandbox"] : [])],
      env: { ...(process.env as Record<string, string>), TAUTLINE_LIBRARY: join(folder, "library") },
    });
    // Every request of the session is written down; every question to the person is answered with no.
    await app.evaluate(({ session, dialog }) => {
      const asked: string[] = [];
      Object.assign(globalThis, { asked });
      session.defaultSession.webRequest.onBeforeRequest((details, answer) => {
        asked.push(details.url);
        answer({});
      });
      dialog.showMessageBox = (async () => ({ response: 1, checkboxChecked: false })) as typeof dialog.showMessageBox;
    });
    page = await app.firstWindow();
    await page.waitForFunction(() => document.getElementById("app")!.childElementCount > 0);
  });
  afterAll(async () => {
    await app?.close();
    if (folder) await rm(folder, { recursive: true, force: true, maxRetries: 5 });
  });
  const inPage = <T>(script: string) => page.evaluate(script) as Promise<T>;
  const windows = () => app.evaluate(({ webContents }) => webContents.getAllWebContents().length);

  it("loads its page by its own scheme and asks nobody else", async () => {
    expect(page.url()).toMatch(/^tautline:\/\/app\//);
    await page.reload();
    await page.waitForTimeout(1000);
    const asked = await app.evaluate(() => (globalThis as unknown as { asked: string[] }).asked);
    expect(asked.length).toBeGreaterThan(0);
    expect(asked.filter((url) => !/^(tautline:\/\/app\/|blob:tautline:\/\/app\/|devtools:)/.test(url))).toEqual([]);
  });

  it("gives its page no Node, the sandbox and a world apart from the preload", async () => {
    expect(await inPage("[typeof require, typeof process, typeof module]")).toEqual(["undefined", "undefined", "undefined"]);
    const preferences = await app.evaluate(({ BrowserWindow }) => {
      const contents = BrowserWindow.getAllWindows()[0]!.webContents as unknown as {
        getLastWebPreferences(): Record<string, unknown>;
      };
      const { sandbox, contextIsolation, nodeIntegration, webviewTag, webSecurity } = contents.getLastWebPreferences();
      return { sandbox, contextIsolation, nodeIntegration, webviewTag, webSecurity };
    });
    expect(preferences).toEqual({
      sandbox: true,
      contextIsolation: true,
      nodeIntegration: false,
      webviewTag: false,
      webSecurity: true,
    });
    const touched = await inPage<number>(`(async () => {
      let calls = 0;
      const push = Array.prototype.push;
      Array.prototype.push = function (...items) { calls += 1; return push.apply(this, items); };
      await window.tautline.setMenu({ menus: [] });
      Array.prototype.push = push;
      return calls;
    })()`);
    expect(touched).toBe(0);
  });

  it("gives the page the bridge's functions, frozen, and nothing else of Electron", async () => {
    const keys = await inPage<string[]>("Object.keys(window.tautline).sort()");
    expect(keys).toEqual([...Object.keys(BRIDGE_CHANNELS), "onCommand", "pathOfDropped"].sort());
    const kept = "(() => { try { window.tautline.more = 1; } catch {} return window.tautline.more; })()";
    expect(await inPage(kept)).toBeUndefined();
    expect(await inPage("['ipcRenderer', 'electron', 'require'].filter((name) => name in window)")).toEqual([]);
    expect(await inPage("window.tautline.pickSavePath({ suggestedName: '../x' })")).toMatchObject({
      ok: false,
      error: { tag: "bad-request" },
    });
  });

  it("is refused every permission", async () => {
    expect(await inPage("Notification.requestPermission()")).toBe("denied");
    const failure = (call: string) => inPage<string>(`${call}.then(() => "granted", (error) => error.name)`);
    expect(await failure("navigator.mediaDevices.getUserMedia({ video: true })")).not.toBe("granted");
    const place =
      "new Promise((yes, no) => navigator.geolocation.getCurrentPosition(yes, (e) => no({ name: 'code ' + e.code })))";
    expect(await failure(place)).toBe("code 1");
  });

  it("runs no inline script that was slipped in and makes no code out of text", async () => {
    const ran = await inPage<boolean>(`(async () => {
      const script = document.createElement("script");
      script.textContent = "window.slippedIn = true";
      document.body.append(script);
      await new Promise((resolve) => setTimeout(resolve, 300));
      script.remove();
      return "slippedIn" in window;
    })()`);
    expect(ran).toBe(false);
    // In a timer: the browser lets a debugger's own call make code, whatever the page's policy says.
    const made = await inPage<string>(`new Promise((resolve) => setTimeout(() => {
      try { resolve(String(Function("return 1")())); } catch (error) { resolve(error.name); }
    }))`);
    expect(made).toBe("EvalError");
  });

  it("attaches no guest page, opens no window and stays on its own page", async () => {
    const before = await windows();
    await inPage(`(() => {
      const guest = document.createElement("webview");
      guest.src = "https://example.invalid/";
      document.body.append(guest);
    })()`);
    expect(await inPage("window.open('https://example.invalid/')")).toBeNull();
    expect(await inPage("window.open('tautline://app/')")).toBeNull();
    for (const address of ["https://example.invalid/", "tautline://app.evil/", "file:///etc/passwd", "data:text/html,x"]) {
      await inPage(`void (location.href = ${JSON.stringify(address)})`);
      await page.waitForTimeout(300);
      expect(page.url()).toMatch(/^tautline:\/\/app\//);
    }
    expect(await windows()).toBe(before);
  });

  it("serves by its scheme only files of the page and its requests, by GET and HEAD for files", async () => {
    const ask = (target: string, method = "GET") =>
      app.evaluate(
        async ({ net }, [address, how]) => {
          const answer = await net.fetch(address!, { method: how! });
          return { status: answer.status, policy: answer.headers.get("content-security-policy"), text: await answer.text() };
        },
        [`tautline://app${target}`, method],
      );
    const index = await ask("/");
    expect(index.status).toBe(200);
    expect(index.policy).toContain("default-src 'none'");
    expect(await ask("/", "HEAD")).toMatchObject({ status: 200, text: "" });
    expect((await ask("/", "POST")).status).toBe(405);
    expect((await ask("/api/hello")).text).toContain('"shell":"electron"');
    for (const target of [
      "/..%2fpackage.json",
      "/%5c..%5cpackage.json",
      "/..%2f..%2fpackage.json",
      "/%00",
      "/%2fetc%2fpasswd",
      "//etc/passwd",
    ]) {
      const { status, text } = await ask(target);
      expect([target, status >= 400 && status < 500]).toEqual([target, true]);
      expect(text).not.toMatch(/root:|electron-builder/);
    }
    await expect(ask(".evil/")).rejects.toThrow();
  });
});
