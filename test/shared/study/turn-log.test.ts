import { describe, expect, it } from "vitest";
import { type Matrix3, pointMm, roundPoint, sizeXyz, spacingMm, type Vec3 } from "#shared/geometry/types.ts";
import { readChain } from "#shared/log/chain.ts";
import { fold, NOTHING_FOLDED } from "#shared/log/fold.ts";
import { PassHistory } from "#shared/log/history.ts";
import { hashOfLine, lineOf } from "#shared/log/line.ts";
import type { LogRecord } from "#shared/log/records.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { ARRAY_TURNS, chirality, shownFromTrue, type TurnedFrame, turnedFrame } from "#shared/study/turn.ts";
import { recordInTrueFrame } from "#shared/study/turn-log.ts";
import type { Curve, TreeDocument } from "#shared/trees/document.ts";
import type { Change, Operation } from "#shared/trees/operations.ts";

// A pass drawn twice from the same true places: once in the true frame, once in the turned one. The second, brought back, must be
// the first, record by record and bit by bit.

const DIRECTION: Matrix3 = [0, 0, 1, -1, 0, 0, 0, -1, 0];
const scan = {
  size: sizeXyz(31, 47, 20),
  spacing: spacingMm(0.0199999, 0.033, 0.071),
  origin: pointMm(1.0000005, -22.2, 1 / 3),
  direction: DIRECTION,
  frame: "LPS" as const,
};

type Place = (p: Vec3) => ReturnType<typeof pointMm>;

/** A pass with every kind of place in it, edits moved and taken back. */
function drawn(place: Place): { records: LogRecord[]; document: TreeDocument } {
  const random = new SeededRandom(3);
  const next = () => place(roundPoint([random.between(-9, 9), random.between(-9, 9), random.between(-9, 9)]));
  const stamp = (k: number) => ({ t: k, mono: k, session: "one" });
  const { history, lines } = PassHistory.begin({ pass: "p", specimen: "s", annotator: "A", number: 1, epoch: "e" }, stamp(0));
  const [a, b, moved] = [next(), next(), next()];
  const line = (id: Curve["id"], from: Vec3, to: Vec3): Curve => ({
    id,
    points: Float64Array.from([...from, ...next(), ...to]),
    radii: Float64Array.from([0.1, Number.NaN, 0.2]),
    madeBy: [[0, 2, "guide"]],
    imageFit: 0.5,
  });
  const commit = (operation: Operation, curves: readonly Curve[], k: number) =>
    void lines.push(...history.commit(operation, "edit", curves, stamp(k)));
  const node = (id: "n1" | "n2", position: typeof a) => ({ id, tree: "t1" as const, kind: "origin" as const, position });
  const strand = {
    id: "s1" as const,
    tree: "t1" as const,
    from: "n1" as const,
    to: "n2" as const,
    curve: "c1" as const,
    via: [next()],
  };
  const first: Change[] = [
    { table: "tree", id: "t1", from: null, to: { id: "t1", name: "T", root: "n1" } },
    { table: "node", id: "n1", from: null, to: node("n1", a) },
    { table: "node", id: "n2", from: null, to: node("n2", b) },
    { table: "strand", id: "s1", from: null, to: strand },
  ];
  commit({ code: "start-tree", changes: first }, [line("c1", a, b)], 1);
  const shifted = { ...strand, curve: "c2" as const, via: [next(), next()] };
  commit(
    {
      code: "move-node",
      changes: [
        { table: "node", id: "n2", from: node("n2", b), to: node("n2", moved) },
        { table: "strand", id: "s1", from: strand, to: shifted },
      ],
    },
    [line("c2", a, moved)],
    2,
  );
  const landmarks = {
    annulus: { closed: true, points: [next(), next()] },
    freeEdges: [[next()]],
    commissures: [next()],
    muscleHeads: [{ muscle: "antero-lateral" as const, head: 1, position: next() }],
  };
  commit({ code: "set-landmarks", changes: [{ table: "landmarks", from: {}, to: landmarks }] }, [], 3);
  const link = { id: "x1" as const, from: "n1" as const, to: "n2" as const, curve: null, via: [next()] };
  commit({ code: "add-cross-link", changes: [{ table: "cross-link", id: "x1", from: null, to: link }] }, [], 4);
  lines.push(...history.undo(stamp(5)), ...history.redo(stamp(6)));
  commit({ code: "delete-cross-link", changes: [{ table: "cross-link", id: "x1", from: link, to: null }] }, [], 7);
  lines.push(...history.jump(0, stamp(8)));
  lines.push(...history.redo(stamp(10)));
  return { records: readChain(lines).map(({ record }) => record), document: history.document };
}

function chained(records: readonly LogRecord[]): string[] {
  const lines: string[] = [];
  for (const record of records)
    lines.push(lineOf({ ...record, prev: lines.length === 0 ? "" : hashOfLine(lines[lines.length - 1]!) }));
  return lines;
}

describe("a log drawn in a turned frame", () => {
  const expected = drawn((p) => roundPoint(p));
  const frames = ARRAY_TURNS.map((turn) => turnedFrame(scan, turn)).filter((frame) => chirality(frame) === 1);

  it("comes back record by record, bit by bit, by all 24 turns of a scan along turned axes", () => {
    expect(frames).toHaveLength(24);
    for (const frame of frames) {
      const shown = drawn((p) => roundPoint(shownFromTrue(frame, p)));
      const back = shown.records.map((record) => recordInTrueFrame(record, frame));
      expect(chained(back)).toEqual(chained(expected.records));
    }
  });

  it("still holds together: it folds to the true document", () => {
    const frame = frames[5] as TurnedFrame;
    const shown = drawn((p) => roundPoint(shownFromTrue(frame, p)));
    const lines = chained(shown.records.map((record) => recordInTrueFrame(record, frame)));
    const { document } = fold(NOTHING_FOLDED, readChain(lines));
    expect([...document.nodes.values()]).toEqual([...expected.document.nodes.values()]);
    expect(document.landmarks).toEqual(expected.document.landmarks);
    expect(document.curves.get("c2")).toEqual(expected.document.curves.get("c2"));
  });
});
