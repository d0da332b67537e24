import { createHash } from "node:crypto";
import { describe, expect, it } from "vitest";
import { Journal } from "#main/node/journal.ts";
import { TautlineError } from "#shared/errors.ts";
import { PassHistory } from "#shared/log/history.ts";
import { SampleWriter } from "#test/main/node/sample-log.ts";
import { UnsyncedFiles } from "#test/main/node/unsynced-files.ts";

const PATH = "/pass/journal.jsonl";
const header = { pass: "p", specimen: "s", annotator: "AN-1", number: 1, epoch: "e1" };
const text = (bytes: Uint8Array | undefined) => new TextDecoder().decode(bytes);
const bytes = (value: string) => new TextEncoder().encode(value);
const sha256 = (line: string) => createHash("sha256").update(line).digest("hex");

async function begun(mayWrite = async () => {}) {
  const files = new UnsyncedFiles();
  await files.makeFolder("/pass");
  const { lines } = PassHistory.begin(header, { t: 1, mono: 0, session: "x" });
  const journal = await Journal.create(files, PATH, lines, mayWrite);
  return { files, journal, writer: new SampleWriter({ lines }), first: lines[0]! };
}

describe("Journal", () => {
  it("appends lines, one a line, with the SHA-256 of Node's own crypto as head", async () => {
    const { files, journal, writer, first } = await begun();
    const base = journal.head;
    expect(base).toEqual({ seq: 0, hash: sha256(first) });
    const lines = [...writer.edit(), ...writer.edit()];
    const answer = await journal.append({ epoch: "e1", base, lines });
    expect(answer).toEqual({ outcome: "appended", head: { seq: 2, hash: sha256(lines[1]!) } });
    expect(text(await files.read(PATH))).toBe(`${[first, ...lines].join("\n")}\n`);
    const read = await journal.read(1);
    expect(read).toEqual({ epoch: "e1", lines, head: answer.head, before: base.hash });
    await expect(journal.read(4)).rejects.toMatchObject({ tag: "bad-request" });
  });

  it("answers a resend as known, and takes only what is new of a partly known one", async () => {
    const { journal, writer } = await begun();
    const base = journal.head;
    const first = writer.edit();
    await journal.append({ epoch: "e1", base, lines: first });
    expect(await journal.append({ epoch: "e1", base, lines: first })).toEqual({ outcome: "known", head: journal.head });
    const second = writer.edit();
    expect(await journal.append({ epoch: "e1", base, lines: [...first, ...second] })).toMatchObject({ outcome: "appended" });
    expect((await journal.read(0)).lines).toHaveLength(3);
  });

  it("refuses logs that fork: another epoch, a base not on the chain, other lines after a common base", async () => {
    const { journal, writer } = await begun();
    const base = journal.head;
    const other = new SampleWriter(await journal.read(0));
    await journal.append({ epoch: "e1", base, lines: writer.edit("mine") });
    const before = (await journal.read(0)).lines;
    const lines = other.edit("theirs");
    for (const request of [
      { epoch: "e2", base, lines },
      { epoch: "e1", base: { seq: 0, hash: "f".repeat(64) }, lines },
      { epoch: "e1", base: { seq: 9, hash: base.hash }, lines },
      { epoch: "e1", base, lines },
    ]) {
      await expect(journal.append(request)).rejects.toMatchObject({ tag: "conflict" });
    }
    expect((await journal.read(0)).lines).toEqual(before);
  });

  it("refuses lines that do not continue the chain and writes none of them", async () => {
    const { files, journal, writer } = await begun();
    const base = journal.head;
    const [one] = writer.edit();
    const [two] = writer.edit();
    for (const lines of [
      [two!],
      [one!, one!],
      [one!, two!.replace("tree t2", "tree t9"), writer.edit()[0]!],
      ["{}"],
      ["no json"],
    ]) {
      await expect(journal.append({ epoch: "e1", base, lines })).rejects.toMatchObject({ tag: "unreadable-input" });
    }
    expect(text(await files.read(PATH)).split("\n")).toHaveLength(2);
  });

  it("drops a torn last line and cuts it off before the next append", async () => {
    for (const tail of ['{"seq":2,"par', '{"seq":2', "\0\0\0\0\0\0", "\0\0\0\0\n"]) {
      const { files, journal, writer } = await begun();
      await journal.append({ epoch: "e1", base: journal.head, lines: writer.edit() });
      const whole = text(await files.read(PATH));
      files.tamper(PATH, () => bytes(whole + tail));
      const again = (await Journal.open(files, PATH, async () => {}))!;
      expect(again.head).toEqual(journal.head);
      // Reading alone changes nothing.
      expect(text(await files.read(PATH))).toBe(whole + tail);
      const lines = writer.edit();
      await again.append({ epoch: "e1", base: again.head, lines });
      expect(text(await files.read(PATH))).toBe(`${whole}${lines[0]}\n`);
    }
  });

  it("reports a chain that is broken before its last line, naming file and line, and repairs nothing", async () => {
    const { files, journal, writer } = await begun();
    await journal.append({ epoch: "e1", base: journal.head, lines: [...writer.edit(), ...writer.edit(), ...writer.edit()] });
    const lines = text(await files.read(PATH)).split("\n");
    for (const [change, line] of [
      [lines.map((l, i) => (i === 2 ? l.replace("tree t2", "tree t7") : l)), "line 4"],
      [lines.filter((_, i) => i !== 2), "line 3"],
      [lines.map((l, i) => (i === 1 ? "rubbish" : l)), "line 2"],
    ] as const) {
      files.tamper(PATH, () => bytes(change.join("\n")));
      const error = await Journal.open(files, PATH, async () => {}).catch((thrown: unknown) => thrown);
      expect(error).toBeInstanceOf(TautlineError);
      expect((error as TautlineError).message).toContain("journal.jsonl");
      expect((error as TautlineError).message).toContain(line);
      expect(text(await files.read(PATH))).toBe(change.join("\n"));
    }
  });

  it("keeps what was saved when the disk is full, says so, and goes on once there is room", async () => {
    const { files, journal, writer } = await begun();
    await journal.append({ epoch: "e1", base: journal.head, lines: writer.edit() });
    const saved = text(await files.read(PATH));
    const lines = [...writer.edit(), ...writer.edit()];
    for (const room of [0, 10, 300, 449]) {
      files.room = room;
      const error = await journal.append({ epoch: "e1", base: journal.head, lines }).catch((thrown: unknown) => thrown);
      expect(error).toMatchObject({ tag: "disk-full", fields: { file: "journal.jsonl" } });
      expect(text(await files.read(PATH))).toBe(saved);
    }
    files.room = Number.POSITIVE_INFINITY;
    expect(await journal.append({ epoch: "e1", base: journal.head, lines })).toMatchObject({
      outcome: "appended",
      head: { seq: 3 },
    });
    expect((await Journal.open(files, PATH, async () => {}))!.head).toEqual(journal.head);
  });

  it("acknowledges nothing when a sync fails, and leaves no unsynced line behind a later one", async () => {
    const { files, journal, writer } = await begun();
    const lines = writer.edit();
    files.syncFails = true;
    await expect(journal.append({ epoch: "e1", base: journal.head, lines })).rejects.toMatchObject({ tag: "write-failed" });
    files.syncFails = false;
    expect(journal.head.seq).toBe(0);
    await journal.append({ epoch: "e1", base: journal.head, lines });
    const found = (await Journal.open(files.afterStop("power-cut"), PATH, async () => {}))!;
    expect(found.head).toEqual(journal.head);
  });

  it("asks for the right to write before every append, and appends nothing without it", async () => {
    let mine = true;
    const { journal, writer } = await begun(async () => {
      if (!mine) throw new TautlineError("held-elsewhere", "Taken over.", { what: "library", holder: "another" });
    });
    mine = false;
    await expect(journal.append({ epoch: "e1", base: journal.head, lines: writer.edit() })).rejects.toMatchObject({
      tag: "held-elsewhere",
    });
    expect((await journal.read(0)).lines).toHaveLength(1);
  });

  it("writes appends that are asked for at once one after the other", async () => {
    const { journal, writer } = await begun();
    const base = journal.head;
    const batches = Array.from({ length: 20 }, () => writer.edit());
    let lines: string[] = [];
    const answers = await Promise.all(
      batches.map((batch) => {
        lines = [...lines, ...batch];
        return journal.append({ epoch: "e1", base, lines });
      }),
    );
    expect(answers.map(({ head }) => head.seq)).toEqual(batches.map((_, i) => i + 1));
    expect((await journal.read(1)).lines).toEqual(lines);
  });

  it("refuses a newer version and a file that is no log", async () => {
    const { files } = await begun();
    const whole = text(await files.read(PATH));
    for (const [change, found] of [
      [whole.replace('"version":1', '"version":2'), "2"],
      ["", "empty"],
      [whole.replace("tautline-pass-log", "something-else"), "something-else"],
    ] as const) {
      files.tamper(PATH, () => bytes(change));
      const error = (await Journal.open(files, PATH, async () => {}).catch((thrown: unknown) => thrown)) as TautlineError;
      expect(error).toMatchObject({ tag: "unreadable-input" });
      expect(error.message).toContain(found);
    }
  });
});
