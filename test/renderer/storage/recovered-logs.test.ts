import "fake-indexeddb/auto";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { Outbox } from "#renderer/storage/outbox.ts";
import { PassStore } from "#renderer/storage/pass-store.ts";
import { RecoveredLogs } from "#renderer/storage/recovered-logs.ts";
import { WindowDatabase } from "#renderer/storage/window-database.ts";
import { PassHistory } from "#shared/log/history.ts";
import { FakeJournal } from "./fake-journal.ts";
import { begun, edit, stamp } from "./written-log.ts";

let database: WindowDatabase;
let store: PassStore;
let journal: FakeJournal;
let history: PassHistory;
let told: string[];
let count = 0;

beforeEach(() => {
  database = new WindowDatabase(`recovered-${++count}`);
  store = new PassStore(database, "p1");
  const pass = begun("e1");
  history = pass.history;
  journal = new FakeJournal("e1", pass.lines);
  told = [];
});
afterEach(() => database.close());

async function opened(): Promise<Outbox> {
  const box = new Outbox({
    store,
    sender: journal,
    now: () => 77,
    branchName: () => "kept",
    askRebuild: async () => true,
    wait: () => new Promise((resolve) => setTimeout(resolve, 0)),
    changed: () => undefined,
    reconciled: () => undefined,
    setAside: (name, lines) => void told.push(`${name}: ${lines.length}`),
  });
  await box.open();
  await box.settled();
  return box;
}

/** Another window of this browser goes on; then this one makes an edit and cannot. */
async function overtaken(): Promise<string[]> {
  const box = await opened();
  const other = PassHistory.fromLines(journal.lines);
  await store.appendWaiting(edit(other, 30));
  const own = edit(history, 1);
  box.put(own);
  await box.settled();
  return own;
}

describe("edits set aside in this browser", () => {
  it("are told, listed, and become a whole pass of their own, which is kept here until it is there", async () => {
    const own = await overtaken();
    expect(told).toEqual(["kept: 1"]);
    const logs = new RecoveredLogs(store, journal);
    const [entry] = await logs.list();
    expect(entry).toMatchObject({ name: "kept", t: 77, edits: 1, isWhole: true });

    journal.failures = [new TypeError("Failed to fetch")];
    await expect(logs.keepAsPass(entry!.id)).rejects.toThrow("Failed to fetch");
    expect(await logs.list()).toHaveLength(1);

    const pass = await logs.keepAsPass(entry!.id);
    expect(pass.id).toBe("b1");
    expect(journal.branches[0]!.lines.at(-1)).toBe(own[0]);
    expect([...PassHistory.fromLines(journal.branches[0]!.lines).document.nodes.values()].map((n) => n.position[0])).toEqual([1]);
    expect(await logs.list()).toEqual([]);
    await expect(logs.keepAsPass(entry!.id)).rejects.toThrow("not kept in this browser any more");
  });

  it("keep their beginning also when the journal's log took its place meanwhile", async () => {
    const box = await opened();
    const other = PassHistory.fromLines(journal.lines);
    journal.lines.push(...edit(other, 30));
    const keep = journal.keepBranch.bind(journal);
    journal.keepBranch = async (lines, name) => {
      journal.keepBranch = keep;
      box.put(edit(history, 2));
      return keep(lines, name);
    };
    box.put(edit(history, 1));
    await box.settled();
    const logs = new RecoveredLogs(store, journal);
    const [entry] = await logs.list();
    expect(entry).toMatchObject({ edits: 1, isWhole: true });
    await logs.keepAsPass(entry!.id);
    const kept = PassHistory.fromLines(journal.branches.at(-1)!.lines);
    expect([...kept.document.nodes.values()].map((node) => node.position[0])).toEqual([1, 2]);
  });

  it("are forgotten for good when the person says so", async () => {
    await overtaken();
    const logs = new RecoveredLogs(store, journal);
    await logs.forget((await logs.list())[0]!.id);
    expect(await logs.list()).toEqual([]);
    expect(journal.branches).toEqual([]);
  });

  it("cannot be opened when what they followed is not known, and are not listed when nobody made them", async () => {
    await opened();
    const [line] = edit(history, 5);
    await store.setAside("alone", 1, [line!]);
    await store.setAside("opened only", 2, history.session("opened", stamp()));
    expect(await new RecoveredLogs(store, journal).list()).toMatchObject([{ name: "alone", isWhole: false }]);
  });
});
