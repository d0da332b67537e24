import "fake-indexeddb/auto";
import { describe, expect, it, vi } from "vitest";
import { KeptPass, type KeptPassPlaces, WatchedPass } from "#renderer/editor/session/kept-pass.ts";
import type { KeptBranch } from "#renderer/storage/reconcile.ts";
import { WindowDatabase } from "#renderer/storage/window-database.ts";
import { TautlineError } from "#shared/errors.ts";
import { PassHistory } from "#shared/log/history.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";
import { FakeJournal } from "#test/renderer/storage/fake-journal.ts";

let names = 0;
const freshDatabase = () => new WindowDatabase(`kept-pass-${++names}`);
let clock = 1_000_000;
const away = () => new TautlineError("internal", "away", { what: "server away" });

function newJournal(): FakeJournal {
  const fields = { pass: "p".repeat(16), specimen: "s".repeat(16), annotator: "AN-1", number: 1, epoch: "e".repeat(16) };
  const begun = PassHistory.begin(fields, { t: clock, mono: 0, session: "z".repeat(16) });
  return new FakeJournal("e".repeat(16), begun.lines);
}

async function openPass(journal: FakeJournal, database: WindowDatabase, change: Partial<KeptPassPlaces> = {}) {
  const branches: KeptBranch[] = [];
  const pass = await KeptPass.open({
    database,
    pass: "p".repeat(16),
    sender: journal,
    now: () => ++clock,
    mono: () => ++clock,
    session: "a".repeat(16),
    wait: (_, signal) =>
      new Promise((resolve) => {
        signal.addEventListener("abort", () => resolve(), { once: true });
      }),
    branchName: () => "edits of then",
    askRebuild: async () => true,
    keptBranch: (branch) => void branches.push(branch),
    setAside: () => undefined,
    ...change,
  });
  return { pass, branches };
}

/** Starts a tree at x mm, as the editor does. */
async function drawOrigin(pass: KeptPass, x: number): Promise<void> {
  const plan = startTree(pass.document, pass.ids(), { at: [x, 0, 0], site: "head" });
  await pass.commit(plan.operation, "Start a tree", []);
}

const origins = (pass: KeptPass | WatchedPass) => [...pass.document.nodes.values()].map((node) => node.position[0]);

describe("a pass kept by this window", () => {
  it("says saved only once the journal has every line", async () => {
    const journal = newJournal();
    const { pass } = await openPass(journal, freshDatabase());
    await drawOrigin(pass, 1);
    expect(pass.saved.value.kind).toBe("saving");
    await pass.settled();
    expect(pass.saved.value.kind).toBe("saved");
    expect(PassHistory.fromLines(journal.lines).edits).toBe(1);
  });

  it("is whole in a new browser profile, from the journal alone, with all that can be undone", async () => {
    const journal = newJournal();
    const first = await openPass(journal, freshDatabase());
    for (const x of [1, 2, 3]) await drawOrigin(first.pass, x);
    await first.pass.undo();
    await first.pass.settled();
    const second = await openPass(journal, freshDatabase());
    expect(origins(second.pass)).toEqual([1, 2]);
    await second.pass.redo();
    expect(origins(second.pass)).toEqual([1, 2, 3]);
    for (let i = 0; i < 3; i++) await second.pass.undo();
    expect(origins(second.pass)).toEqual([]);
    expect(second.pass.canUndo).toBe(false);
  });

  it("keeps edits while the server is away, and sends them when the pass is opened again", async () => {
    const journal = newJournal();
    const database = freshDatabase();
    const first = await openPass(journal, database);
    await first.pass.settled();
    journal.failures = Array.from({ length: 50 }, away);
    await drawOrigin(first.pass, 1);
    await vi.waitFor(() => expect(first.pass.saved.value.kind).toBe("waiting"), { timeout: 10_000 });
    await first.pass.close();
    journal.failures = [];
    const second = await openPass(journal, database);
    await second.pass.settled();
    expect(origins(second.pass)).toEqual([1]);
    expect(PassHistory.fromLines(journal.lines).edits).toBe(1);
  });

  it("keeps both when window and journal went on apart, and says so", async () => {
    const journal = newJournal();
    const database = freshDatabase();
    const first = await openPass(journal, database);
    await first.pass.settled();
    journal.failures = Array.from({ length: 50 }, away);
    await drawOrigin(first.pass, 1);
    await vi.waitFor(() => expect(first.pass.saved.value.kind).toBe("waiting"), { timeout: 10_000 });
    await first.pass.close();
    journal.failures = [];
    const elsewhere = await openPass(journal, freshDatabase());
    await drawOrigin(elsewhere.pass, 7);
    await elsewhere.pass.settled();
    const again = await openPass(journal, database);
    expect(origins(again.pass)).toEqual([7]);
    expect(again.branches).toHaveLength(1);
    expect(journal.branches[0]!.name).toBe("edits of then");
    expect(PassHistory.fromLines(journal.branches[0]!.lines).edits).toBe(1);
  });

  it("writes the journal again from the browser when the library lost it and the person says so", async () => {
    const journal = newJournal();
    const database = freshDatabase();
    const first = await openPass(journal, database);
    await drawOrigin(first.pass, 1);
    await first.pass.settled();
    await first.pass.close();
    journal.gone = true;
    await expect(openPass(journal, database, { askRebuild: async () => false })).rejects.toThrow(
      "This browser still keeps its edits",
    );
    const { pass } = await openPass(journal, database);
    await pass.settled();
    expect(origins(pass)).toEqual([1]);
    expect(PassHistory.fromLines(journal.lines).edits).toBe(1);
  });

  it("tells its listeners of every change", async () => {
    const { pass } = await openPass(newJournal(), freshDatabase());
    let changes = 0;
    const stop = pass.onChange(() => {
      changes += 1;
    });
    await drawOrigin(pass, 1);
    await pass.undo();
    stop();
    await pass.redo();
    expect(changes).toBe(2);
  });
});

describe("a pass that another window writes", () => {
  it("is shown as it grows and changed by nothing here", async () => {
    const journal = newJournal();
    const { pass } = await openPass(journal, freshDatabase());
    const watched = await WatchedPass.open(journal);
    await drawOrigin(pass, 4);
    await pass.settled();
    await watched.follow();
    expect(origins(watched)).toEqual([4]);
    expect(watched.readOnly).toBe(true);
    await expect(watched.undo()).rejects.toThrow("reading only");
  });
});
