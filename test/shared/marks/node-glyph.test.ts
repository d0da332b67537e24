import { expect, test } from "vitest";
import { NODE_GLYPHS } from "#shared/marks/node-glyph.ts";
import { NODE_KINDS } from "#shared/trees/document.ts";

test("every kind of node has a glyph of its own", () => {
  expect(Object.keys(NODE_GLYPHS).sort()).toEqual([...NODE_KINDS].sort());
  const drawings = NODE_KINDS.map((kind) => JSON.stringify(NODE_GLYPHS[kind]));
  expect(new Set(drawings).size).toBe(NODE_KINDS.length);
  for (const kind of NODE_KINDS) expect(NODE_GLYPHS[kind].fill + NODE_GLYPHS[kind].stroke, kind).not.toBe("");
});

test("no glyph leaves its box", () => {
  for (const kind of NODE_KINDS) {
    const numbers = `${NODE_GLYPHS[kind].fill} ${NODE_GLYPHS[kind].stroke}`.match(/-?\d+(\.\d+)?/g) ?? [];
    for (const number of numbers) expect(Math.abs(Number(number)), kind).toBeLessThanOrEqual(10);
  }
});
