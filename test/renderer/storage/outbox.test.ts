import "fake-indexeddb/auto";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { Outbox, type OutboxPlaces, type OutboxState } from "#renderer/storage/outbox.ts";
import { PassStore } from "#renderer/storage/pass-store.ts";
import type { Reconciled } from "#renderer/storage/reconcile.ts";
import { WindowDatabase } from "#renderer/storage/window-database.ts";
import { TautlineError } from "#shared/errors.ts";
import { PassHistory } from "#shared/log/history.ts";
import { FakeJournal } from "./fake-journal.ts";
import { begun, edit, stamp } from "./written-log.ts";

let database: WindowDatabase;
let store: PassStore;
let journal: FakeJournal;
let states: OutboxState[];
let reconciled: Reconciled[];
let waits: number[];
let history: PassHistory;
let count = 0;

beforeEach(() => {
  count += 1;
  database = new WindowDatabase(`outbox-${count}`);
  store = new PassStore(database, "p1");
  const pass = begun("e1");
  history = pass.history;
  journal = new FakeJournal("e1", pass.lines);
  states = [];
  reconciled = [];
  waits = [];
});
afterEach(() => database.close());

function outbox(more: Partial<OutboxPlaces> = {}): Outbox {
  return new Outbox({
    store,
    sender: journal,
    now: () => 77,
    branchName: (t) => `Recovered ${t}`,
    askRebuild: async () => true,
    wait: async (ms) => {
      waits.push(ms);
      await new Promise((resolve) => setTimeout(resolve, 0));
    },
    changed: (state) => states.push(state),
    reconciled: (result) => reconciled.push(result),
    ...more,
  });
}

const away = () => new TypeError("Failed to fetch");
const kinds = () => states.map((state) => state.kind).filter((kind, i, all) => kind !== all[i - 1]);

describe("the outbox", () => {
  it("says saved only after the journal has the lines", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    states = [];
    const seen: { kind: string; onDisk: number; inStore: number }[] = [];
    const watched = outbox({
      changed: (state) => seen.push({ kind: state.kind, onDisk: journal.lines.length, inStore: 0 }),
    });
    await watched.open();
    await watched.settled();
    seen.length = 0;
    watched.put(edit(history));
    watched.put(edit(history));
    await watched.settled();
    expect(seen[0]!.kind).toBe("saving");
    for (const { kind, onDisk } of seen) if (kind === "saved") expect(onDisk).toBe(3);
    expect(watched.state).toEqual({ kind: "saved", at: 77 });
    expect(await store.loadPass()).toEqual({ epoch: "e1", lines: journal.lines, acknowledged: 2 });
  });

  it("keeps lines as waiting before it sends them, so that a page that dies in between loses none", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    let inStoreWhenSent = -1;
    const append = journal.appendLog.bind(journal);
    journal.appendLog = async (request) => {
      inStoreWhenSent = (await store.waiting())!.lines.length;
      return append(request);
    };
    box.put(edit(history));
    await box.settled();
    expect(inStoreWhenSent).toBe(1);
  });

  it("sends one request at a time and all lines in order, however they come", async () => {
    const box = outbox();
    await box.open();
    const all: string[] = [];
    for (let k = 0; k < 40; k++) {
      const lines = edit(history);
      all.push(...lines);
      box.put(lines);
      if (k % 7 === 0) await new Promise((resolve) => setTimeout(resolve, 1));
    }
    await box.settled();
    expect(journal.lines.slice(1)).toEqual(all);
    expect(journal.greatestUnderWay).toBe(1);
    expect(journal.appends).toBeLessThan(40);
  });

  it("tries again with growing pauses while the server is away, and says waiting meanwhile", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    states = [];
    journal.failures = [away(), away(), away(), away(), away(), away(), away(), away()];
    box.put(edit(history));
    await box.settled();
    expect(kinds()).toEqual([
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "waiting",
      "saving",
      "saved",
    ]);
    expect(waits).toEqual([500, 1000, 2000, 4000, 8000, 16000, 30000, 30000]);
    expect(journal.lines).toHaveLength(2);
  });

  it("does not write twice when an answer was lost on the way", async () => {
    const box = outbox();
    await box.open();
    journal.loseAnswer = true;
    box.put(edit(history));
    await box.settled();
    expect(journal.lines).toHaveLength(2);
    expect(box.state.kind).toBe("saved");
  });

  it("is stuck with the reason when the disk is full, and goes on when there is room", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    states = [];
    journal.failures = [new TautlineError("disk-full", "The disk is full.", { file: "journal", needed: 10, free: 0 })];
    box.put(edit(history));
    await box.settled();
    expect(states.find((state) => state.kind === "stuck")).toMatchObject({
      records: 1,
      final: false,
      error: { tag: "disk-full" },
    });
    expect(box.state.kind).toBe("saved");
  });

  it("stops for good when somebody else holds the pass, and keeps the lines", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    journal.failures = [new TautlineError("held-elsewhere", "Another window has it.", { what: "pass", holder: "w2" })];
    box.put(edit(history));
    await box.settled();
    expect(box.state).toMatchObject({ kind: "stuck", final: true });
    expect((await store.waiting())!.lines).toHaveLength(1);
    box.retry();
    await box.settled();
    expect(box.state.kind).toBe("saved");
  });

  it("leaves what it could not send in the store when it is closed", async () => {
    const box = outbox({ wait: (_, signal) => new Promise((resolve) => signal.addEventListener("abort", () => resolve())) });
    await box.open();
    await box.settled();
    journal.failures = [away(), away()];
    box.put(edit(history));
    await new Promise((resolve) => setTimeout(resolve, 20));
    box.put(edit(history));
    await box.close();
    expect((await store.waiting())!.lines).toHaveLength(2);
  });
});

