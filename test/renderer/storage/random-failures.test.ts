import "fake-indexeddb/auto";
import { describe, expect, it } from "vitest";
import type { LogSender } from "#renderer/storage/log-sender.ts";
import { openHistory } from "#renderer/storage/open-history.ts";
import { Outbox } from "#renderer/storage/outbox.ts";
import { PassStore } from "#renderer/storage/pass-store.ts";
import { WindowDatabase } from "#renderer/storage/window-database.ts";
import { PassHistory } from "#shared/log/history.ts";
import { pick, seeded } from "../../shared/trees/seeded-random.ts";
import { FakeJournal } from "./fake-journal.ts";
import { begun, edit, stamp } from "./written-log.ts";

const tick = (ms = 0) => new Promise<void>((resolve) => setTimeout(resolve, ms));
const never = new Promise<never>(() => {});

/** A page that can die: from then on nothing it sends arrives, and no answer reaches it. */
class Page {
  dead = false;
  private readonly journal: FakeJournal;
  readonly outbox: Outbox;
  readonly store: PassStore;
  history: PassHistory | null = null;

  constructor(database: WindowDatabase, journal: FakeJournal, saved: (lines: readonly string[]) => void) {
    this.journal = journal;
    this.store = new PassStore(database, "p1");
    const alive = <A extends unknown[], R>(work: (...args: A) => Promise<R>) => {
      return async (...args: A): Promise<R> => {
        if (this.dead) return never;
        const answer = await work(...args);
        return this.dead ? never : answer;
      };
    };
    const sender: LogSender = {
      readLog: alive((from: number) => this.journal.readLog(from)),
      appendLog: alive((request) => this.journal.appendLog(request)),
      keepBranch: alive((lines, name) => this.journal.keepBranch(lines, name)),
      rebuildLog: alive((lines) => this.journal.rebuildLog(lines)),
    };
    this.outbox = new Outbox({
      store: this.store,
      sender,
      now: () => 1,
      branchName: () => "kept",
      askRebuild: async () => true,
      wait: () => (this.dead ? never : tick()),
      changed: (state) => {
        if (state.kind === "saved" && !this.dead) saved(this.put);
      },
      reconciled: () => {
        this.history = null;
        void this.reopen();
      },
      setAside: (_, lines) => {
        for (const line of lines) this.put.splice(this.put.indexOf(line), 1);
        this.aside.push(...lines);
      },
    });
  }

  readonly put: string[] = [];
  readonly aside: string[] = [];

  async open(): Promise<void> {
    await this.outbox.open();
    await this.reopen();
  }

  private async reopen(): Promise<void> {
    this.history = await openHistory(this.store, (await this.store.loadPass())!);
  }

  edit(x: number): void {
    // While the history is being opened anew, nothing can be edited.
    if (this.history === null) return;
    const lines = edit(this.history, x);
    this.put.push(...lines);
    this.outbox.put(lines);
  }
}

/** Places of all trees that a log ever named: each edit of these tests has a place of its own. */
function placesIn(lines: readonly string[]): number[] {
  return lines.flatMap((line) => [...line.matchAll(/"position":\[(\d+),0,0\]/g)].map((match) => Number(match[1])));
}

// Slow model: none needed. Whatever was called saved must be found in the journal or in a branch that was kept on disk; whatever
// was only kept in the browser must be there after the last opening. Source: the order of a commit (kept, sent, confirmed, said).
describe("random failures of server, network and page", () => {
  let savedInAll = 0;
  let branchesInAll = 0;

  it.each(Array.from({ length: 20 }, (_, i) => i + 1))("seed %i: nothing that was called saved is lost", async (seed) => {
    const random = seeded(seed);
    const { lines } = begun("e1");
    const journal = new FakeJournal("e1", lines);
    const database = new WindowDatabase(`random-${seed}`);
    const saved = new Set<number>();
    const savedLines = (put: readonly string[]) => {
      for (const x of placesIn(put)) saved.add(x);
    };
    let page = new Page(database, journal, savedLines);
    await page.open();
    let next = 1;
    for (let step = 0; step < 60; step++) {
      const what = pick(random, ["edit", "edit", "edit", "edit", "rest", "away", "lose", "die", "foreign"])!;
      if (what === "edit" && page.outbox.state.kind !== "stuck") page.edit(next++);
      if (what === "rest") await page.outbox.settled();
      if (what === "away")
        journal.failures = Array.from({ length: Math.ceil(random() * 3) }, () => new TypeError("Failed to fetch"));
      if (what === "lose") journal.loseAnswer = true;
      if (what === "foreign" && random() < 0.3) {
        const other = PassHistory.fromLines(journal.lines);
        const x = 1000 + next++;
        journal.lines.push(...edit(other, x), ...other.undo(stamp()));
        saved.add(x);
      }
      if (what === "die") {
        page.dead = true;
        await tick(3);
        journal.failures = [];
        journal.loseAnswer = false;
        page = new Page(database, journal, savedLines);
        await page.open();
      }
      if (random() < 0.5) await tick();
    }
    await tick(3);
    page.dead = true;
    await tick(3);
    journal.failures = [];
    journal.loseAnswer = false;
    const inBrowser = placesIn((await page.store.loadPass())!.lines);
    page = new Page(database, journal, savedLines);
    await page.open();
    await page.outbox.settled();

    expect(PassHistory.fromLines(journal.lines).head).toEqual(PassHistory.fromLines((await page.store.loadPass())!.lines).head);
    for (const branch of journal.branches) PassHistory.fromLines(branch.lines);
    const onDisk = new Set([...placesIn(journal.lines), ...journal.branches.flatMap((branch) => placesIn(branch.lines))]);
    const aside = new Set((await page.store.recovered()).flatMap((log) => placesIn(log.lines)));
    for (const x of placesIn(page.aside)) expect(aside.has(x), `edit ${x}, told to be set aside`).toBe(true);
    for (const x of [...saved, ...inBrowser]) expect(onDisk.has(x), `edit ${x}`).toBe(true);
    savedInAll += saved.size;
    branchesInAll += journal.branches.length;
    expect(page.outbox.state.kind).toBe("saved");
    database.close();
  });

  it("met saved edits and forks on the way", () => {
    expect(savedInAll).toBeGreaterThan(50);
    expect(branchesInAll).toBeGreaterThan(0);
  });
});
