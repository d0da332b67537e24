import { describe, expect, it } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { PassHistory, type Stamp } from "#shared/log/history.ts";
import type { Curve, NodeId, TreeId } from "#shared/trees/document.ts";
import type { Operation } from "#shared/trees/operations.ts";

const FIELDS = {
  pass: "p0000000000000001",
  specimen: "hb07aaaaaaaaaaaa",
  annotator: "AN-1",
  number: 1,
  epoch: "e0000000000000001",
};

function clock(session = "w1"): () => Stamp {
  let mono = 0;
  return () => {
    mono += 1000;
    return { t: 1_700_000_000_000 + mono, mono, session };
  };
}

function tree(number: number, x: number): Operation {
  const id = `t${number}` as TreeId;
  const root = `n${number}` as NodeId;
  return {
    code: "start-tree",
    changes: [
      { table: "tree", id, from: null, to: { id, name: `ALPM-0${number}`, root } },
      {
        table: "node",
        id: root,
        from: null,
        to: { id: root, tree: id, kind: "origin", position: pointMm(x, 0, 0), site: "head" },
      },
    ],
  };
}

const curve: Curve = {
  id: "c1",
  points: Float64Array.from([0, 0, 0, 1, 0.5, 0.25]),
  radii: Float64Array.from([0.2, Number.NaN]),
  madeBy: [[0, 1, "guide"]],
  imageFit: 0.9,
};

function begun() {
  const stamp = clock();
  const { history, lines } = PassHistory.begin(FIELDS, stamp());
  return { history, lines, stamp };
}

describe("the history of a pass", () => {
  it("is read back from its lines as it was", () => {
    const { history, lines, stamp } = begun();
    lines.push(...history.commit(tree(1, 0), "Tree ALPM-01 started", [curve], stamp()));
    lines.push(...history.commit(tree(2, 5), "Tree ALPM-02 started", [], stamp()));
    lines.push(...history.undo(stamp()));
    const again = PassHistory.fromLines(lines);
    expect(again.document).toEqual(history.document);
    expect(again.pointer).toBe(history.pointer);
    expect(again.head).toEqual(history.head);
    expect(again.entries()).toEqual(history.entries());
    expect(again.document.curves.get("c1")).toEqual(curve);
  });

  it("undoes and redoes after a reload, without end", () => {
    const { history, lines, stamp } = begun();
    for (let k = 1; k <= 9; k++) lines.push(...history.commit(tree(k, k), `Tree ${k}`, [], stamp()));
    const end = history.document;
    const reloaded = PassHistory.fromLines(lines);
    while (reloaded.canUndo) lines.push(...reloaded.undo(stamp()));
    expect(reloaded.document.trees.size).toBe(0);
    expect(reloaded.undo(stamp())).toEqual([]);
    const third = PassHistory.fromLines(lines);
    while (third.canRedo) third.redo(stamp());
    expect(third.document).toEqual(end);
    expect(third.redo(stamp())).toEqual([]);
  });

  it("keeps undone branches, goes back to them, and redoes along the branch that was last on the path", () => {
    const { history, stamp } = begun();
    history.commit(tree(1, 1), "first", [], stamp());
    const fork = history.pointer;
    history.commit(tree(2, 2), "left", [], stamp());
    const left = history.pointer;
    history.undo(stamp());
    history.commit(tree(3, 3), "right", [], stamp());
    expect(history.entries().map((e) => e.place)).toEqual(["past", "aside", "past"]);
    history.jump(left, stamp());
    expect([...history.document.trees.keys()]).toEqual(["t1", "t2"]);
    history.undo(stamp());
    expect(history.pointer).toBe(fork);
    history.redo(stamp());
    expect(history.pointer).toBe(left);
  });

  it("never hands out an id twice, not even one that only an undone branch used", () => {
    const { history, lines, stamp } = begun();
    lines.push(...history.commit(tree(7, 1), "seven", [curve], stamp()), ...history.undo(stamp()));
    expect(history.nextId("tree")).toBe("t8");
    expect(history.nextId("node")).toBe("n8");
    expect(history.nextId("curve")).toBe("c2");
    expect(history.nextId("strand")).toBe("s1");
    expect(PassHistory.fromLines(lines).nextId("tree")).toBe("t8");
  });

  it("refuses an edit that does not fit and stays as it was", () => {
    const { history, stamp } = begun();
    history.commit(tree(1, 1), "first", [], stamp());
    const { head, document } = history;
    expect(() => history.commit(tree(1, 1), "again", [], stamp())).toThrowError(expect.objectContaining({ tag: "conflict" }));
    expect(history.head).toBe(head);
    expect(history.document).toBe(document);
  });

  it("refuses a number that JSON cannot hold, and a curve that nobody gave", () => {
    const { history, stamp } = begun();
    const head = history.head;
    expect(() => history.commit(tree(1, Number.NaN), "no number", [], stamp())).toThrowError(/three finite numbers/);
    const strand = { id: "s1", tree: "t1", from: "n1", to: "n2", curve: "c5", via: [] } as const;
    const operation: Operation = { code: "extend-strand", changes: [{ table: "strand", id: "s1", from: null, to: strand }] };
    try {
      history.commit(operation, "", [], stamp());
      expect.unreachable();
    } catch (error) {
      expect(isTautlineError(error, "conflict")).toBe(true);
    }
    expect(history.head).toBe(head);
  });

  it("writes no line for an edit that changes nothing", () => {
    const { history, stamp } = begun();
    expect(history.commit({ code: "set-labels", changes: [] }, "", [], stamp())).toEqual([]);
  });

  it("takes lines written elsewhere, all or none", () => {
    const { history, lines, stamp } = begun();
    const other = PassHistory.fromLines(lines);
    const more = [...other.commit(tree(1, 1), "one", [], stamp()), ...other.mark("before lunch", stamp())];
    const bad = [...more, more[0]!];
    expect(() => history.absorb(bad)).toThrowError(/record 3/);
    expect(history.edits).toBe(0);
    history.absorb(more);
    expect(history.document).toEqual(other.document);
    expect(history.entries()[0]!.marks).toEqual(["before lunch"]);
  });
});
