import { chmod, mkdir, mkdtemp, rm, symlink, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { findBrowser, hasDisplay, openWindow, windowArguments } from "#main/node/browser-window.ts";

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-browser-"));
});
afterEach(() => rm(folder, { recursive: true }));

async function program(path: string): Promise<string> {
  await mkdir(join(folder, path, ".."), { recursive: true });
  await writeFile(join(folder, path), "#!/bin/sh\n");
  await chmod(join(folder, path), 0o755);
  return join(folder, path);
}

describe("the browser for the page", () => {
  it("is one of the family found on the path, in a steady order, or the one that is named", async () => {
    expect(findBrowser({ PATH: folder }, "linux")).toBeNull();
    const edge = await program("b/microsoft-edge");
    const PATH = `${join(folder, "a")}:${join(folder, "b")}`;
    expect(findBrowser({ PATH }, "linux")).toBe(edge);
    const chromium = await program("b/chromium");
    expect(findBrowser({ PATH }, "linux")).toBe(chromium);
    expect(findBrowser({ PATH, TAUTLINE_BROWSER: edge }, "linux")).toBe(edge);
    expect(findBrowser({ PATH, TAUTLINE_BROWSER: join(folder, "none") }, "linux")).toBeNull();
  });

  it("shows windows only where there is a display", () => {
    expect(hasDisplay({}, "linux")).toBe(false);
    expect(hasDisplay({ DISPLAY: ":0" }, "linux")).toBe(true);
    expect(hasDisplay({ WAYLAND_DISPLAY: "wayland-0" }, "linux")).toBe(true);
    expect(hasDisplay({}, "darwin")).toBe(true);
    expect(hasDisplay({}, "win32")).toBe(true);
  });

  it("gets the private opener file instead of the address, but where a confined package could not read it", async () => {
    const url = "http://127.0.0.1:1/#token=secret";
    const browser = await program("bin/chromium");
    const args = windowArguments(browser, "/state", "/state/open.html", url);
    expect(args[0]).toBe("--app=file:///state/open.html");
    expect(args.join(" ")).not.toContain("secret");
    await program("snap/chromium/current/chromium");
    await symlink(join(folder, "snap/chromium/current/chromium"), join(folder, "bin", "confined"));
    expect(windowArguments(join(folder, "bin", "confined"), "/state", "/state/open.html", url)).toEqual([`--app=${url}`]);
  });

  it("that cannot be started is told, not thrown", async () => {
    expect(await openWindow(join(folder, "none"), [])).toBe(false);
    expect(await openWindow(await program("hands-over"), [])).toBe(true);
    await writeFile(await program("fails"), "#!/bin/sh\nexit 1\n");
    expect(await openWindow(join(folder, "fails"), [])).toBe(false);
    await writeFile(await program("stays"), "#!/bin/sh\nexec sleep 3\n");
    expect(await openWindow(join(folder, "stays"), [])).toBe(true);
  });
});
