import { describe, expect, it } from "vitest";
import { Editor, type EditorPlaces } from "#renderer/editor/editor.ts";
import { at, FakeServer, MemoryKeeper } from "#test/renderer/editor/fake-places.ts";

describe("the guide of a strand under way", () => {
  it("is shown while the pointer moves on without a rest, as answers come, and not after it has left", async () => {
    const answers: (() => void)[] = [];
    const places: EditorPlaces = {
      ...new FakeServer().places(new MemoryKeeper()),
      // The engine answers each question only after the pointer has moved on.
      snap: () => new Promise((resolve) => answers.push(() => resolve({ candidates: [] }))),
    };
    const editor = new Editor(places);
    editor.do({ do: "pin", at: { point: at(0, 0).at } });
    await editor.settled();
    const first = editor.point(at(1, 0));
    const second = editor.point(at(2, 0));
    answers.shift()!();
    await first;
    expect(editor.guide.value?.points.at(-1)).toEqual([1, 0, 0]);
    const third = editor.point(null);
    answers.shift()!();
    await Promise.all([second, third]);
    expect(editor.guide.value).toBeNull();
    editor.dispose();
  });
});
