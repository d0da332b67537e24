import { describe, expect, it } from "vitest";
import type { Editor } from "#renderer/editor/editor.ts";
import type { StrandId, TreeNode } from "#shared/trees/document.ts";
import { at, FakeServer, MemoryKeeper, newEditor } from "#test/renderer/editor/fake-places.ts";

const nodes = (editor: Editor) => [...editor.document.value.nodes.values()];
const kinds = (editor: Editor) =>
  nodes(editor)
    .map((node) => node.kind)
    .sort();
const ofKind = (editor: Editor, kind: TreeNode["kind"]) => nodes(editor).filter((node) => node.kind === kind);
const strands = (editor: Editor) => [...editor.document.value.strands.values()];

/** Clicks an origin and two pins, and ends as an insertion at the last pin. */
async function drawStrand(editor: Editor) {
  for (const x of [0, 2, 4]) editor.click(at(x, 0));
  await editor.point(at(4, 0));
  editor.end("insertion");
  await editor.settled();
}

/** Points at the middle of the strand of that number, with the strand under the pointer. */
async function pointAtStrand(editor: Editor, index: number, x: number, y = 0) {
  const { id } = strands(editor)[index]!;
  const place = at(x, y, 0, { kind: "strand", id, point: at(x, y).at });
  await editor.point(place);
  return place;
}