describe("opening a pass", () => {
  it("takes the whole journal when this browser never had the pass (or its profile was deleted)", async () => {
    journal.lines.push(...edit(history), ...edit(history));
    const box = outbox();
    expect(await box.open()).toEqual({ outcome: "replaced", branch: null });
    expect((await store.loadPass())!.lines).toEqual(journal.lines);
  });

  it("sends what the journal lacks", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    await store.appendWaiting([...edit(history), ...edit(history)]);
    const box = outbox();
    expect(await box.open()).toEqual({ outcome: "agreed" });
    await box.settled();
    expect(PassHistory.fromLines(journal.lines).edits).toBe(2);
    expect(box.state.kind).toBe("saved");
  });

  it("sends confirmed lines too when an older copy of the journal was put back", async () => {
    const first = edit(history);
    const second = edit(history);
    await store.replaceWithDisk("e1", [...journal.lines, ...first, ...second]);
    journal.lines = [...journal.lines, ...first];
    const box = outbox();
    await box.open();
    await box.settled();
    expect(journal.lines).toEqual([...(await store.loadPass())!.lines]);
    expect(journal.lines).toHaveLength(3);
  });

  it("takes what the journal has and the browser lacks", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    const added = [...edit(history), ...edit(history)];
    journal.lines.push(...added);
    expect(await outbox().open()).toEqual({ outcome: "taken", added });
    expect(await store.loadPass()).toEqual({ epoch: "e1", lines: journal.lines, acknowledged: 2 });
  });

  it("marks lines whose answer was lost as confirmed", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    const lines = [...edit(history), ...edit(history)];
    await store.appendWaiting(lines);
    journal.lines.push(lines[0]!);
    const box = outbox();
    expect(await box.open()).toEqual({ outcome: "agreed" });
    await box.settled();
    expect((await store.loadPass())!.acknowledged).toBe(2);
    expect(journal.lines).toHaveLength(3);
  });

  it("keeps both when they fork: the window's edits as a branch on disk, the journal's in their place", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    const other = PassHistory.fromLines(journal.lines);
    const own = [...edit(history, 1), ...edit(history, 2)];
    await store.appendWaiting(own);
    journal.lines.push(...edit(other, 30));
    const windowLog = (await store.loadPass())!.lines;
    const result = await outbox().open();
    expect(result).toMatchObject({
      outcome: "replaced",
      branch: { name: "Recovered 77", common: 0, lines: 2, pass: { id: "b1" } },
    });
    expect(journal.branches).toEqual([{ name: "Recovered 77", lines: windowLog }]);
    expect((await store.loadPass())!.lines).toEqual(journal.lines);
    expect(await store.recovered()).toEqual([]);
  });

  it("changes nothing when the branch could not be kept on disk; the copy set aside stays", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    const other = PassHistory.fromLines(journal.lines);
    await store.appendWaiting(edit(history, 1));
    journal.lines.push(...edit(other, 30));
    const before = await store.loadPass();
    const idle = outbox({ wait: (_, signal) => new Promise((resolve) => signal.addEventListener("abort", () => resolve())) });
    // The journal can be read, the branch cannot be kept; twice, since it is tried again.
    journal.failures = [null, null, away(), null, null, away()];
    expect(await idle.open()).toEqual({ outcome: "offline" });
    await idle.close();
    expect((await store.loadPass())!.lines).toEqual(before!.lines);
    expect((await store.recovered()).map((log) => log.lines)).toEqual([before!.lines]);
    expect(journal.branches).toEqual([]);
  });

  it("asks nobody about lines that only say when a session opened", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    const other = PassHistory.fromLines(journal.lines);
    await store.appendWaiting(history.session("opened", stamp()));
    journal.lines.push(...edit(other));
    expect(await outbox().open()).toEqual({ outcome: "replaced", branch: null });
    expect(journal.branches).toEqual([]);
  });

  it("keeps both when the journal is another log under the same name", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    await store.appendWaiting(edit(history));
    const stranger = begun("e2");
    journal.lines = [...stranger.lines];
    journal.epoch = "e2";
    expect(await outbox().open()).toMatchObject({ outcome: "replaced", branch: { common: -1 } });
    expect((await store.loadPass())!.epoch).toBe("e2");
  });

  it("opens from the browser when the server does not answer, and catches up when it does", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    journal.failures = [away(), away()];
    const box = outbox();
    expect(await box.open()).toEqual({ outcome: "offline" });
    box.put(edit(history));
    await box.settled();
    expect(journal.lines).toHaveLength(2);
    expect(box.state.kind).toBe("saved");
  });

  it("writes a lost journal again from the browser on request, and only then", async () => {
    await store.replaceWithDisk("e1", journal.lines);
    await store.appendWaiting(edit(history));
    journal.gone = true;
    await expect(outbox({ askRebuild: async () => false }).open()).rejects.toMatchObject({ tag: "not-found" });
    expect((await store.loadPass())!.lines).toHaveLength(2);
    const box = outbox();
    expect(await box.open()).toEqual({ outcome: "rebuilt" });
    await box.settled();
    expect(journal.lines).toEqual((await store.loadPass())!.lines);
  });

  it("brings both together again when the journal went another way while the pass was open", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    const other = PassHistory.fromLines(journal.lines);
    journal.lines.push(...edit(other, 30));
    box.put(edit(history, 1));
    await box.settled();
    expect(reconciled).toMatchObject([{ outcome: "replaced", branch: { common: 0 } }]);
    expect(journal.branches).toHaveLength(1);
    expect((await store.loadPass())!.lines).toEqual(journal.lines);
  });
});

