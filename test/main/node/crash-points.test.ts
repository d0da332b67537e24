import { describe, expect, it } from "vitest";
import { CRASH_POINTS, type CrashPoint } from "#main/node/file-port.ts";
import type { Library } from "#main/node/library.ts";
import { putSpecimen, SPECIMEN, sampleLibrary } from "#test/main/node/sample-library.ts";
import { SampleWriter } from "#test/main/node/sample-log.ts";
import { Killed, type Stop, UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

/** What the window was told is saved, and what it would send again. */
interface Told {
  pass: string | null;
  /** Lines that were acknowledged, header included. */
  saved: string[];
  /** Lines made but not acknowledged. */
  waiting: string[];
  epoch: string;
  renamed: boolean;
  removed: boolean;
}

/** A session at the desk that passes every crash point: edits, a full disk in between, a change of the specimen, a removal. */
async function session(files: UnsyncedFiles, library: Library, told: Told): Promise<void> {
  await putSpecimen(files, library);
  const { id } = await library.createPass(SPECIMEN, "AN-1");
  const log = await library.readLog(SPECIMEN, id, 0);
  Object.assign(told, { pass: id, saved: [...log.lines], epoch: log.epoch });
  const writer = new SampleWriter(log);
  for (let batch = 0; batch < 4; batch += 1) {
    told.waiting.push(...writer.edit(), ...writer.edit());
    if (batch === 2) {
      files.room = 50;
      const error = await send(library, told).catch((thrown: unknown) => thrown);
      if (error instanceof Killed) throw error;
      expect(error).toMatchObject({ tag: "disk-full" });
      files.room = Number.POSITIVE_INFINITY;
    }
    await send(library, told);
  }
  await library.changeSpecimen(SPECIMEN, { name: "HB-07 b" });
  told.renamed = true;
  await library.setPassState(SPECIMEN, id, "finished");
  const other = "s0000000000000000002";
  await putSpecimen(files, library, other);
  await library.removeSpecimen(other, false);
  told.removed = true;
}

async function send(library: Library, told: Told): Promise<void> {
  const { head } = await library.readLog(SPECIMEN, told.pass!, told.saved.length);
  const lines = [...told.waiting];
  await library.appendLog(SPECIMEN, told.pass!, { window: "w", epoch: told.epoch, base: head, lines });
  told.saved.push(...lines);
  told.waiting = [];
}

/** Checks the library that the next process finds, and that the work goes on. */
async function checkAfter(files: UnsyncedFiles, told: Told): Promise<void> {
  const { library } = sampleLibrary(files);
  await library.removeLeftovers();
  const { specimens, problems } = await library.shelf();
  expect(problems).toEqual([]);
  if (told.pass === null) return;
  const { lines, head, epoch } = await library.readLog(SPECIMEN, told.pass, 0);
  expect(lines.slice(0, told.saved.length)).toEqual(told.saved);
  // Lines may be there that nobody was told of; they are what the window sent, in order.
  expect([...told.saved, ...told.waiting].slice(0, lines.length)).toEqual(lines);
  if (told.renamed) expect(specimens.find(({ specimen }) => specimen.id === SPECIMEN)?.specimen.name).toBe("HB-07 b");
  if (told.removed) expect(specimens).toHaveLength(1);
  // The window sends again what it waits for, from the last line it knows to be saved.
  const all = [...told.saved, ...told.waiting];
  const { before } = await library.readLog(SPECIMEN, told.pass, told.saved.length);
  const base = { seq: told.saved.length - 1, hash: before };
  const answer = await library.appendLog(SPECIMEN, told.pass, { window: "w2", epoch, base, lines: told.waiting });
  expect(answer.head.seq).toBe(all.length - 1);
  expect(head.seq).toBeLessThanOrEqual(answer.head.seq);
  expect((await library.readLog(SPECIMEN, told.pass, 0)).lines).toEqual(all);
}

const nothingTold = (): Told => ({ pass: null, saved: [], waiting: [], epoch: "", renamed: false, removed: false });

describe.each<Stop>(["kill", "power-cut", "torn"])("a process that ends by %s", (stop) => {
  it.each(CRASH_POINTS)("at %s loses no edit that was acknowledged", async (point: CrashPoint) => {
    let stops = 0;
    for (let nth = 1; nth < 100; nth += 1) {
      const files = new UnsyncedFiles();
      files.stopAt = { point, nth };
      const told = nothingTold();
      const { library } = sampleLibrary(files);
      const killed = await session(files, library, told).then(
        () => false,
        (error) => {
          if (!(error instanceof Killed) && !(error?.cause instanceof Killed)) throw error;
          return true;
        },
      );
      if (!killed) break;
      stops += 1;
      await checkAfter(files.afterStop(stop), told);
    }
    expect(stops, `${point} is never reached`).toBeGreaterThan(0);
  });
});

describe("this test", () => {
  it("finds lost edits when nothing is synced", async () => {
    const files = new UnsyncedFiles();
    const { library } = sampleLibrary(files);
    await putSpecimen(files, library);
    const { id } = await library.createPass(SPECIMEN, "AN-1");
    const log = await library.readLog(SPECIMEN, id, 0);
    const told = { ...nothingTold(), pass: id, saved: [...log.lines], epoch: log.epoch };
    files.syncLies = true;
    told.waiting = new SampleWriter(log).edit();
    await send(library, told);
    expect(told.saved).toHaveLength(2);
    await checkAfter(files.afterStop("kill"), told);
    await expect(checkAfter(files.afterStop("power-cut"), told)).rejects.toThrow();
  });
});