describe("tracing", () => {
  it("starts a tree with the first click, pins with the next ones, and ends at the last pin by one key", async () => {
    const { editor, keeper } = newEditor();
    await drawStrand(editor);
    expect(kinds(editor)).toEqual(["insertion", "origin"]);
    expect(strands(editor)).toHaveLength(1);
    expect(strands(editor)[0]!.via).toEqual([[2, 0, 0]]);
    expect(keeper.edits).toBe(4);
    expect(editor.underWay.value.kind).toBe("nothing");
  });

  it("has every committed strand solved from all of its pins", async () => {
    const { editor, server } = newEditor();
    await drawStrand(editor);
    expect(server.asked.at(-1)).toEqual([{ from: [0, 0, 0], via: [[2, 0, 0]], to: [4, 0, 0] }]);
    const curve = editor.document.value.curves.get(strands(editor)[0]!.curve!)!;
    expect([...curve.points]).toEqual([0, 0, 0, 2, 0, 0, 4, 0, 0]);
  });

  it("ends at the pointer when the pointer is away from the last pin, as one edit", async () => {
    const { editor, keeper } = newEditor();
    editor.click(at(0, 0));
    editor.click(at(2, 0));
    await editor.point(at(5, 1));
    editor.end("ruptured");
    await editor.settled();
    expect(ofKind(editor, "ruptured")[0]!.position).toEqual([5, 1, 0]);
    expect(keeper.edits).toBe(3);
  });

  it("branches from the strand under the pointer: the fork comes with the branch's first pin", async () => {
    const { editor, keeper } = newEditor();
    await drawStrand(editor);
    await pointAtStrand(editor, 0, 3);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    await editor.settled();
    expect(kinds(editor)).toEqual(["insertion", "origin"]);
    await editor.point(at(3, 3));
    editor.end("insertion");
    await editor.settled();
    expect(kinds(editor)).toEqual(["fork", "insertion", "insertion", "origin"]);
    expect(ofKind(editor, "fork")[0]!.position).toEqual([3, 0, 0]);
    expect(keeper.edits).toBe(5);
  });

  it("goes on from an open end that is clicked", async () => {
    const { editor } = newEditor();
    editor.click(at(0, 0));
    editor.click(at(2, 0));
    editor.do({ do: "leave" });
    await editor.settled();
    expect(editor.underWay.value.kind).toBe("nothing");
    const open = ofKind(editor, "open")[0]!;
    editor.click(at(2, 0, 0, { kind: "node", id: open.id }));
    editor.click(at(4, 0));
    await editor.settled();
    expect(strands(editor)).toHaveLength(1);
    expect(strands(editor)[0]!.via).toEqual([[2, 0, 0]]);
  });

  it("selects what is clicked while nothing is under way, and sets pins there while a strand is", async () => {
    const { editor, keeper } = newEditor();
    await drawStrand(editor);
    const { id } = strands(editor)[0]!;
    editor.click(at(1, 0, 0, { kind: "strand", id, point: at(1, 0).at }));
    await editor.settled();
    expect(editor.selection.value).toMatchObject({ strand: id });
    expect(keeper.edits).toBe(4);
  });

  it("takes pins back one by one, down to the tree itself", async () => {
    const { editor } = newEditor();
    for (const x of [0, 2, 4]) editor.click(at(x, 0));
    await editor.settled();
    editor.do({ do: "back" });
    await editor.settled();
    expect(ofKind(editor, "open")[0]!.position).toEqual([2, 0, 0]);
    editor.do({ do: "back" });
    await editor.settled();
    expect(kinds(editor)).toEqual(["origin"]);
    editor.do({ do: "back" });
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(0);
  });

  it("lets a branch that was taken back start again at the same place", async () => {
    const { editor } = newEditor();
    await drawStrand(editor);
    await pointAtStrand(editor, 0, 3);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(3, 3));
    editor.do({ do: "back" });
    await editor.settled();
    expect(kinds(editor)).toEqual(["insertion", "origin"]);
    editor.click(at(3, 4));
    await editor.settled();
    expect(ofKind(editor, "fork")[0]!.position).toEqual([3, 0, 0]);
    expect(ofKind(editor, "open")[0]!.position).toEqual([3, 4, 0]);
  });

  it("draws one straight stretch when asked, and follows the image after it", async () => {
    const { editor } = newEditor();
    editor.click(at(0, 0));
    editor.do({ do: "straight" });
    editor.click(at(2, 0));
    editor.click(at(4, 0));
    await editor.settled();
    expect(strands(editor)[0]!.legs).toEqual(["straight", "guide"]);
  });

  it("writes a cross-link once both of its ends are given, pins between them kept", async () => {
    const { editor } = newEditor();
    await drawStrand(editor);
    for (const x of [0, 4]) editor.click(at(x, 5));
    await editor.point(at(4, 5));
    editor.end("insertion");
    await editor.settled();
    await pointAtStrand(editor, 0, 2.5);
    editor.do({ do: "link", to: editor.leavePlace()! });
    editor.click(at(2.5, 2));
    await pointAtStrand(editor, 1, 2.5, 5);
    editor.do({ do: "link", to: editor.leavePlace()! });
    await editor.settled();
    const [link] = [...editor.document.value.crossLinks.values()];
    expect(link!.via).toEqual([[2.5, 2, 0]]);
    expect(ofKind(editor, "waypoint").map((node) => node.position)).toEqual([
      [2.5, 0, 0],
      [2.5, 5, 0],
    ]);
  });

  it("refuses to end a strand that has no length, and says what to do", async () => {
    const { editor, server } = newEditor();
    editor.click(at(0, 0));
    await editor.point(at(0, 0));
    editor.end("insertion");
    await editor.settled();
    expect(server.failures).toHaveLength(1);
    expect(String(server.failures[0])).toContain("take it back");
    expect(kinds(editor)).toEqual(["origin"]);
  });
});

