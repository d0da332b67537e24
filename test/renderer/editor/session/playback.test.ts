import { afterEach, beforeEach, describe, expect, it, vi } from "vitest";
import { selectNode } from "#renderer/editor/selection.ts";
import { PassHistory } from "#shared/log/history.ts";
import { at, newEditor } from "#test/renderer/editor/fake-places.ts";

// What must be shown after each edit is found independently: by folding the log's own lines up to that edit.
beforeEach(() => void vi.useFakeTimers());
afterEach(() => void vi.useRealTimers());

/** Three trees drawn by one click each and left; edits are at some seqs of the log. */
async function drawn() {
  const { editor, keeper, server } = newEditor();
  for (const x of [0, 2, 4]) {
    editor.click(at(x, 0));
    editor.do({ do: "leave" });
    await editor.settled();
  }
  const seqs = keeper.entries().map((entry) => entry.seq);
  const logged = (seq: number) => [...PassHistory.fromLines(keeper.lines.slice(0, seq + 1)).document.nodes.keys()];
  const shown = () => [...editor.document.value.nodes.keys()];
  return { editor, keeper, server, seqs, logged, shown };
}

describe("playing the history back", () => {
  it("goes from the chosen edit to the newest at a steady pace, and rests there", async () => {
    const { editor, seqs, logged, shown } = await drawn();
    editor.playBack(seqs[0]!, true);
    expect(shown()).toEqual(logged(seqs[0]!));
    vi.advanceTimersByTime(500);
    expect(shown()).toEqual(logged(seqs[1]!));
    vi.advanceTimersByTime(500);
    expect(shown()).toEqual(logged(seqs[2]!));
    expect(editor.playback.shown.value).toMatchObject({ at: 3, count: 3, isRunning: false });
    vi.advanceTimersByTime(10_000);
    expect(editor.playback.shown.value).toMatchObject({ at: 3 });
  });

  it("pauses, steps by one edit both ways, and goes on", async () => {
    const { editor, seqs, logged, shown } = await drawn();
    editor.playBack(seqs[0]!, true);
    editor.playback.toggle();
    vi.advanceTimersByTime(5000);
    expect(shown()).toEqual(logged(seqs[0]!));
    editor.playback.step(1);
    expect(shown()).toEqual(logged(seqs[1]!));
    editor.playback.step(-1);
    editor.playback.step(-1);
    expect(shown()).toEqual([]);
    editor.playback.step(-1);
    expect(editor.playback.shown.value).toMatchObject({ at: 0, edit: null });
    editor.playback.toggle();
    vi.advanceTimersByTime(500);
    expect(shown()).toEqual(logged(seqs[0]!));
  });

  it("does not go on by itself when it is asked not to", async () => {
    const { editor, seqs, logged, shown } = await drawn();
    editor.playBack(null, false);
    vi.advanceTimersByTime(60_000);
    expect(shown()).toEqual(logged(seqs[0]!));
  });

  it("plays faster at a faster pace", async () => {
    const { editor } = await drawn();
    editor.playback.setPace(20);
    editor.playBack(null, true);
    vi.advanceTimersByTime(50);
    expect(editor.playback.shown.value).toMatchObject({ at: 2 });
    editor.playback.setPace(1);
    vi.advanceTimersByTime(999);
    expect(editor.playback.shown.value).toMatchObject({ at: 2 });
    vi.advanceTimersByTime(1);
    expect(editor.playback.shown.value).toMatchObject({ at: 3 });
  });

  it("writes no record and takes no edit while it plays, and returns to where one was", async () => {
    const { editor, keeper, seqs } = await drawn();
    const newest = [...editor.document.value.nodes.keys()].at(-1)!;
    editor.selection.value = selectNode(editor.document.value, newest);
    const lines = [...keeper.lines];
    const document = editor.document.value;
    editor.playBack(seqs[0]!, true);
    expect(editor.readOnly).toBe(true);
    editor.click(at(9, 9));
    editor.undo();
    editor.redo();
    editor.do({ do: "mark", name: "no" });
    vi.advanceTimersByTime(500);
    expect(editor.selection.value).toEqual({});
    await editor.settled();
    editor.stopPlayback();
    expect(keeper.lines).toEqual(lines);
    expect(editor.document.value).toBe(document);
    expect(editor.selection.value.node).toBe(newest);
    expect(editor.readOnly).toBe(false);
    vi.advanceTimersByTime(5000);
    expect(editor.document.value).toBe(document);
  });

  it("shows no strand under way, and takes it up again when it ends", async () => {
    const { editor } = await drawn();
    for (const x of [6, 8]) editor.click(at(x, 0));
    await editor.settled();
    expect(editor.projection.value.pins).toHaveLength(2);
    editor.playBack(null, false);
    expect(editor.projection.value.kind).toBe("nothing");
    editor.stopPlayback();
    expect(editor.projection.value.pins).toHaveLength(2);
  });

  it("plays the whole path from a point in the past, up to what redo would bring back", async () => {
    const { editor, keeper, seqs, logged, shown } = await drawn();
    await keeper.undo();
    await keeper.undo();
    const before = editor.document.value;
    editor.playBack(seqs[1]!, true);
    expect(shown()).toEqual(logged(seqs[1]!));
    vi.advanceTimersByTime(500);
    expect(shown()).toEqual(logged(seqs[2]!));
    editor.stopPlayback();
    expect(editor.document.value).toBe(before);
  });

  it("leaves edits on undone branches out", async () => {
    const { editor, keeper, seqs } = await drawn();
    await keeper.undo();
    editor.click(at(7, 0));
    await editor.settled();
    editor.playBack(null, false);
    editor.playback.step(10);
    expect(editor.playback.shown.value).toMatchObject({ at: 3, count: 3 });
    expect(keeper.path().map((step) => step.seq)).not.toContain(seqs[2]);
  });

  it("does not begin while edits wait, nor without any edit", async () => {
    const { editor, server } = newEditor();
    editor.playBack(null, true);
    expect(editor.playback.shown.value).toBeNull();
    server.held = true;
    for (const x of [0, 2]) editor.click(at(x, 0));
    await vi.waitFor(() => expect(server.asked).toHaveLength(1));
    editor.playBack(null, true);
    expect(editor.playback.shown.value).toBeNull();
    server.release();
    await editor.settled();
    editor.playBack(null, true);
    expect(editor.playback.shown.value).not.toBeNull();
    editor.dispose();
  });

  it("keeps showing its path when another window writes on, and shows what came when it ends", async () => {
    const { editor, keeper, seqs, logged, shown } = await drawn();
    editor.playBack(seqs[0]!, false);
    await keeper.undo();
    expect(shown()).toEqual(logged(seqs[0]!));
    editor.stopPlayback();
    expect(shown()).toEqual(logged(seqs[1]!));
  });
});

describe("a finished pass", () => {
  it("takes no edit until it is under way again", async () => {
    const { editor, keeper } = await drawn();
    const lines = [...keeper.lines];
    editor.isFinished.value = true;
    editor.click(at(9, 9));
    editor.undo();
    await editor.settled();
    expect(keeper.lines).toEqual(lines);
    editor.isFinished.value = false;
    editor.click(at(9, 9));
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(4);
  });
});
