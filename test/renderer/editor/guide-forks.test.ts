import { describe, expect, it } from "vitest";
import { Editor } from "#renderer/editor/editor.ts";
import { adviceWords } from "#renderer/editor/tracing/guide-advice.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { at, FakeServer, MemoryKeeper } from "#test/renderer/editor/fake-places.ts";

/** An editor whose guide runs through the places given, in steps of 0.1 mm; it keeps what it was told to keep closed. */
function editorWithGuide(way: () => readonly Vec3[]) {
  const server = new FakeServer();
  const keeper = new MemoryKeeper();
  const places = server.places(keeper);
  const closed: number[] = [];
  const editor = new Editor({
    ...places,
    guide: {
      ...places.guide,
      open: async (_, impassable) => {
        closed.push(impassable.length);
        return { session: "g1" };
      },
      preview: async () => ({ points: fine(way()).flatMap((p) => [...p]), coarse: false, imageFit: 0.9, doubtful: [] }),
    },
  });
  return { editor, keeper, server, closed };
}

function fine(way: readonly Vec3[]): Vec3[] {
  return way.flatMap((from, i) => {
    const to = way[i + 1];
    if (to === undefined) return [from];
    const steps = Math.max(1, Math.round(distance(from, to) / 0.1));
    return Array.from({ length: steps }, (_, k): Vec3 => {
      const share = k / steps;
      return [from[0] + (to[0] - from[0]) * share, from[1] + (to[1] - from[1]) * share, from[2] + (to[2] - from[2]) * share];
    });
  });
}

/** A stem along x from 0 to 20. */
async function stem(editor: Editor): Promise<void> {
  editor.click(at(0, 0));
  editor.click(at(20, 0));
  await editor.settled();
  editor.do({ do: "leave" });
  await editor.settled();
}

describe("forks that the guide suggests", () => {
  it("starts the branch where the guide leaves the string, in one key", async () => {
    let way: readonly Vec3[] = [];
    const { editor, server } = editorWithGuide(() => way);
    await stem(editor);
    const strand = [...editor.document.value.strands.keys()][0]!;
    editor.do({ do: "branch", from: { strand, near: pointMm(4, 0, 0) } });
    await editor.settled();
    way = [
      [4, 0, 0],
      [9, 0, 0],
      [13, 4, 0],
    ];
    await editor.point(at(13, 4));
    expect(editor.beside.advice.value.map(({ kind }) => kind)).toEqual(["leaves"]);
    expect(adviceWords(editor.document.value, editor.beside.advice.value[0]!)).toMatch(/^leaves .+ s1 after 5\.\d mm$/);
    expect(editor.proposedFork()).toMatchObject({ kind: "branch", strand });
    editor.takeProposedFork();
    await editor.settled();
    editor.click(at(13, 4));
    await editor.settled();
    expect(server.failures).toEqual([]);
    const fork = [...editor.document.value.nodes.values()].find(({ kind }) => kind === "fork")!;
    expect(distance(fork.position, [9, 0, 0])).toBeLessThan(0.1);
    editor.dispose();
  });

  it("gives up an origin that was set on a string by mistake, and branches there", async () => {
    let way: readonly Vec3[] = [];
    const { editor } = editorWithGuide(() => way);
    await stem(editor);
    editor.click(at(4, 0.05));
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(2);
    way = [
      [4, 0.05, 0],
      [9, 0.05, 0],
      [13, 4, 0],
    ];
    await editor.point(at(13, 4));
    editor.takeProposedFork();
    editor.click(at(13, 4));
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(1);
    expect([...editor.document.value.nodes.values()].filter(({ kind }) => kind === "fork")).toHaveLength(1);
    editor.dispose();
  });

  it("joins the end under way where the guide meets the string of another tree", async () => {
    let way: readonly Vec3[] = [];
    const { editor, server } = editorWithGuide(() => way);
    await stem(editor);
    editor.click(at(4, 8));
    editor.click(at(6, 5));
    await editor.settled();
    way = [
      [6, 5, 0],
      [10, 0.02, 0],
    ];
    await editor.point(at(10, 0));
    expect(editor.proposedFork()).toMatchObject({ kind: "join" });
    editor.takeProposedFork();
    await editor.settled();
    expect(server.failures).toEqual([]);
    // It was drawn from its far end: its origin is an end now, and the stem's tree has it.
    expect(editor.document.value.trees.size).toBe(1);
    const kinds = [...editor.document.value.nodes.values()].map(({ kind }) => kind).sort();
    expect(kinds).toEqual(["fork", "open", "open", "origin"]);
    expect(editor.underWay.value).toEqual({ kind: "nothing" });
    editor.undo();
    await editor.settled();
    expect(editor.document.value.trees.size).toBe(2);
    editor.dispose();
  });

  it("suggests nothing for a strand with pins that rides another, but says so", async () => {
    let way: readonly Vec3[] = [];
    const { editor } = editorWithGuide(() => way);
    await stem(editor);
    editor.click(at(2, 6));
    editor.click(at(4, 3));
    await editor.settled();
    way = [
      [4, 3, 0],
      [6, 0.02, 0],
      [12, 0.02, 0],
      [16, 4, 0],
    ];
    await editor.point(at(16, 4));
    expect(editor.beside.advice.value.map(({ kind }) => kind)).toEqual(["rides"]);
    expect(editor.proposedFork()).toBeNull();
    editor.dispose();
  });

  it("tells the engine which strings are closed, and pins the way around them", async () => {
    let way: readonly Vec3[] = [];
    const { editor, closed, server } = editorWithGuide(() => way);
    await stem(editor);
    editor.click(at(2, 6));
    await editor.settled();
    way = [
      [2, 6, 0],
      [6, 0.4, 0],
      [12, 0.4, 0],
      [16, 6, 0],
    ];
    await editor.point(at(16, 6));
    expect(closed.at(-1)).toBe(0);
    editor.toggleClosed();
    await editor.point(at(16, 6));
    expect(closed.at(-1)).toBe(1);
    editor.click(at(16, 6));
    await editor.settled();
    const via = server.asked.at(-1)!.at(-1)!.via;
    expect(via.length).toBeGreaterThan(4);
    // Pins stand on the guide's way, and only where it runs beside the closed string.
    for (const pin of via) expect(Math.abs(pin[1]!)).toBeLessThan(0.7);
    expect(Math.min(...via.map((pin) => pin[1]!))).toBeCloseTo(0.4, 1);
    editor.dispose();
  });
});
