import { mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { findElectronBinary } from "#main/node/electron-binary.ts";

let root: string;
beforeEach(async () => {
  root = await mkdtemp(join(tmpdir(), "tautline-electron-"));
});
afterEach(() => rm(root, { recursive: true }));

const put = async (path: string, text = "") => {
  await mkdir(join(root, path, ".."), { recursive: true });
  await writeFile(join(root, path), text);
};

describe("looking for the Electron binary", () => {
  it("finds none where the package, or its binary, is missing", async () => {
    expect(findElectronBinary(root, {}, "linux")).toBeNull();
    await put("node_modules/electron/package.json", "{}");
    expect(findElectronBinary(root, {}, "linux")).toBeNull();
    await put("node_modules/electron/path.txt", "electron");
    expect(findElectronBinary(root, {}, "linux")).toBeNull();
  });

  it("finds the binary that the package names, also from a folder below", async () => {
    await put("node_modules/electron/package.json", "{}");
    await put("node_modules/electron/dist/electron");
    const binary = join(root, "node_modules", "electron", "dist", "electron");
    expect(findElectronBinary(root, {}, "linux")).toBe(binary);
    expect(findElectronBinary(join(root, "release", "deep"), {}, "linux")).toBe(binary);
    await put("node_modules/electron/path.txt", "Electron.app/Contents/MacOS/Electron\n");
    await put("node_modules/electron/dist/Electron.app/Contents/MacOS/Electron");
    expect(findElectronBinary(root, {}, "darwin")).toMatch(/Electron\.app\/Contents\/MacOS\/Electron$/);
  });

  it("honours the package's own override of its folder", async () => {
    await put("node_modules/electron/package.json", "{}");
    await put("elsewhere/electron");
    expect(findElectronBinary(root, { ELECTRON_OVERRIDE_DIST_PATH: join(root, "elsewhere") }, "linux")).toBe(
      join(root, "elsewhere", "electron"),
    );
    expect(findElectronBinary(root, { ELECTRON_OVERRIDE_DIST_PATH: join(root, "none") }, "linux")).toBeNull();
  });
});
