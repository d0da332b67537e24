import { describe, expect, it } from "vitest";
import { createId } from "#main/node/layout.ts";
import { RECORDS_PER_SNAPSHOT } from "#shared/log/snapshot.ts";
import { putSpecimen, SPECIMEN, sampleLibrary } from "#test/main/node/sample-library.ts";
import { countingBytes, SampleWriter } from "#test/main/node/sample-log.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

async function begun() {
  const files = new UnsyncedFiles();
  const { library, events } = sampleLibrary(files);
  await putSpecimen(files, library);
  const pass = await library.createPass(SPECIMEN, "AN-1");
  const log = await library.readLog(SPECIMEN, pass.id, 0);
  const writer = new SampleWriter(log);
  const append = async (lines: readonly string[], window = "w1") => {
    const { head } = await library.readLog(SPECIMEN, pass.id, 0);
    return library.appendLog(SPECIMEN, pass.id, { window, epoch: log.epoch, base: head, lines });
  };
  return { files, library, events, pass, log, writer, append };
}

describe("Library", () => {
  it("gives ids of 20 lower-case letters and digits that begin with a letter", () => {
    const random = countingBytes();
    const ids = Array.from({ length: 500 }, () => createId(random));
    expect(new Set(ids).size).toBe(500);
    for (const id of ids) expect(id).toMatch(/^[a-z][a-z0-9]{19}$/);
  });

  it("lists specimens with their passes, counted from the journal", async () => {
    const { library, pass, writer, append } = await begun();
    await append([...writer.edit(), ...writer.edit()]);
    await library.createPass(SPECIMEN, "AN-1");
    await library.createPass(SPECIMEN, "AN-2");
    const { specimens, problems } = await library.shelf();
    expect(problems).toEqual([]);
    expect(specimens[0]!.passes.map(({ annotator, number, trees, edits }) => [annotator, number, trees, edits])).toEqual([
      ["AN-1", 1, 2, 2],
      ["AN-1", 2, 0, 0],
      ["AN-2", 1, 0, 0],
    ]);
    expect(await library.setPassState(SPECIMEN, pass.id, "finished")).toMatchObject({ state: "finished", trees: 2 });
  });

  it("reports what cannot be read and lists the rest", async () => {
    const { files, library, pass, append, writer } = await begun();
    await append([...writer.edit(), ...writer.edit()]);
    await putSpecimen(files, library, "s0000000000000000002");
    files.tamper(library.layout.specimenFile("s0000000000000000002"), () => new TextEncoder().encode("{"));
    await putSpecimen(files, library, "s0000000000000000003");
    files.tamper(library.layout.specimenFile("s0000000000000000003"), (bytes) =>
      new TextEncoder().encode(new TextDecoder().decode(bytes).replace('"version": 1', '"version": 2')),
    );
    files.tamper(library.layout.journal(SPECIMEN, pass.id), (bytes) => bytes.map((byte, i) => (i === 450 ? byte ^ 1 : byte)));
    const again = sampleLibrary(files).library;
    const { specimens, problems } = await again.shelf();
    expect(specimens.map(({ specimen, passes }) => [specimen.id, passes.length])).toEqual([[SPECIMEN, 0]]);
    expect(problems).toHaveLength(3);
    expect(problems.join("\n")).toContain("newer version");
    expect(problems.join("\n")).toContain("journal.jsonl");
    for (const problem of problems) expect(problem).not.toContain("/library");
  });

  it("reports passes whose specimen's record is gone", async () => {
    const { files, library } = await begun();
    await files.remove(library.layout.specimenFile(SPECIMEN));
    const { specimens, problems } = await sampleLibrary(files).library.shelf();
    expect(specimens).toEqual([]);
    expect(problems).toEqual([expect.stringContaining("no specimen.json")]);
  });

  it("keeps both sides of a fork: the window's becomes a pass of its own with all its edits", async () => {
    const { library, pass, log, append } = await begun();
    const here = new SampleWriter(log);
    const there = new SampleWriter(log);
    await append([...here.edit("on disk")]);
    const windowLines = [...log.lines, ...there.edit("in the window"), ...there.edit("in the window")];
    const base = { seq: 0, hash: there.history.head.hash };
    await expect(
      library.appendLog(SPECIMEN, pass.id, { window: "w1", epoch: log.epoch, base, lines: windowLines.slice(1) }),
    ).rejects.toMatchObject({ tag: "conflict" });
    const kept = await library.keepBranch(SPECIMEN, pass.id, windowLines, "Recovered branch");
    expect(kept).toMatchObject({ annotator: "AN-1", number: 2, trees: 2, edits: 2, name: "Recovered branch" });
    expect(kept.id).not.toBe(pass.id);
    const recovered = await library.readLog(SPECIMEN, kept.id, 0);
    expect(recovered.epoch).not.toBe(log.epoch);
    const names = [...new SampleWriter(recovered).history.document.trees.values()].map(({ name }) => name);
    expect(names).toEqual(["in the window t1", "in the window t2"]);
    expect((await library.readLog(SPECIMEN, pass.id, 0)).lines).toHaveLength(2);
    await expect(library.keepBranch(SPECIMEN, pass.id, [], "none")).rejects.toMatchObject({ tag: "bad-request" });
  });

  it("rebuilds a lost journal from the window's lines, and never over one that is there", async () => {
    const { files, library, pass, log, writer, append } = await begun();
    const lines = writer.edit();
    await append(lines);
    const all = [...log.lines, ...lines];
    await expect(library.rebuildLog(SPECIMEN, pass.id, all)).rejects.toMatchObject({ tag: "conflict" });
    await files.remove(library.layout.pass(SPECIMEN, pass.id));
    const again = sampleLibrary(files).library;
    await expect(again.readLog(SPECIMEN, pass.id, 0)).rejects.toMatchObject({ tag: "not-found" });
    await expect(again.rebuildLog(SPECIMEN, "another", all)).rejects.toMatchObject({ tag: "conflict" });
    expect(await again.rebuildLog(SPECIMEN, pass.id, all)).toEqual({ outcome: "appended", head: writer.history.head });
    expect((await again.readLog(SPECIMEN, pass.id, 0)).lines).toEqual(all);
  });

  it("lets one window write to a pass; another may once the first has released it or is gone", async () => {
    const { library, pass, writer, append } = await begun();
    expect(await library.claimPass(SPECIMEN, pass.id, "w1")).toBe(true);
    expect(await library.claimPass(SPECIMEN, pass.id, "w1")).toBe(true);
    expect(await library.claimPass(SPECIMEN, pass.id, "w2")).toBe(false);
    const lines = writer.edit();
    await expect(append(lines, "w2")).rejects.toMatchObject({ tag: "held-elsewhere" });
    await library.releasePass(SPECIMEN, pass.id, "w2");
    expect(await library.claimPass(SPECIMEN, pass.id, "w2")).toBe(false);
    await library.releasePass(SPECIMEN, pass.id, "w1");
    await append(lines, "w2");
    expect(await library.claimPass(SPECIMEN, pass.id, "w1")).toBe(false);
    library.claims.releaseAll("w2");
    expect(await library.claimPass(SPECIMEN, pass.id, "w1")).toBe(true);
  });

  it("writes snapshots every so many records; deleting or damaging them changes nothing", async () => {
    const { files, library, pass, writer, append } = await begun();
    const snapshots = () => files.paths().filter((path) => path.includes("/snapshot-"));
    for (let i = 0; i < 3; i += 1) {
      await append(Array.from({ length: RECORDS_PER_SNAPSHOT + 1 }, () => writer.edit()[0]!));
      await expect.poll(() => snapshots().length).toBe(Math.min(2, i + 1));
    }
    await append(writer.edit());
    const expected = await library.shelf();
    expect(expected.specimens[0]!.passes[0]!.trees).toBe(3 * (RECORDS_PER_SNAPSHOT + 1) + 1);
    expect(await sampleLibrary(files).library.shelf()).toEqual(expected);
    files.tamper(snapshots().at(-1)!, () => new TextEncoder().encode("{"));
    expect(await sampleLibrary(files).library.shelf()).toEqual(expected);
    files.tamper(snapshots()[0]!, (bytes) =>
      new TextEncoder().encode(new TextDecoder().decode(bytes).replace(/"hash":"../, '"hash":"00')),
    );
    expect(await sampleLibrary(files).library.shelf()).toEqual(expected);
    for (const path of snapshots()) await files.remove(path);
    expect(await sampleLibrary(files).library.shelf()).toEqual(expected);
    expect(await library.readLog(SPECIMEN, pass.id, 0)).toMatchObject({ head: writer.history.head });
  });

  it("changes a specimen's facts, and what belongs to the volume in the volume", async () => {
    const { library, events } = await begun();
    const changed = await library.changeSpecimen(SPECIMEN, { name: "HB-08", blurFwhmMm: 0.07, handedness: "confirmed" });
    expect(changed).toMatchObject({ name: "HB-08", volume: { blurFwhmMm: 0.07, handedness: "confirmed", dtype: "uint8" } });
    expect(await library.specimen(SPECIMEN)).toEqual(changed);
    expect(events).toContainEqual({ event: "shelf" });
    await expect(library.specimen("no-such-one")).rejects.toMatchObject({ tag: "not-found" });
    await expect(library.specimen("../../etc")).rejects.toMatchObject({ tag: "not-found" });
  });

  it("removes a specimen with edits only when told to", async () => {
    const { files, library, pass, writer, append } = await begun();
    await append(writer.edit());
    await expect(library.removeSpecimen(SPECIMEN, false)).rejects.toMatchObject({ tag: "conflict", fields: { found: "1" } });
    expect((await library.readLog(SPECIMEN, pass.id, 0)).lines).toHaveLength(2);
    await library.removeSpecimen(SPECIMEN, true);
    expect(files.paths()).toEqual([]);
    expect((await library.shelf()).specimens).toEqual([]);
  });

  it("leaves everything as it was when the disk is full", async () => {
    const { files, library, pass } = await begun();
    const before = await library.shelf();
    files.room = 20;
    await expect(library.changeSpecimen(SPECIMEN, { name: "other" })).rejects.toMatchObject({ tag: "disk-full" });
    await expect(library.createPass(SPECIMEN, "AN-2")).rejects.toMatchObject({ tag: "disk-full" });
    await expect(library.setPassState(SPECIMEN, pass.id, "finished")).rejects.toMatchObject({ tag: "disk-full" });
    expect(await sampleLibrary(files).library.shelf()).toEqual(before);
    expect(files.paths().filter((path) => path.endsWith(".unfinished"))).toEqual([]);
  });
});
