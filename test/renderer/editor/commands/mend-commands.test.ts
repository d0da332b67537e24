import { signal } from "@preact/signals";
import { describe, expect, it } from "vitest";
import { commandNamed } from "#renderer/editor/commands/command-table.ts";
import type { DeskContext } from "#renderer/editor/commands/desk-context.ts";
import type { Editor } from "#renderer/editor/editor.ts";
import { NO_SELECTION, selectLine, selectNode } from "#renderer/editor/selection.ts";
import type { Pointing } from "#renderer/editor/view-control.ts";
import type { StrandId } from "#shared/trees/document.ts";
import { at, newEditor } from "#test/renderer/editor/fake-places.ts";

/** A tree along x with pins at 0, 2, 4, and what commands act on, the pointer at a place on its strand. */
async function desk(x: number) {
  const { editor } = newEditor();
  for (const pin of [0, 2, 4]) editor.click(at(pin, 0));
  await editor.point(at(4, 0));
  editor.end("insertion");
  await editor.settled();
  const strand = firstStrand(editor);
  const pointing = signal<Pointing | null>(at(x, 0, 0, { kind: "strand", id: strand.id, point: at(x, 0).at }));
  await editor.point(pointing.value);
  const context = { editor, view: { pointing }, screen: {} } as unknown as DeskContext;
  const run = async (name: string) => {
    const command = commandNamed(name)!;
    expect(command.enabled(context), name).toBe(true);
    await command.perform(context);
    await editor.settled();
  };
  return { editor, context, pointing, run, strand };
}

const firstStrand = (editor: Editor) => [...editor.document.value.strands.values()][0]!;
const kinds = (editor: Editor) => [...editor.document.value.nodes.values()].map((node) => node.kind).sort();

describe("mending by keys", () => {
  it("puts a pin where the pointer is on the strand, between the pins it lies between", async () => {
    const { editor, run } = await desk(3);
    await run("insert-pin");
    expect(firstStrand(editor).via).toEqual([
      [2, 0, 0],
      [3, 0, 0],
    ]);
  });

  it("makes the stretch under the pointer straight, and lets it follow the image again", async () => {
    const { editor, run } = await desk(3);
    await run("stretch-way");
    expect(firstStrand(editor).legs).toEqual(["guide", "straight"]);
    await run("stretch-way");
    expect(firstStrand(editor).legs).toBeUndefined();
  });

  it("cuts where the pointer is, which leaves two open ends", async () => {
    const { editor, run } = await desk(3);
    await run("cut");
    expect(kinds(editor)).toEqual(["insertion", "open", "open", "origin"]);
  });

  it("marks the selected strand as strut and as doubtful, and takes both away again", async () => {
    const { editor, run, strand } = await desk(3);
    editor.selection.value = selectLine(editor.document.value, strand.id);
    await run("strut");
    await run("doubt");
    expect(firstStrand(editor)).toMatchObject({ strut: true, certainty: "doubtful" });
    await run("strut");
    await run("doubt");
    expect(firstStrand(editor).strut).toBeUndefined();
    expect(firstStrand(editor).certainty).toBeUndefined();
  });

  it("deletes the pin under the pointer before anything that is selected", async () => {
    const { editor, run, strand, pointing } = await desk(2);
    editor.selection.value = selectLine(editor.document.value, strand.id);
    pointing.value = at(2, 0, 0, { kind: "pin", strand: strand.id, index: 0 });
    await run("delete");
    expect(firstStrand(editor).via).toEqual([]);
  });

  it("deletes a tree with its origin, and says nothing can be deleted when nothing is chosen", async () => {
    const { editor, context, run, pointing } = await desk(2);
    pointing.value = null;
    editor.selection.value = NO_SELECTION;
    expect(commandNamed("delete")!.enabled(context)).toBe(false);
    const origin = [...editor.document.value.nodes.values()].find((node) => node.kind === "origin")!;
    editor.selection.value = selectNode(editor.document.value, origin.id);
    await run("delete");
    expect(editor.document.value.trees.size).toBe(0);
  });

  it("moves a branch to another strand, with what hangs on it", async () => {
    const { editor, run, pointing } = await desk(3);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(3, 3));
    editor.do({ do: "leave" });
    for (const x of [0, 6]) editor.click(at(x, 6));
    editor.do({ do: "leave" });
    await editor.settled();
    const strands = [...editor.document.value.strands.values()];
    const open = [...editor.document.value.nodes.values()].find((node) => node.kind === "open" && node.position[1] === 3)!;
    const branch = strands.find((strand) => strand.to === open.id)!;
    const host = strands.find((strand) => editor.document.value.nodes.get(strand.to)!.position[1] === 6)!;
    editor.selection.value = selectLine(editor.document.value, branch.id);
    pointing.value = at(2, 6, 0, { kind: "strand", id: host.id as StrandId, point: at(2, 6).at });
    await editor.point(pointing.value);
    await run("move-branch");
    expect(editor.document.value.strands.get(branch.id)!.tree).toBe(host.tree);
    expect(kinds(editor).filter((kind) => kind === "fork")).toHaveLength(1);
  });

  it("carries a node to where the next click puts it", async () => {
    const { editor, run, pointing } = await desk(4);
    const insertion = [...editor.document.value.nodes.values()].find((node) => node.kind === "insertion")!;
    pointing.value = at(4, 0, 0, { kind: "node", id: insertion.id });
    await run("carry");
    editor.click(at(4, 1));
    await editor.settled();
    expect(editor.document.value.nodes.get(insertion.id)!.position).toEqual([4, 1, 0]);
  });
});
