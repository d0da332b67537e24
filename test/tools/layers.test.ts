import { execFileSync, spawnSync } from "node:child_process";
import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join, resolve } from "node:path";
import { afterAll, beforeAll, describe, expect, it } from "vitest";

/** One forbidden import per row of the table of layers, and the rule that must name it. */
const FORBIDDEN: [file: string, line: string, rule: string][] = [
  ["shared/a.ts", 'import "#main/node/x.ts";', "shared-imports-only-its-layers"],
  ["shared/b.ts", 'import "node:fs";', "shared-has-no-node"],
  ["shared/c.ts", 'import "preact";', "shared-imports-only-its-layers"],
  ["main/http/a.ts", 'import "#main/node/x.ts";', "http-imports-only-its-layers"],
  ["main/http/b.ts", 'import "node:path";', "http-has-no-node"],
  ["main/http/c.ts", 'import "electron";', "http-imports-only-its-layers"],
  ["main/node/a.ts", 'import "electron";', "node-imports-only-its-layers"],
  ["main/node/b.ts", 'import "#renderer/app/x.ts";', "node-imports-only-its-layers"],
  ["main/node/c.ts", 'import "#main/engine/x.ts";', "node-imports-only-its-layers"],
  ["main/intake/a.ts", 'import "#renderer/app/x.ts";', "intake-imports-only-its-layers"],
  ["main/engine/a.ts", 'import "#main/intake/x.ts";', "engine-imports-only-its-layers"],
  ["main/cli/a.ts", 'import "#main/electron/x.ts";', "cli-imports-only-its-layers"],
  ["main/electron/a.ts", 'import "#main/cli/x.ts";', "electron-imports-only-its-layers"],
  ["main/preload/a.ts", 'import "#renderer/app/x.ts";', "preload-imports-only-its-layers"],
  ["renderer/storage/a.ts", 'import "preact";', "storage-imports-only-its-layers"],
  ["renderer/client/a.ts", 'import "dexie";', "client-imports-only-its-layers"],
  ["renderer/editor/a.ts", 'import "three";', "editor-imports-only-its-layers"],
  ["renderer/space/a.ts", 'import "dexie";', "space-imports-only-its-layers"],
  ["renderer/section/a.ts", 'import "#main/node/x.ts";', "section-imports-only-its-layers"],
  ["renderer/strip/a.ts", 'import "#renderer/client/x.ts";', "strip-imports-only-its-layers"],
  ["renderer/desk/a.ts", 'import "#main/http/x.ts";', "screens-imports-only-its-layers"],
  ["renderer/shelf/b.ts", 'import "node:fs";', "screens-has-no-node"],
];
const TARGETS = [
  "shared",
  "main/http",
  "main/node",
  "main/intake",
  "main/engine",
  "main/cli",
  "main/electron",
  "main/preload",
  "renderer/client",
  "renderer/app",
];

const root = resolve(import.meta.dirname, "../..");
let house = "";

beforeAll(() => {
  house = mkdtempSync(join(tmpdir(), "tautline-layers-"));
  for (const name of ["package.json", ".dependency-cruiser.cjs"]) cpSync(join(root, name), join(house, name));
  symlinkSync(join(root, "node_modules"), join(house, "node_modules"));
  mkdirSync(join(house, "test/tools"), { recursive: true });
  cpSync(join(root, "test/tools/check-layers.mjs"), join(house, "test/tools/check-layers.mjs"));
});
afterAll(() => rmSync(house, { recursive: true, force: true }));

function write(file: string, text: string): void {
  mkdirSync(dirname(join(house, file)), { recursive: true });
  writeFileSync(join(house, file), text);
}

function clear(): void {
  for (const folder of ["shared", "main", "renderer"]) rmSync(join(house, folder), { recursive: true, force: true });
  for (const folder of TARGETS) write(`${folder}/x.ts`, "export {};\n");
}

describe("the table of layers", () => {
  it("names the rule of every forbidden import", () => {
    clear();
    for (const [file, line] of FORBIDDEN) write(file, `${line}\n`);
    const run = spawnSync(process.execPath, ["test/tools/check-layers.mjs"], { cwd: house, encoding: "utf8" });
    expect(run.status).toBe(1);
    for (const [file, , rule] of FORBIDDEN) expect(run.stderr).toContain(`${rule}: ${file} ->`);
  });

  it("refuses a cycle", () => {
    clear();
    write("shared/p.ts", 'import { q } from "#shared/q.ts";\nexport const p = () => q;\n');
    write("shared/q.ts", 'import { p } from "#shared/p.ts";\nexport const q = () => p;\n');
    const run = spawnSync(process.execPath, ["test/tools/check-layers.mjs"], { cwd: house, encoding: "utf8" });
    expect(run.status).toBe(1);
    expect(run.stderr).toContain("no-cycles");
  });

  it("fails when the parser sees fewer modules than there are source files", () => {
    clear();
    write(
      ".dependency-cruiser.cjs",
      readFileSync(join(root, ".dependency-cruiser.cjs"), "utf8").replace("exclude: {", 'includeOnly: "^shared/", exclude: {'),
    );
    const run = spawnSync(process.execPath, ["test/tools/check-layers.mjs"], { cwd: house, encoding: "utf8" });
    cpSync(join(root, ".dependency-cruiser.cjs"), join(house, ".dependency-cruiser.cjs"));
    expect(run.status).toBe(1);
    expect(run.stderr).toMatch(/only \d+ of \d+ source files were seen/);
  });

  it("holds for the program as it is", () => {
    expect(execFileSync(process.execPath, ["test/tools/check-layers.mjs"], { cwd: root, encoding: "utf8" })).toContain(
      ", 0 forbidden",
    );
  });
});
