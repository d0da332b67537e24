import { describe, expect, it } from "vitest";
import { PassHistory } from "#shared/log/history.ts";
import { documentFacts, factsOf } from "#shared/log/pass-facts.ts";
import { historyFromSnapshot, snapshotOf } from "#shared/log/snapshot.ts";
import { endStrand } from "#shared/trees/edits/end-strand.ts";
import { setLabels } from "#shared/trees/edits/set-labels.ts";
import { startTree } from "#shared/trees/edits/start-tree.ts";
import { at, edited, fork } from "../trees/drawn-tree.ts";

const stamp = (mono: number) => ({ t: 1_800_000_000_000 + mono, mono, session: "w" });

function written() {
  const { history, lines } = PassHistory.begin({ pass: "p", specimen: "s", annotator: "AN-1", number: 1, epoch: "e" }, stamp(0));
  for (let k = 1; k <= 6; k++) {
    const plan = startTree(history.document, history.ids(), { at: at(k, 0, 0), site: "head" });
    lines.push(...history.commit(plan.operation, `tree ${k}`, [], stamp(1000 * k)));
  }
  lines.push(...history.undo(stamp(7000)), ...history.undo(stamp(8000)), ...history.mark("noon", stamp(9000)));
  return { history, lines };
}

describe("a snapshot", () => {
  it("names the line it stands for, and undo and redo go on from it as from the log", () => {
    const { history, lines } = written();
    const snapshot: unknown = JSON.parse(JSON.stringify(snapshotOf(history)));
    expect(snapshot).toMatchObject({ seq: history.head.seq, hash: history.head.hash });
    const again = historyFromSnapshot(snapshot, []);
    expect(again.entries()).toEqual(PassHistory.fromLines(lines).entries());
    expect(again.redo(stamp(10_000))).toEqual(history.redo(stamp(10_000)));
    while (again.canUndo) again.undo(stamp(11_000));
    expect(again.document.trees.size).toBe(0);
    expect(again.nextId("tree")).toBe("t7");
  });
  it("refuses later lines that do not continue it", () => {
    const { history, lines } = written();
    const other = PassHistory.fromLines(lines.slice(0, 4));
    const foreign = other.mark("elsewhere", stamp(1));
    expect(() => historyFromSnapshot(snapshotOf(history), foreign)).toThrowError(
      expect.objectContaining({ tag: "unreadable-input" }),
    );
  });
  it("damaged anywhere at its top is refused, and said to be dispensable", () => {
    const snapshot = JSON.parse(JSON.stringify(snapshotOf(written().history))) as Record<string, unknown>;
    for (const key of Object.keys(snapshot)) {
      expect(() => historyFromSnapshot({ ...snapshot, [key]: "spoilt" }, []), key).toThrowError(/Delete the snapshot/);
      const { [key]: _, ...without } = snapshot;
      expect(() => historyFromSnapshot(without, []), key).toThrowError(/Delete the snapshot/);
    }
    expect(() => historyFromSnapshot(null, [])).toThrowError(/Delete the snapshot/);
  });
});

describe("facts of a pass", () => {
  it("count trees, open ends, doubts, edits and time at work", () => {
    const { history } = written();
    expect(factsOf(history)).toEqual({ trees: 4, openEnds: 0, doubts: 0, edits: 6, workMs: 9000, changed: 1_800_000_009_000 });
    let d = fork();
    expect(documentFacts(d)).toEqual({ trees: 1, openEnds: 2, doubts: 0 });
    d = edited(d, (doc, ids) => endStrand(doc, ids, { node: "n4", kind: "insertion" }));
    d = edited(d, (doc, ids) =>
      setLabels(doc, ids, { nodes: ["n4"], node: { certainty: "doubtful" }, strands: ["s1"], strand: { certainty: "doubtful" } }),
    );
    expect(documentFacts(d)).toEqual({ trees: 1, openEnds: 1, doubts: 2 });
  });
});
