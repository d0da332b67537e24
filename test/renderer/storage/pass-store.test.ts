import "fake-indexeddb/auto";
import Dexie from "dexie";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { keepSnapshot, openHistory } from "#renderer/storage/open-history.ts";
import { PassStore } from "#renderer/storage/pass-store.ts";
import { Settings } from "#renderer/storage/settings.ts";
import { SCHEMA_VERSIONS, WindowDatabase } from "#renderer/storage/window-database.ts";
import { PassHistory } from "#shared/log/history.ts";
import { hashOfLine } from "#shared/log/line.ts";
import { snapshotOf } from "#shared/log/snapshot.ts";
import { begun, edit, stamp } from "./written-log.ts";

let database: WindowDatabase;
let store: PassStore;
let count = 0;

beforeEach(() => {
  count += 1;
  database = new WindowDatabase(`test-${count}`);
  store = new PassStore(database, "p1");
});
afterEach(() => {
  database.close();
});

describe("the log of a pass in the browser", () => {
  it("is null for a pass that this browser never had", async () => {
    expect(await store.loadPass()).toBeNull();
    expect(await store.waiting()).toBeNull();
  });

  it("keeps lines in order, tells confirmed from waiting ones, and finds them after the database was opened again", async () => {
    const { history, lines } = begun();
    await store.replaceWithDisk("e1", lines);
    const added = [...edit(history), ...edit(history), ...edit(history)];
    await store.appendWaiting(added);
    await store.acknowledge(2);
    database.close();
    const again = new PassStore(new WindowDatabase(`test-${count}`), "p1");
    expect(await again.loadPass()).toEqual({ epoch: "e1", lines: [...lines, ...added], acknowledged: 2 });
    const waiting = await again.waiting();
    expect(waiting).toEqual({ epoch: "e1", base: { seq: 2, hash: hashOfLine(added[1]!) }, lines: [added[2]] });
  });

  it("keeps more than ten lines in the order of their numbers, not of their text", async () => {
    const { history, lines } = begun();
    for (let k = 0; k < 25; k++) lines.push(...edit(history));
    await store.replaceWithDisk("e1", lines);
    expect((await store.loadPass())!.lines).toEqual(lines);
  });

  it("refuses lines that leave a gap or follow another line, and keeps none of them", async () => {
    const { history, lines } = begun();
    await store.replaceWithDisk("e1", lines);
    const [first] = edit(history);
    const second = edit(history);
    await expect(store.appendWaiting(second)).rejects.toMatchObject({ tag: "held-elsewhere" });
    await store.appendWaiting([first!]);
    const other = PassHistory.fromLines(lines);
    edit(other, 9);
    await expect(store.appendWaiting(edit(other))).rejects.toMatchObject({ tag: "held-elsewhere" });
    expect((await store.loadPass())!.lines).toEqual([...lines, first]);
  });

  it("keeps passes apart", async () => {
    const { lines } = begun();
    await store.replaceWithDisk("e1", lines);
    const other = new PassStore(database, "p10");
    await other.replaceWithDisk("e2", lines);
    await store.forget();
    expect(await store.loadPass()).toBeNull();
    expect((await other.loadPass())!.lines).toEqual(lines);
  });

  it("sets a log aside under a name and keeps it when the pass is forgotten", async () => {
    const { history, lines } = begun();
    await store.replaceWithDisk("e1", lines);
    const added = edit(history);
    await store.appendWaiting(added);
    await store.setAside("Recovered", 5);
    await store.forget();
    expect(await store.recovered()).toMatchObject([{ name: "Recovered", t: 5, epoch: "e1", lines: [...lines, ...added] }]);
  });
});

describe("opening a history from the browser's store", () => {
  it("says the same with a snapshot, without it, and with a damaged one", async () => {
    const { history, lines } = begun();
    await store.replaceWithDisk("e1", lines);
    await store.appendWaiting(edit(history));
    const snapshot = snapshotOf(history);
    await store.appendWaiting([...edit(history), ...history.undo(stamp())]);
    const log = (await store.loadPass())!;
    const plain = await openHistory(store, log);
    await store.saveSnapshot(snapshot);
    expect((await openHistory(store, log)).state).toEqual(plain.state);
    await store.saveSnapshot({ ...snapshot, nodes: [{ id: "n1" }] } as never);
    expect((await openHistory(store, log)).state).toEqual(plain.state);
    await store.saveSnapshot({ ...snapshot, hash: "0".repeat(64) });
    expect((await openHistory(store, log)).state).toEqual(plain.state);
  });

  it("keeps a snapshot every 200 records", async () => {
    const { history } = begun();
    let latest = 0;
    while (history.head.seq < 199) edit(history);
    latest = await keepSnapshot(store, history, latest);
    expect(await store.latestSnapshot()).toBeUndefined();
    edit(history);
    latest = await keepSnapshot(store, history, latest);
    expect(latest).toBe(200);
    expect((await store.latestSnapshot())!.seq).toBe(200);
  });
});

describe("versions of the browser's store", () => {
  it.each(SCHEMA_VERSIONS.map(({ version }) => version))("data of version %i is there after the upgrade", async (version) => {
    const { history, lines } = begun();
    lines.push(...edit(history));
    // Written with the version's own table list, as a program of that time would have.
    const old = new Dexie(`old-${version}`);
    for (const known of SCHEMA_VERSIONS.slice(0, version)) old.version(known.version).stores({ ...known.stores });
    await old.open();
    await old.table("passes").add({ pass: "p1", epoch: "e1" });
    await old
      .table("lines")
      .bulkAdd(lines.map((line, seq) => ({ pass: "p1", seq, line, state: seq === 0 ? "acknowledged" : "waiting" })));
    await old.table("settings").add({ key: "theme", value: "dark" });
    old.close();
    const now = new WindowDatabase(`old-${version}`);
    expect(await new PassStore(now, "p1").loadPass()).toEqual({ epoch: "e1", lines, acknowledged: 0 });
    expect(await new Settings(now).get("theme")).toBe("dark");
    now.close();
  });

  it("a later version keeps what this one wrote", async () => {
    const { lines } = begun();
    await store.replaceWithDisk("e1", lines);
    database.close();
    const later = new WindowDatabase(`test-${count}`, [...SCHEMA_VERSIONS, { version: 99, stores: { added: "key" } }]);
    expect((await new PassStore(later, "p1").loadPass())!.lines).toEqual(lines);
    later.close();
  });

  it("version 1 is as it was shipped", () => {
    expect(SCHEMA_VERSIONS[0]).toEqual({
      version: 1,
      stores: {
        passes: "pass",
        lines: "[pass+seq], [pass+state+seq]",
        snapshots: "pass",
        recovered: "++id, pass",
        settings: "key",
      },
    });
  });
});

describe("settings of the window", () => {
  it("are kept by key", async () => {
    const settings = new Settings(database);
    expect(await settings.get("theme")).toBeUndefined();
    await settings.set("theme", "light");
    await settings.set("theme", "dark");
    expect(await settings.get("theme")).toBe("dark");
    await settings.remove("theme");
    expect(await settings.get("theme")).toBeUndefined();
  });
});
