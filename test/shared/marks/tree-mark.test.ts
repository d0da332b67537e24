import { expect, test } from "vitest";
import { TREE_COLOURS, TREE_DASHES, treeMark } from "#shared/marks/tree-mark.ts";

test("no two of 32 neighbouring trees share both colour and line pattern", () => {
  for (const first of [1, 18]) {
    const seen = new Set(Array.from({ length: 32 }, (_, i) => JSON.stringify(treeMark(`t${first + i}`))));
    expect(seen.size).toBe(TREE_COLOURS * TREE_DASHES.length);
  }
});

test("neighbouring trees differ in colour and in pattern", () => {
  for (let i = 1; i < 40; i++) {
    const a = treeMark(`t${i}`);
    const b = treeMark(`t${i + 1}`);
    expect(a.colour).not.toBe(b.colour);
    expect(a.dash === b.dash && i % TREE_COLOURS !== 0).toBe(false);
  }
});
