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

  it("asks for no place passed by while a preview is on its way, and always for the last", async () => {
    const snaps: (() => void)[] = [];
    const previews: { readonly x: number; readonly answer: () => void }[] = [];
    const fake = new FakeServer().places(new MemoryKeeper());
    const editor = new Editor({
      ...fake,
      snap: () => new Promise((resolve) => snaps.push(() => resolve({ candidates: [] }))),
      guide: {
        ...fake.guide,
        preview: (_, to) =>
          new Promise((resolve) =>
            previews.push({
              x: to[0],
              answer: () => resolve({ points: [0, 0, 0, ...to], coarse: false, imageFit: 0.9, doubtful: [] }),
            }),
          ),
      },
    });
    editor.do({ do: "pin", at: { point: at(0, 0).at } });
    await editor.settled();
    const moves = [1, 2, 3].map((x) => editor.point(at(x, 0)));
    for (let turn = 0; turn < 3; turn++) {
      snaps.shift()!();
      await new Promise((next) => setTimeout(next));
    }
    // The first place was passed by, but nothing was on its way; the second was passed by while it was.
    expect(previews.map(({ x }) => x)).toEqual([1, 3]);
    for (const { answer } of previews) answer();
    await Promise.all(moves);
    expect(editor.guide.value?.points.at(-1)).toEqual([3, 0, 0]);
    editor.dispose();
  });
});