describe("an edit made in the moment in which the journal is taken", () => {
  it("is set aside, and the outbox goes on", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    const other = PassHistory.fromLines(journal.lines);
    journal.lines.push(...edit(other, 30));
    const keep = journal.keepBranch.bind(journal);
    const late: string[] = [];
    journal.keepBranch = async (lines, name) => {
      late.push(...edit(history, 2));
      box.put(late);
      return keep(lines, name);
    };
    box.put(edit(history, 1));
    await box.settled();
    expect(box.state.kind).toBe("saved");
    expect(await store.recovered()).toMatchObject([{ lines: late }]);
    const anew = PassHistory.fromLines((await store.loadPass())!.lines);
    box.put(edit(anew));
    await box.settled();
    expect(journal.lines).toHaveLength(3);
  });
});

describe("a browser that cannot keep lines", () => {
  it("sends them past its store, and the store catches up when it works again", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    const append = store.appendWaiting.bind(store);
    const take = store.appendFromDisk.bind(store);
    const full = async () => {
      throw new DOMException("no room", "QuotaExceededError");
    };
    store.appendWaiting = full;
    store.appendFromDisk = full;
    box.put(edit(history));
    await box.settled();
    box.put(edit(history));
    await box.settled();
    expect(journal.lines).toHaveLength(3);
    expect(box.state.kind).toBe("saved");
    expect((await store.loadPass())!.lines).toHaveLength(1);
    store.appendWaiting = append;
    store.appendFromDisk = take;
    box.put(edit(history));
    await box.settled();
    expect(journal.lines).toHaveLength(4);
    expect((await store.loadPass())!.lines).toEqual(journal.lines);
    expect(reconciled).toEqual([]);
  });

  it("sets lines aside that another window of this browser left without their base", async () => {
    const box = outbox();
    await box.open();
    await box.settled();
    const other = PassHistory.fromLines(journal.lines);
    await store.appendWaiting(edit(other, 30));
    const own = edit(history, 1);
    box.put(own);
    await box.settled();
    expect(box.state).toMatchObject({ kind: "stuck", final: true, error: { tag: "held-elsewhere" } });
    expect(await store.recovered()).toMatchObject([{ lines: own }]);
  });
});