describe("labels", () => {
  it("are kept for the next insertion, and a new origin takes muscle and head of the last one", async () => {
    const { editor } = newEditor();
    await drawStrand(editor);
    const [insertion] = ofKind(editor, "insertion");
    const [origin] = ofKind(editor, "origin");
    editor.labelNodes([insertion!.id], { leaflet: "anterior", segment: "A2", zone: "rough" });
    editor.labelNodes([origin!.id], { muscle: "antero-lateral", head: 2 });
    for (const x of [0, 2]) editor.click(at(x, 9));
    await editor.point(at(2, 9));
    editor.end("insertion");
    await editor.settled();
    expect(ofKind(editor, "insertion")[1]).toMatchObject({ leaflet: "anterior", segment: "A2", zone: "rough" });
    expect(ofKind(editor, "origin")[1]).toMatchObject({ muscle: "antero-lateral", head: 2 });
  });

  it("of the tree itself go before those of the last string", async () => {
    const { editor } = newEditor();
    await drawStrand(editor);
    await pointAtStrand(editor, 0, 3);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(3, 2));
    await editor.settled();
    editor.labelNodes([ofKind(editor, "fork")[0]!.id], { leaflet: "posterior" });
    editor.labelNodes([ofKind(editor, "insertion")[0]!.id], { leaflet: "anterior" });
    await editor.point(at(3, 2));
    editor.end("insertion");
    await editor.settled();
    expect(
      ofKind(editor, "insertion")
        .map((node) => node.leaflet)
        .sort(),
    ).toEqual(["anterior", "posterior"]);
  });
});

describe("waiting edits", () => {
  it("are all made, in order, when clicks come faster than curves", async () => {
    const { editor, server } = newEditor();
    server.held = true;
    for (const x of [0, 1, 2, 3, 4]) editor.click(at(x, 0));
    await new Promise((tick) => setTimeout(tick, 0));
    expect(editor.projection.value.pins).toHaveLength(5);
    server.release();
    await editor.settled();
    expect(strands(editor)[0]!.via).toEqual([
      [1, 0, 0],
      [2, 0, 0],
      [3, 0, 0],
    ]);
  });

  it("branch from a strand that is still being traced, once it is there", async () => {
    const { editor, server } = newEditor();
    server.held = true;
    for (const x of [0, 2, 4]) editor.click(at(x, 0));
    await editor.point(at(4, 0));
    editor.end("insertion");
    await editor.point(at(3, 0.2));
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(3, 3));
    server.release();
    await editor.settled();
    expect(server.failures).toEqual([]);
    expect(kinds(editor)).toEqual(["fork", "insertion", "open", "origin"]);
    expect(editor.document.value.trees.size).toBe(1);
  });

  it("branch from the right half of a strand that was divided since the pointer saw it", async () => {
    const { editor, server } = newEditor();
    await drawStrand(editor);
    server.held = true;
    await pointAtStrand(editor, 0, 1);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(1, 3));
    await editor.point(at(1, 3));
    editor.end("insertion");
    // Still seen as one strand.
    await pointAtStrand(editor, 0, 3);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(3, 3));
    server.release();
    await editor.settled();
    expect(server.failures).toEqual([]);
    expect(
      ofKind(editor, "fork")
        .map((node) => node.position[0])
        .sort(),
    ).toEqual([1, 3]);
  });

  it("wait for a server that is away, and are made when it is back", async () => {
    const { editor, server } = newEditor();
    server.away = true;
    editor.click(at(0, 0));
    editor.click(at(2, 0));
    await new Promise((tick) => setTimeout(tick, 0));
    expect(editor.serverAway.value).toBe(true);
    expect(server.kept.waiting).toHaveLength(1);
    server.comeBack();
    await editor.settled();
    expect(ofKind(editor, "open")[0]!.position).toEqual([2, 0, 0]);
    expect(server.failures).toEqual([]);
  });

  it("are taken back by undo before anything that was made", async () => {
    const { editor, server, keeper } = newEditor();
    editor.click(at(0, 0));
    await editor.settled();
    server.held = true;
    editor.click(at(2, 0));
    await new Promise((tick) => setTimeout(tick, 0));
    editor.undo();
    server.release();
    await editor.settled();
    expect(kinds(editor)).toEqual(["origin"]);
    expect(keeper.edits).toBe(1);
  });

  it("come back after a reload of the page, and go on with the strand that was under way", async () => {
    const first = newEditor();
    for (const x of [0, 2]) first.editor.click(at(x, 0));
    await first.editor.settled();
    first.server.away = true;
    for (const x of [4, 6]) first.editor.click(at(x, 0));
    await new Promise((tick) => setTimeout(tick, 0));
    const kept = JSON.parse(JSON.stringify(first.server.kept));
    const { editor } = newEditor(new FakeServer(), new MemoryKeeper(first.keeper.lines), kept);
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(1);
    expect(strands(editor)[0]!.via).toEqual([
      [2, 0, 0],
      [4, 0, 0],
    ]);
    expect(ofKind(editor, "open")[0]!.position).toEqual([6, 0, 0]);
  });

  it("that fit nothing any more are said, dropped, and change nothing", async () => {
    const { editor, server, keeper } = newEditor();
    await drawStrand(editor);
    editor.do({ do: "delete-strand", args: { strand: "s99" as StrandId } });
    editor.click(at(9, 9));
    await editor.settled();
    expect(server.failures).toHaveLength(1);
    expect(keeper.edits).toBe(5);
  });
});

