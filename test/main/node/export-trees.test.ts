import { unzipSync } from "fflate";
import { describe, expect, it } from "vitest";
import { exportTrees } from "#main/node/export-trees.ts";
import { zipped } from "#main/node/zipped.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { parseChordaeBytes } from "#shared/formats/chordae/read-chordae-file.ts";
import { putSpecimen, SPECIMEN, sampleLibrary } from "#test/main/node/sample-library.ts";
import { SampleWriter } from "#test/main/node/sample-log.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

/** Stands in for the thread that writes label volumes. */
function labels(files: UnsyncedFiles) {
  return async (trees: ChordaeFile, path: string) => {
    await files.create(path, new TextEncoder().encode(`labels of ${trees.trees.length} trees`));
    await files.syncFile(path);
  };
}

async function begun() {
  const files = new UnsyncedFiles();
  const { library } = sampleLibrary(files);
  await putSpecimen(files, library);
  const { id: pass } = await library.createPass(SPECIMEN, "AN-1");
  const log = await library.readLog(SPECIMEN, pass, 0);
  const writer = new SampleWriter(log);
  const lines = [...writer.edit(), ...writer.edit()];
  await library.appendLog(SPECIMEN, pass, { window: "w", epoch: log.epoch, base: log.head, lines });
  await files.makeFolder("/out");
  return {
    files,
    library,
    pass,
    port: exportTrees({ library, files, softwareVersion: "9.9.9", runLabels: labels(files), newId: () => "x" }),
  };
}

describe("exporting a pass", () => {
  it("gives the tree file of the journal's document, with specimen, annotator and program named in it", async () => {
    const { port, pass } = await begun();
    const result = await port.exportTrees({ specimen: SPECIMEN, pass, format: "chordae" });
    if (!("bytes" in result)) throw new Error("expected bytes");
    expect(result.name).toBe("HB-07-AN-1-1.chordae.json");
    expect(result.lost).toEqual([]);
    const file = parseChordaeBytes(result.bytes, result.name);
    expect(file).toMatchObject({
      annotator: "AN-1",
      pass: 1,
      software: { name: "Tautline", version: "9.9.9" },
      volume: { name: "HB-07", sha256: "0".repeat(64), handedness: "unknown", spacing: [0.04, 0.04, 0.04] },
    });
    expect(file.trees.map(({ id }) => id)).toEqual(["t1", "t2"]);
    const again = await port.exportTrees({ specimen: SPECIMEN, pass, format: "chordae" });
    expect("bytes" in again && again.bytes).toEqual(result.bytes);
  });

  it("writes the same bytes whole to a path", async () => {
    const { port, pass, files } = await begun();
    const bytes = await port.exportTrees({ specimen: SPECIMEN, pass, format: "chordae" });
    const answer = await port.exportTrees({ specimen: SPECIMEN, pass, format: "chordae", path: "/out/mine.chordae.json" });
    expect(answer).toEqual({ written: ["/out/mine.chordae.json"], lost: [] });
    expect(await files.read("/out/mine.chordae.json")).toEqual("bytes" in bytes && bytes.bytes);
  });

  it("gives every format its file, with what it loses said, and tables as a zip", async () => {
    const { port, pass, files } = await begun();
    const before = files.paths();
    const names: [string, string, number][] = [];
    for (const format of ["graphml", "vtp", "tables", "labels"] as const) {
      const result = await port.exportTrees({ specimen: SPECIMEN, pass, format });
      if (!("bytes" in result)) throw new Error("expected bytes");
      names.push([result.name, result.type.split(";")[0]!, result.lost.length]);
      if (format === "tables") {
        expect(Object.keys(unzipSync(result.bytes)).sort()).toEqual(["columns.csv", "nodes.csv", "strands.csv", "trees.csv"]);
      }
      if (format === "labels") expect(new TextDecoder().decode(result.bytes)).toBe("labels of 2 trees");
    }
    expect(names.map(([name, type]) => [name, type])).toEqual([
      ["HB-07-AN-1-1.graphml", "application/graphml+xml"],
      ["HB-07-AN-1-1.vtp", "application/xml"],
      ["HB-07-AN-1-1.zip", "application/zip"],
      ["HB-07-AN-1-1-labels.nrrd", "application/octet-stream"],
    ]);
    for (const [, , lost] of names) expect(lost).toBeGreaterThan(0);
    expect(files.paths()).toEqual(before);
  });

  it("writes tables into a folder and labels whole to a path", async () => {
    const { port, pass, files } = await begun();
    const tables = await port.exportTrees({ specimen: SPECIMEN, pass, format: "tables", path: "/out/tables" });
    expect("written" in tables && [...tables.written].sort()).toEqual(
      ["columns", "nodes", "strands", "trees"].map((name) => `/out/tables/${name}.csv`),
    );
    await port.exportTrees({ specimen: SPECIMEN, pass, format: "labels", path: "/out/labels.nrrd" });
    expect(new TextDecoder().decode(await files.read("/out/labels.nrrd"))).toBe("labels of 2 trees");
    expect(files.paths().filter((path) => path.endsWith(".unfinished"))).toEqual([]);
  });

  it("leaves nothing of a label volume that could not be written", async () => {
    const { port, pass, files } = await begun();
    const before = files.paths();
    files.room = 5;
    for (const path of ["/out/labels.nrrd", undefined]) {
      const request = { specimen: SPECIMEN, pass, format: "labels" as const, ...(path === undefined ? {} : { path }) };
      await expect(port.exportTrees(request)).rejects.toBeDefined();
      expect(files.paths()).toEqual(before);
    }
  });

  it("leaves no part of a file when the disk is full, and what was there before as it was", async () => {
    const { port, pass, files } = await begun();
    await files.create("/out/mine.chordae.json", Uint8Array.of(1, 2, 3));
    files.room = 100;
    const request = { specimen: SPECIMEN, pass, format: "chordae", path: "/out/mine.chordae.json" } as const;
    await expect(port.exportTrees(request)).rejects.toMatchObject({ tag: "disk-full" });
    expect(files.paths().filter((path) => path.startsWith("/out"))).toEqual(["/out/mine.chordae.json"]);
    expect(await files.read("/out/mine.chordae.json")).toEqual(Uint8Array.of(1, 2, 3));
  });

  it("writes nowhere into the library and to no half path", async () => {
    const { port, pass, files } = await begun();
    const before = files.paths();
    for (const path of ["/library/x.json", "/library", "/library/specimens/../x", "x.json", "../x.json"]) {
      await expect(port.exportTrees({ specimen: SPECIMEN, pass, format: "chordae", path })).rejects.toMatchObject({
        tag: "bad-request",
      });
    }
    expect(files.paths()).toEqual(before);
    await expect(port.exportTrees({ specimen: SPECIMEN, pass: "none", format: "chordae" })).rejects.toMatchObject({
      tag: "not-found",
    });
  });
});

describe("a zip of several files", () => {
  it("holds them under their names, and is the same for the same files", () => {
    const files = [
      { name: "a.csv", bytes: Uint8Array.of(1) },
      { name: "b.csv", bytes: Uint8Array.of(2, 3) },
    ];
    expect(unzipSync(zipped(files))).toEqual({ "a.csv": Uint8Array.of(1), "b.csv": Uint8Array.of(2, 3) });
    expect(zipped(files)).toEqual(zipped(files));
  });
});
