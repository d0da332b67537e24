import { describe, expect, it } from "vitest";
import { Editor } from "#renderer/editor/editor.ts";
import type { FollowAnswer } from "#shared/api/follow.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { FollowProposal, ProposedNode, ProposedStrand } from "#shared/tracing/follow/proposal.ts";
import type { NodeKind } from "#shared/trees/document.ts";
import { at, FakeServer, MemoryKeeper } from "#test/renderer/editor/fake-places.ts";

const node = (id: string, kind: NodeKind, x: number, y: number, meets: number | null = null): ProposedNode => ({
  id,
  kind,
  position: pointMm(x, y, 0),
  certainty: "sure",
  reason: null,
  meets,
});
function strand(id: string, from: ProposedNode, to: ProposedNode, doubtful = false): ProposedStrand {
  const place = (share: number): Vec3 => [
    from.position[0] + (to.position[0] - from.position[0]) * share,
    from.position[1] + (to.position[1] - from.position[1]) * share,
    0,
  ];
  return {
    id,
    from: from.id,
    to: to.id,
    via: [],
    points: Array.from({ length: 21 }, (_, i) => place(i / 20)).flat(),
    radii: new Array(21).fill(0.3),
    imageFit: 0.9,
    doubtful: doubtful ? [{ first: 3, last: 9, reason: "faint" }] : [],
  };
}

/** A fork: from (10, 10) up to (10, 20), from there to (5, 25) and (15, 25). */
function forked(meets: number | null = null): FollowProposal {
  const [root, fork, left, right] = [
    node("r", "origin", 10, 10, meets),
    node("f", "fork", 10, 20),
    node("l", "insertion", 5, 25),
    node("q", "lost-end", 15, 25),
  ];
  return {
    nodes: [root, fork, left, right],
    strands: [strand("a", root, fork), strand("b", fork, left), strand("c", fork, right, true)],
    root: "r",
    clicked: { strand: "a", point: 10 },
    lengthMm: 24,
  };
}

function editorThatFollows(answers: FollowAnswer[]) {
  const server = new FakeServer();
  const keeper = new MemoryKeeper();
  const asked: { at: Vec3; traced: number }[] = [];
  const closed: string[] = [];
  const editor = new Editor({
    ...server.places(keeper),
    follow: {
      open: async (place, traced) => {
        asked.push({ at: place, traced: traced.length });
        return { session: "f1" };
      },
      more: async () => answers.shift() ?? { done: true, growing: [], lengthMm: 0, proposal: null },
      close: async (session) => void closed.push(session),
    },
  });
  return { server, editor, asked, closed };
}
const growing = (lengthMm: number): FollowAnswer => ({
  done: false,
  growing: [[10, 10, 0, 10, 10 + lengthMm, 0]],
  lengthMm,
  proposal: null,
});
const done = (proposal: FollowProposal | null): FollowAnswer => ({ done: true, growing: [], lengthMm: 0, proposal });
const kinds = (editor: Editor) => [...editor.document.value.nodes.values()].map(({ kind }) => kind).sort();

