import { spawnSync } from "node:child_process";
import { existsSync } from "node:fs";
import { mkdtemp, rm } from "node:fs/promises";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { extractFile, listPackage } from "@electron/asar";
import { FuseV1Options, getCurrentFuseWire } from "@electron/fuses";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { stubElectron } from "#test/main/electron/stub-electron.ts";

const root = fileURLToPath(new URL("../../..", import.meta.url));
const require = createRequire(import.meta.url);

describe("the packaged desktop program (over a stand-in for the Electron binary)", () => {
  let folder: string;
  let unpacked: string;
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), "tautline-package-"));
    await stubElectron(join(folder, "electron"));
    const builder = require.resolve("electron-builder/cli.js");
    const args = [builder, "--linux", "dir", "--x64", "--publish", "never"];
    const set = [`-c.electronDist=${join(folder, "electron")}`, `-c.directories.output=${join(folder, "out")}`];
    const run = spawnSync(process.execPath, [...args, ...set], { cwd: root, encoding: "utf8" });
    if (run.status !== 0) throw new Error(`electron-builder ended with ${run.status}:\n${run.stdout}\n${run.stderr}`);
    unpacked = join(folder, "out", "linux-unpacked");
  }, 180_000);
  afterAll(() => rm(folder, { recursive: true }));

  it("holds the built program in one archive, and nothing of the workshop", () => {
    const names = listPackage(join(unpacked, "resources", "app.asar"), { isPack: false }).map((name) =>
      name.replaceAll("\\", "/"),
    );
    for (const needed of [
      "/package.json",
      "/dist/main/electron.mjs",
      "/dist/main/engine-worker.mjs",
      "/dist/main/intake-worker.mjs",
      "/dist/preload/preload.cjs",
      "/dist/page/index.html",
    ]) {
      expect(names).toContain(needed);
    }
    const allowed = /^\/(package\.json|LICENSE|dist(\/.*)?)$/;
    expect(names.filter((name) => !allowed.test(name))).toEqual([]);
    expect(existsSync(join(unpacked, "resources", "app"))).toBe(false);
  });

  it("starts with the desktop shell's bundle", () => {
    const archive = join(unpacked, "resources", "app.asar");
    const { main } = JSON.parse(extractFile(archive, "package.json").toString()) as { main: string };
    expect(main).toBe("dist/main/electron.mjs");
    expect(extractFile(archive, main).toString()).toContain("registerSchemesAsPrivileged");
  });

  it("has its fuses blown as stated, read back from the binary", async () => {
    const wire = await getCurrentFuseWire(join(unpacked, "tautline"));
    const states = Object.fromEntries(
      [
        FuseV1Options.RunAsNode,
        FuseV1Options.EnableNodeOptionsEnvironmentVariable,
        FuseV1Options.EnableNodeCliInspectArguments,
        FuseV1Options.EnableEmbeddedAsarIntegrityValidation,
        FuseV1Options.OnlyLoadAppFromAsar,
        FuseV1Options.GrantFileProtocolExtraPrivileges,
      ].map((fuse) => [FuseV1Options[fuse], String.fromCharCode(wire[fuse]!)]),
    );
    // The binary holds a digit for each fuse: 1 on, 0 off.
    expect(states).toEqual({
      RunAsNode: "0",
      EnableNodeOptionsEnvironmentVariable: "0",
      EnableNodeCliInspectArguments: "0",
      EnableEmbeddedAsarIntegrityValidation: "1",
      OnlyLoadAppFromAsar: "1",
      GrantFileProtocolExtraPrivileges: "0",
    });
  });
});
