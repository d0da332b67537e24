import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { putSpecimen, SPECIMEN, sampleLibrary } from "#test/main/node/sample-library.ts";
import { SampleWriter } from "#test/main/node/sample-log.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

async function filled() {
  const files = new UnsyncedFiles();
  const { library } = sampleLibrary(files);
  await putSpecimen(files, library);
  const { id: pass } = await library.createPass(SPECIMEN, "AN-1");
  const log = await library.readLog(SPECIMEN, pass, 0);
  const writer = new SampleWriter(log);
  const lines = [...writer.edit(), ...writer.edit()];
  await library.appendLog(SPECIMEN, pass, { window: "w", epoch: log.epoch, base: log.head, lines });
  await library.setPassState(SPECIMEN, pass, "finished");
  return { files, library, pass, log, writer };
}

/** Seeded places to damage, spread over the file. */
function* damage(bytes: Uint8Array, seed: number): Generator<Uint8Array> {
  let state = seed;
  const next = (below: number) => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0; // Numerical Recipes' generator
    return Math.floor((state / 2 ** 32) * below);
  };
  yield new Uint8Array(0);
  for (let i = 0; i < 60; i += 1) {
    yield bytes.slice(0, next(bytes.length));
    const flipped = bytes.slice();
    const at = next(bytes.length);
    flipped[at] = flipped[at]! ^ (1 << next(8));
    yield flipped;
    const from = next(bytes.length);
    yield Uint8Array.from([...bytes.slice(0, from), ...bytes.slice(from + 1 + next(40))]);
  }
}

describe("a library with a damaged file", () => {
  it("opens all the same, lists the rest, and names the file in a sentence", async () => {
    const { files, library, pass } = await filled();
    const paths = [
      library.layout.specimenFile(SPECIMEN),
      library.layout.passFile(SPECIMEN, pass),
      library.layout.journal(SPECIMEN, pass),
    ];
    let reported = 0;
    for (const [i, path] of paths.entries()) {
      const whole = (await files.read(path))!;
      for (const bytes of damage(whole, i + 1)) {
        files.tamper(path, () => bytes);
        const again = sampleLibrary(files).library;
        const { specimens, problems } = await again.shelf();
        expect(specimens.length + problems.length).toBeGreaterThan(0);
        reported += problems.length;
        for (const problem of problems) expect(problem).toMatch(/specimen\.json|pass\.json|journal\.jsonl/);
        for (const read of [again.specimen(SPECIMEN), again.readLog(SPECIMEN, pass, 0), again.passes.summary(SPECIMEN, pass)]) {
          await read.catch((error) => expect(isTautlineError(error), String(error)).toBe(true));
        }
        expect(await files.read(path)).toEqual(bytes);
      }
      files.tamper(path, () => whole);
    }
    expect(reported).toBeGreaterThan(100);
  });
});

describe("a library on a disk that refuses to write", () => {
  it.each(["EROFS", "EIO", "ENODEV", "EACCES"])(
    "%s: says so with the file's name, loses nothing, and goes on afterwards",
    async (code) => {
      const { files, library, pass, log, writer } = await filled();
      const before = await library.readLog(SPECIMEN, pass, 0);
      const shelf = await library.shelf();
      const lines = writer.edit();
      const append = () => library.appendLog(SPECIMEN, pass, { window: "w", epoch: log.epoch, base: before.head, lines });
      files.refuses = code;
      for (const write of [
        append(),
        library.changeSpecimen(SPECIMEN, { name: "x" }),
        library.setPassState(SPECIMEN, pass, "under-way"),
        library.createPass(SPECIMEN, "AN-2"),
      ]) {
        const error = await write.then(
          () => null,
          (thrown: unknown) => thrown,
        );
        expect(error).toMatchObject({ tag: "write-failed", fields: { reason: code } });
        expect((error as Error).message).not.toContain("/library");
      }
      files.refuses = null;
      expect(await library.readLog(SPECIMEN, pass, 0)).toEqual(before);
      expect(await sampleLibrary(files).library.shelf()).toEqual(shelf);
      expect(await append()).toMatchObject({ outcome: "appended" });
    },
  );
});
