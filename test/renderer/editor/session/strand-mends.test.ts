import { signal } from "@preact/signals";
import { describe, expect, it } from "vitest";
import { commandNamed } from "#renderer/editor/commands/command-table.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { Editor } from "#renderer/editor/editor.ts";
import type { Pointing } from "#renderer/editor/view-control.ts";
import { at, newEditor } from "#test/renderer/editor/fake-places.ts";

/** A tree along x with pins at 0, 2, 4, 6; the pointer rests at x = 5 on its one strand. */
async function pointed() {
  const { editor, server } = newEditor();
  for (const pin of [0, 2, 4, 6]) editor.click(at(pin, 0));
  await editor.point(at(6, 0));
  editor.end("insertion");
  await editor.settled();
  const strand = [...editor.document.value.strands.values()][0]!;
  const pointing = signal<Pointing | null>(at(5, 0, 0, { kind: "strand", id: strand.id, point: at(5, 0).at }));
  await editor.point(pointing.value);
  const context = { editor, view: { pointing }, screen: {} } as unknown as DeskContext;
  const press = (name: string) => void commandNamed(name)!.perform(context);
  return { editor, server, strand, press };
}

/** A branch from x = 1, which divides the strand: the half at the origin keeps its id. */
function divide(editor: Editor, strand: `s${number}`): void {
  editor.do({ do: "branch", from: { strand, near: at(1, 0).at } });
  editor.do({ do: "pin", at: { point: at(1, 3).at } });
  editor.do({ do: "leave" });
}

const nodesAt = (editor: Editor, x: number) =>
  [...editor.document.value.nodes.values()].filter((node) => node.position[0] === x && node.position[1] === 0);
const viaXs = (editor: Editor) =>
  [...editor.document.value.strands.values()].flatMap((strand) => strand.via.map((pin) => pin[0])).sort();

describe("mending a strand that was divided since the pointer saw it", () => {
  for (const when of ["carried out", "still waiting"]) {
    it(`cuts where the pointer is, the division ${when}`, async () => {
      const { editor, strand, press } = await pointed();
      divide(editor, strand.id);
      if (when === "carried out") await editor.settled();
      press("cut");
      await editor.settled();
      expect(nodesAt(editor, 5).map((node) => node.kind)).toEqual(["open", "open"]);
    });

    it(`puts the new pin where the pointer is, the division ${when}`, async () => {
      const { editor, strand, press } = await pointed();
      divide(editor, strand.id);
      if (when === "carried out") await editor.settled();
      press("insert-pin");
      await editor.settled();
      expect(viaXs(editor)).toEqual([2, 4, 5]);
    });

    it(`makes the stretch under the pointer straight, the division ${when}`, async () => {
      const { editor, strand, press } = await pointed();
      divide(editor, strand.id);
      if (when === "carried out") await editor.settled();
      press("stretch-way");
      await editor.settled();
      const straight = [...editor.document.value.strands.values()].filter((one) => one.legs?.includes("straight"));
      expect(straight.map((one) => one.legs)).toEqual([["guide", "guide", "straight"]]);
      expect(editor.document.value.nodes.get(straight[0]!.to)!.position[0]).toBe(6);
    });
  }

  it("says so, and changes nothing, when the string is gone by then", async () => {
    const { editor, server, strand, press } = await pointed();
    editor.do({ do: "delete-strand", args: { strand: strand.id } });
    press("cut");
    await editor.settled();
    expect(String(server.failures[0])).toContain("No strand passes here any more");
  });
});

describe("a radius set by hand", () => {
  const radiiOf = (editor: Editor, x: number) =>
    [...editor.document.value.strands.values()].flatMap((strand) => {
      const curve = editor.document.value.curves.get(strand.curve!)!;
      return [...curve.radii].filter((_, i) => Math.abs(curve.points[3 * i]! - x) < 1e-9 && curve.points[3 * i + 1] === 0);
    });

  it("holds on the points about the place alone, marks them edited and can be undone", async () => {
    const { editor, strand } = await pointed();
    editor.do({ do: "radius", strand: strand.id, near: at(2.1, 0).at, lengthMm: 0.5, radiusMm: 0.7 });
    await editor.settled();
    expect([0, 2, 4, 6].map((x) => radiiOf(editor, x)[0])).toEqual([0.2, 0.7, 0.2, 0.2]);
    const curve = editor.document.value.curves.get(editor.document.value.strands.get(strand.id)!.curve!)!;
    expect(curve.madeBy).toContainEqual([1, 1, "edited"]);
    editor.undo();
    await editor.settled();
    expect(radiiOf(editor, 2)).toEqual([0.2]);
  });

  it("is none where it is below resolution", async () => {
    const { editor, strand } = await pointed();
    editor.do({ do: "radius", strand: strand.id, near: at(3, 0).at, lengthMm: 2, radiusMm: null });
    await editor.settled();
    expect([0, 2, 4, 6].map((x) => radiiOf(editor, x)[0])).toEqual([0.2, Number.NaN, Number.NaN, 0.2]);
  });

  it("is set on the part that goes through the place when the strand was divided meanwhile", async () => {
    const { editor, strand } = await pointed();
    divide(editor, strand.id);
    editor.do({ do: "radius", strand: strand.id, near: at(4, 0).at, lengthMm: 0, radiusMm: 0.9 });
    await editor.settled();
    expect([0, 1, 2, 4, 6].map((x) => [...new Set(radiiOf(editor, x))])).toEqual([[0.2], [0.2], [0.2], [0.9], [0.2]]);
  });
});
