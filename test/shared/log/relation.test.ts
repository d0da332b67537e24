import { describe, expect, it } from "vitest";
import { PassHistory } from "#shared/log/history.ts";
import { type ChainView, holdsWork, relationOf, viewOfLines } from "#shared/log/relation.ts";
import { seeded } from "../trees/seeded-random.ts";

const stamp = { t: 1, mono: 1, session: "w" };

/** A log whose lines differ by their names. */
function log(names: readonly string[], epoch = "e"): string[] {
  const { history, lines } = PassHistory.begin({ pass: "p", specimen: "s", annotator: "AN-1", number: 1, epoch }, stamp);
  return [...lines, ...names.flatMap((name) => history.mark(name, stamp))];
}

const relation = (window: string[], disk: string[]) => relationOf(viewOfLines("e", window), viewOfLines("e", disk));

describe("how the window's log stands to the journal", () => {
  it("same, behind, ahead, or forked", () => {
    expect(relation(log(["a", "b"]), log(["a", "b"]))).toEqual({ relation: "same" });
    expect(relation(log(["a", "b", "c"]), log(["a"]))).toEqual({ relation: "send", from: 2 });
    expect(relation(log(["a"]), log(["a", "b", "c"]))).toEqual({ relation: "take", from: 2 });
    expect(relation(log(["a", "b"]), log(["a", "x", "y"]))).toEqual({ relation: "fork", common: 1 });
    expect(relation(log(["a", "b"]), log(["a", "x"]))).toEqual({ relation: "fork", common: 1 });
    expect(relation(log(["a", "b", "c"]), log(["x"]))).toEqual({ relation: "fork", common: 0 });
  });

  it("forked from the beginning when they are two logs", () => {
    const window = viewOfLines("e1", log(["a"], "e1"));
    expect(relationOf(window, viewOfLines("e2", log(["a"], "e2")))).toEqual({ relation: "fork", common: -1 });
  });

  it("a line that one side cannot show counts as different", () => {
    const lines = log(["a", "b", "c"]);
    const view = viewOfLines("e", lines);
    const blind: ChainView = { ...view, hashAt: () => undefined };
    expect(relationOf(viewOfLines("e", log(["a"])), blind)).toMatchObject({ relation: "fork" });
    expect(relationOf(view, blind)).toEqual({ relation: "same" });
  });

  it("an empty window takes everything, an empty disk is sent everything", () => {
    expect(relation([], log(["a"]))).toEqual({ relation: "take", from: 0 });
    expect(relation(log(["a"]), [])).toEqual({ relation: "send", from: 0 });
  });

  // Slow model: compare the lines themselves, one by one. Seed 7.
  it("agrees with comparing all lines, on random logs", () => {
    const random = seeded(7);
    for (let k = 0; k < 300; k++) {
      const shared = Array.from({ length: Math.floor(random() * 4) }, (_, i) => `s${i}`);
      const tail = (letter: string) => Array.from({ length: Math.floor(random() * 3) }, (_, i) => `${letter}${i}`);
      const window = log([...shared, ...tail(random() < 0.5 ? "x" : "y")]);
      const disk = log([...shared, ...tail(random() < 0.5 ? "x" : "y")]);
      let common = 0;
      while (common < Math.min(window.length, disk.length) && window[common] === disk[common]) common += 1;
      const expected =
        common === window.length && common === disk.length
          ? { relation: "same" }
          : common === disk.length
            ? { relation: "send", from: common }
            : common === window.length
              ? { relation: "take", from: common }
              : { relation: "fork", common: common - 1 };
      expect(relation(window, disk)).toEqual(expected);
    }
  });
});

describe("lines that a person would miss", () => {
  it("are edits, moves in the history and marks; not the opening of a session", () => {
    const { history } = PassHistory.begin({ pass: "p", specimen: "s", annotator: "AN-1", number: 1, epoch: "e" }, stamp);
    const opened = history.session("opened", stamp);
    expect(holdsWork(opened, 1)).toBe(false);
    expect(holdsWork([], 1)).toBe(false);
    expect(holdsWork([...opened, ...history.mark("here", stamp)], 1)).toBe(true);
  });
});
