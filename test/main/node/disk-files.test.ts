import { mkdtemp, readFile, rm, stat } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { diskFiles } from "#main/node/disk-files.ts";
import { writeWhole } from "#main/node/whole-file.ts";

const files = diskFiles();
let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), "tautline-disk-"));
});
afterEach(() => rm(folder, { recursive: true }));
const bytes = (text: string) => new TextEncoder().encode(text);

describe("the file port over the real disk", () => {
  it("reads whole files and parts of them; what is not there is undefined", async () => {
    const path = join(folder, "a");
    await files.create(path, bytes("0123456789"));
    const read = async (start?: number, end?: number) => new TextDecoder().decode(await files.read(path, start, end));
    expect([await read(), await read(3, 6), await read(8, 99), await read(20)]).toEqual(["0123456789", "345", "89", ""]);
    expect(await files.read(join(folder, "none"))).toBeUndefined();
    expect(await files.read(join(path, "below-a-file"))).toBeUndefined();
    expect(await files.list(join(folder, "none"))).toBeUndefined();
    await expect(files.create(path, bytes("x"))).rejects.toMatchObject({ code: "EEXIST" });
  });

  it("makes folders with those above them, and lists them", async () => {
    await files.makeFolder(join(folder, "a", "b", "c"));
    await files.makeFolder(join(folder, "a", "b", "c"));
    await files.create(join(folder, "a", "file"), bytes(""));
    const entries = await files.list(join(folder, "a"));
    expect(entries!.sort((x, y) => x.name.localeCompare(y.name))).toEqual([
      { name: "b", folder: true },
      { name: "file", folder: false },
    ]);
    await files.remove(join(folder, "a"));
    await files.remove(join(folder, "a"));
    expect(await files.list(folder)).toEqual([]);
  });

  it("appends, syncs and cuts", async () => {
    const path = join(folder, "log");
    await files.create(path, bytes("one\n"));
    const log = await files.openAppend(path);
    await log.append(bytes("two\n"));
    await log.append(bytes("tor"));
    await log.sync();
    await log.truncate(8);
    await log.append(bytes("three\n"));
    await log.sync();
    await log.close();
    expect(await readFile(path, "utf8")).toBe("one\ntwo\nthree\n");
  });

  it("replaces a file whole and leaves nothing beside it", async () => {
    const path = join(folder, "specimen.json");
    await writeWhole(files, path, bytes("old"));
    await writeWhole(files, path, bytes("new"));
    expect(await readFile(path, "utf8")).toBe("new");
    expect(await files.list(folder)).toEqual([{ name: "specimen.json", folder: false }]);
    await expect(writeWhole(files, join(folder, "none", "x"), bytes("x"))).rejects.toMatchObject({ tag: "write-failed" });
    expect((await stat(folder)).isDirectory()).toBe(true);
    expect(await files.freeBytes(folder)).toBeGreaterThan(0);
  });
});