describe("a proposal of the whole string", () => {
  it("grows, waits, and is taken whole as one edit, its curves made by follow and its doubts kept", async () => {
    const { editor, server, asked } = editorThatFollows([growing(2), growing(5), done(forked())]);
    const lengths: number[] = [];
    const stop = editor.proposing.lines.subscribe((lines) => lengths.push(lines.length));
    await editor.propose(pointMm(10, 15, 0));
    stop();
    expect(asked).toEqual([{ at: [10, 15, 0], traced: 0 }]);
    expect(lengths).toEqual([0, 0, 1, 1, 3]);
    expect(editor.document.value.nodes.size).toBe(0);
    editor.proposing.take();
    await editor.settled();
    expect(server.failures).toEqual([]);
    expect(kinds(editor)).toEqual(["fork", "insertion", "lost-end", "origin"]);
    const { strands, curves } = editor.document.value;
    expect([...strands.values()].map(({ certainty }) => certainty)).toEqual([undefined, undefined, "doubtful"]);
    expect([...curves.values()].map(({ madeBy }) => madeBy)).toEqual([
      [[0, 20, "follow"]],
      [[0, 20, "follow"]],
      [[0, 20, "follow"]],
    ]);
    // Nothing was solved anew: what was shown is what was taken.
    expect(server.asked.flat()).toEqual([]);
    expect(editor.proposing.following.value.kind).toBe("none");
    editor.undo();
    await editor.settled();
    expect(editor.document.value.nodes.size).toBe(0);
    editor.dispose();
  });

  it("loses a strand by a click on it, gets it back by another, and is taken without it", async () => {
    const { editor } = editorThatFollows([done(forked())]);
    await editor.propose(pointMm(10, 15, 0));
    editor.click(at(13, 23));
    expect(editor.proposing.lines.value.map(({ kept }) => kept)).toEqual([true, true, false]);
    editor.click(at(13, 23));
    expect(editor.proposing.lines.value.map(({ kept }) => kept)).toEqual([true, true, true]);
    editor.click(at(13, 23));
    // The clicked strand stays: a click on it changes nothing, and starts no tree either.
    editor.click(at(10, 13));
    editor.proposing.take();
    await editor.settled();
    expect(kinds(editor)).toEqual(["insertion", "origin", "waypoint"]);
    editor.dispose();
  });

  it("is taken up to the pointer: open there, its last strand solved from pins", async () => {
    const { editor, server } = editorThatFollows([done(forked())]);
    await editor.propose(pointMm(10, 15, 0));
    await editor.point(at(7.5, 22.5));
    const cut = editor.proposedAt();
    expect(cut).toEqual({ strand: "b", point: 10 });
    editor.proposing.take(cut);
    await editor.settled();
    expect(kinds(editor)).toEqual(["fork", "lost-end", "open", "origin"]);
    expect(server.asked.flat()).toHaveLength(1);
    expect(server.asked.flat()[0]).toMatchObject({ from: [10, 20, 0], to: [7.5, 22.5, 0] });
    editor.dispose();
  });

  it("is joined where it meets a string that is traced already, in the same edit", async () => {
    const { editor, server, asked } = editorThatFollows([done(forked(0))]);
    editor.click(at(0, 10));
    editor.click(at(30, 10));
    await editor.settled();
    editor.do({ do: "leave" });
    await editor.settled();
    await editor.propose(pointMm(10, 15, 0));
    expect(asked[0]!.traced).toBe(1);
    const before = editor.keeper.edits;
    editor.proposing.take();
    await editor.settled();
    expect(server.failures).toEqual([]);
    expect(editor.keeper.edits).toBe(before + 1);
    expect(editor.document.value.trees.size).toBe(1);
    expect(kinds(editor)).toEqual(["fork", "fork", "insertion", "lost-end", "open", "origin"]);
    const fork = [...editor.document.value.nodes.values()].find(
      ({ kind, position }) => kind === "fork" && distance(position, [10, 10, 0]) < 1e-6,
    );
    expect(fork).toBeDefined();
    editor.dispose();
  });

  it("says when there is no string, and tells what went wrong; nothing is left to put away", async () => {
    const { editor, server } = editorThatFollows([done(null)]);
    await editor.propose(pointMm(1, 1, 0));
    expect(String(server.failures[0])).toContain("No string was found through this place");
    expect(editor.proposing.following.value.kind).toBe("none");
    editor.dispose();
  });

  it("is put away while it grows: the engine is told, and what comes later shows nothing", async () => {
    const { editor, closed, server } = editorThatFollows([growing(1), growing(2), growing(3), done(forked())]);
    const running = editor.propose(pointMm(10, 15, 0));
    await Promise.resolve();
    await Promise.resolve();
    editor.proposing.putAway();
    await running;
    expect(editor.proposing.following.value.kind).toBe("none");
    expect(editor.proposing.lines.value).toEqual([]);
    expect(closed).toEqual(["f1"]);
    expect(server.failures).toEqual([]);
    editor.dispose();
  });
});
