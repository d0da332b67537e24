import { describe, expect, it } from "vitest";
import { pointMm } from "#shared/geometry/types.ts";
import { IDLE_THRESHOLD_MS } from "#shared/log/effort.ts";
import { PassHistory } from "#shared/log/history.ts";
import { parseLine } from "#shared/log/line.ts";
import { passEffort } from "#shared/log/pass-effort.ts";
import { LOG_FORMAT, LOG_VERSION, type LogRecord } from "#shared/log/records.ts";
import type { Change } from "#shared/trees/operations.ts";

// Counted by hand in the comments; no outside source.

const header = {
  format: LOG_FORMAT,
  version: LOG_VERSION,
  pass: "p",
  specimen: "s",
  annotator: "AN-1",
  number: 1,
  epoch: "e",
} as const;

function pass() {
  const lines: string[] = [];
  const stamp = (mono: number, session = "one") => ({ t: 1_000_000 + mono, mono, session });
  const begun = PassHistory.begin(header, stamp(0));
  lines.push(...begun.lines);
  const { history } = begun;
  const take = (made: string[]) => void lines.push(...made);
  const tree = (k: number): Change => ({
    table: "tree",
    id: `t${k}`,
    from: null,
    to: { id: `t${k}`, name: `T${k}`, root: null },
  });
  const node = (k: number, of: number): Change => ({
    table: "node",
    id: `n${k}`,
    from: null,
    to: { id: `n${k}`, tree: `t${of}`, kind: "origin", position: pointMm(0, 0, 0) },
  });
  const edit = (changes: Change[], mono: number, session?: string) =>
    take(history.commit({ code: "start-tree", changes }, "edit", [], stamp(mono, session)));
  const records = (): LogRecord[] => lines.map((line, i) => parseLine(line, i + 1, "log"));
  return { history, take, tree, node, edit, stamp, records };
}

describe("the effort of a pass", () => {
  it("is nothing for a pass without edits", () => {
    expect(passEffort(pass().records())).toEqual({
      workMs: 0, idleThresholdMs: IDLE_THRESHOLD_MS, sessions: 1, edits: 0, undos: 0, redos: 0, interactionsPerTree: null, trees: [],
    }); // biome-ignore format: one record
  });

  it("counts edits, undos, redos and time at work, for all and for each tree", () => {
    const { tree, node, edit, take, history, stamp, records } = pass();
    edit([tree(1)], 10_000); // 10 s of work
    edit([tree(2), node(1, 2)], 30_000); // 20 s
    edit([node(2, 1)], 90_000); // 60 s
    take(history.undo(stamp(95_000))); // takes node 2 of tree 1 back, 5 s
    take(history.undo(stamp(96_000))); // takes tree 2 back, 1 s
    take(history.redo(stamp(97_000))); // brings tree 2 again, 1 s
    edit([node(3, 2)], 97_000 + IDLE_THRESHOLD_MS + 1); // longer than the threshold: away
    const effort = passEffort(records());
    expect(effort).toMatchObject({ edits: 4, undos: 2, redos: 1, sessions: 1, workMs: 97_000 });
    expect(effort.trees).toEqual([
      { tree: "t1", edits: 2, undos: 1, interactions: 3, workMs: 75_000 },
      { tree: "t2", edits: 2, undos: 1, interactions: 4, workMs: 22_000 },
    ]);
    expect(effort.interactionsPerTree).toBe(3.5);
  });

  it("tells a jump back as an undo, a jump forth as a redo, and one to an undone branch by what it takes back", () => {
    const { tree, edit, take, history, stamp, records } = pass();
    edit([tree(1)], 1000);
    edit([tree(2)], 2000);
    take(history.jump(0, stamp(3000)));
    take(history.jump(2, stamp(4000)));
    expect(passEffort(records())).toMatchObject({ edits: 2, undos: 1, redos: 1 });
    take(history.jump(0, stamp(5000)));
    edit([tree(3)], 6000);
    take(history.jump(2, stamp(7000)));
    expect(passEffort(records())).toMatchObject({ edits: 3, undos: 3, redos: 1 });
  });

  it("counts an edit that concerns two trees for both, and a cross-link for the trees of its nodes", () => {
    const { tree, node, edit, records } = pass();
    edit([tree(1), node(1, 1), tree(2), node(2, 2)], 1000);
    edit([{ table: "cross-link", id: "x1", from: null, to: { id: "x1", from: "n1", to: "n2", curve: null, via: [] } }], 2000);
    expect(passEffort(records()).trees.map(({ edits, interactions }) => [edits, interactions])).toEqual([
      [2, 2],
      [2, 2],
    ]);
  });

  it("adds sessions up, each by its own clock", () => {
    const { tree, edit, records } = pass();
    edit([tree(1)], 5000);
    edit([tree(2)], 100, "two");
    edit([tree(3)], 600, "two");
    expect(passEffort(records())).toMatchObject({ sessions: 2, workMs: 5500 });
  });
});