describe("history", () => {
  it("undoes pins one by one and lets the next click go on from where the strand ends then", async () => {
    const { editor } = newEditor();
    for (const x of [0, 2, 4]) editor.click(at(x, 0));
    await editor.settled();
    editor.undo();
    await editor.settled();
    editor.click(at(2, 3));
    await editor.settled();
    expect(strands(editor)[0]!.via).toEqual([[2, 0, 0]]);
    expect(ofKind(editor, "open")[0]!.position).toEqual([2, 3, 0]);
  });

  it("reopens an ended strand by undo, and ends it again by redo", async () => {
    const { editor } = newEditor();
    await drawStrand(editor);
    editor.undo();
    await editor.settled();
    expect(kinds(editor)).toEqual(["open", "origin"]);
    expect(editor.underWay.value.kind).toBe("strand");
    editor.redo();
    await editor.settled();
    expect(kinds(editor)).toEqual(["insertion", "origin"]);
    expect(editor.underWay.value.kind).toBe("nothing");
  });

  it("asks for no curve again that was solved before in this session", async () => {
    const { editor, server } = newEditor();
    for (const x of [0, 2, 4]) editor.click(at(x, 0));
    editor.do({ do: "back" });
    await editor.settled();
    expect(server.asked).toHaveLength(2);
  });

  it("makes nothing on a pass that is open for reading only", async () => {
    const keeper = new MemoryKeeper();
    keeper.readOnly = true;
    const { editor } = newEditor(new FakeServer(), keeper);
    editor.click(at(0, 0));
    await editor.settled();
    expect(keeper.edits).toBe(0);
  });
});

describe("mending", () => {
  it("moves a node by carrying it: its strands are solved anew on both sides", async () => {
    const { editor, server } = newEditor();
    await drawStrand(editor);
    await pointAtStrand(editor, 0, 3);
    editor.do({ do: "branch", from: editor.leavePlace()! });
    editor.click(at(3, 3));
    editor.do({ do: "leave" });
    await editor.settled();
    const fork = ofKind(editor, "fork")[0]!;
    editor.carried.value = { kind: "node", id: fork.id };
    editor.click(at(3, 0.5));
    await editor.settled();
    expect(editor.document.value.nodes.get(fork.id)!.position).toEqual([3, 0.5, 0]);
    expect(server.asked.at(-1)).toHaveLength(3);
  });

  it("joins a loose end to the middle of a strand of the same kind of tree with one edit", async () => {
    const { editor, keeper } = newEditor();
    await drawStrand(editor);
    await pointAtStrand(editor, 0, 1);
    editor.do({ do: "cut", args: { strand: strands(editor)[0]!.id, near: [1, 0, 0] } });
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(2);
    const rootless = [...editor.document.value.trees.values()].find((tree) => tree.root === null)!;
    const end = nodes(editor).find((node) => node.tree === rootless.id && node.kind === "open")!;
    const host = strands(editor).find((strand) => strand.tree !== rootless.id)!;
    const before = keeper.edits;
    editor.do({ do: "join", end: end.id, to: { strand: host.id, near: [0.5, 0, 0] } });
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(1);
    expect(ofKind(editor, "fork")).toHaveLength(1);
    expect(keeper.edits).toBe(before + 1);
  });
});
