import { describe, expect, it } from "vitest";
import { countsOf } from "#renderer/desk/model/counts.ts";
import { shownFindings } from "#renderer/desk/model/findings.ts";
import { lineFacts } from "#renderer/desk/model/line-facts.ts";
import { at, newEditor } from "#test/renderer/editor/fake-places.ts";

/** A strand of 4 mm that was left open. */
async function leftOpen() {
  const { editor } = newEditor();
  for (const x of [0, 2, 4]) editor.click(at(x, 0));
  editor.do({ do: "leave" });
  await editor.settled();
  return editor;
}

describe("findings on the desk", () => {
  it("come with the key under which they are dismissed, and stay in the list with the reason", async () => {
    const editor = await leftOpen();
    const [finding] = shownFindings(editor.document.value);
    expect(finding).toMatchObject({ code: "open-end", dismissed: null });
    editor.do({ do: "dismiss", args: { key: finding!.key, reason: "the scan ends here" } });
    await editor.settled();
    expect(shownFindings(editor.document.value)).toMatchObject([{ key: finding!.key, dismissed: "the scan ends here" }]);
    editor.do({ do: "dismiss", args: { key: finding!.key, reason: null } });
    await editor.settled();
    expect(shownFindings(editor.document.value)[0]!.dismissed).toBeNull();
  });
});

describe("counts on the head line", () => {
  it("are of trees, open ends, and everything marked doubtful", async () => {
    const editor = await leftOpen();
    const [strand] = [...editor.document.value.strands.keys()];
    const [node] = [...editor.document.value.nodes.keys()];
    editor.do({
      do: "label",
      args: { strands: [strand!], strand: { certainty: "doubtful" }, nodes: [node!], node: { certainty: "doubtful" } },
    });
    await editor.settled();
    expect(countsOf(editor.document.value)).toEqual({ trees: 1, open: 1, doubts: 2 });
  });
});

describe("what the strip shows", () => {
  it("is the selected strand, the strand of a selected end, or the first strand of a selected tree", async () => {
    const editor = await leftOpen();
    const document = editor.document.value;
    const [strand] = [...document.strands.values()];
    const facts = lineFacts(document, { strand: strand!.id });
    expect(facts).toMatchObject({ lengthMm: 4, bottomWord: "origin", topWord: "open end", imageFit: 0.9 });
    expect(facts!.pins).toEqual([2]);
    expect(lineFacts(document, { node: strand!.to })).toEqual(facts);
    expect(lineFacts(document, { tree: strand!.tree })).toEqual(facts);
    expect(lineFacts(document, {})).toBeNull();
  });
});
