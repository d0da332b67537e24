import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { pointMm } from "#shared/geometry/types.ts";
import { apply, diffOf, invert, isEmpty, squash, withCurves } from "#shared/trees/apply.ts";
import { type Curve, emptyDocument, type NodeId, type TreeDocument, type TreeNode } from "#shared/trees/document.ts";
import type { Change, Operation } from "#shared/trees/operations.ts";

const node = (number: number, x: number): TreeNode => ({
  id: `n${number}`,
  tree: "t1",
  kind: "open",
  position: pointMm(x, 0, 0),
});

/** Operations that fit the document they follow, made by tracking nothing but which node holds which value. */
function operations(document: TreeDocument, steps: readonly (readonly [number, number | null][])[]): Operation[] {
  const held = new Map<NodeId, TreeNode>(document.nodes);
  return steps.map((step) => ({
    code: "move-node",
    changes: step.map(([number, x]): Change => {
      const id: NodeId = `n${number}`;
      const from = held.get(id) ?? null;
      const to = x === null ? null : node(number, x);
      if (to === null) held.delete(id);
      else held.set(id, to);
      return { table: "node", id, from, to };
    }),
  }));
}

const step = fc.array(fc.tuple(fc.integer({ min: 1, max: 4 }), fc.option(fc.integer({ min: 0, max: 5 }), { nil: null })), {
  maxLength: 4,
});

describe("applying an operation", () => {
  it("is undone exactly by its inverse (fast-check, seed 1)", () => {
    fc.assert(
      fc.property(fc.array(step, { maxLength: 6 }), (steps) => {
        const states = [emptyDocument()];
        const made = operations(states[0]!, steps);
        for (const operation of made) states.push(apply(states[states.length - 1]!, operation).document);
        let back = states[states.length - 1]!;
        for (let i = made.length - 1; i >= 0; i--) {
          back = apply(back, invert(made[i]!)).document;
          expect(back).toEqual(states[i]);
        }
      }),
      { seed: 1, numRuns: 300 },
    );
  });

  it("two at once by squash does what both do one after the other, with one change per record (fast-check, seed 2)", () => {
    fc.assert(
      fc.property(step, step, (first, second) => {
        const [a, b] = operations(emptyDocument(), [first, second]) as [Operation, Operation];
        const both = squash(a, b);
        const after = apply(apply(emptyDocument(), a).document, b).document;
        expect(apply(emptyDocument(), both).document).toEqual(after);
        expect(new Set(both.changes.map((change) => "id" in change && change.id)).size).toBe(both.changes.length);
        expect(isEmpty(both)).toBe(after.nodes.size === 0);
      }),
      { seed: 2, numRuns: 300 },
    );
  });

  it("leaves the document it was given as it was, and shares what it did not touch", () => {
    const before = emptyDocument();
    const { document } = apply(before, operations(before, [[[1, 0]]])[0]!);
    expect(before.nodes.size).toBe(0);
    expect(document.nodes.size).toBe(1);
    expect(document.strands).toBe(before.strands);
    expect(document.curves).toBe(before.curves);
  });

  it("is refused whole when one change does not fit", () => {
    const before = apply(emptyDocument(), operations(emptyDocument(), [[[1, 0]]])[0]!).document;
    const operation: Operation = {
      code: "move-node",
      changes: [
        { table: "node", id: "n2", from: null, to: node(2, 1) },
        { table: "node", id: "n1", from: node(1, 7), to: node(1, 8) },
      ],
    };
    expect(() => apply(before, operation)).toThrowError(expect.objectContaining({ tag: "conflict" }));
    expect([...before.nodes.keys()]).toEqual(["n1"]);
  });

  it("compares records by what they say, not by identity or the order of keys", () => {
    const before = apply(emptyDocument(), operations(emptyDocument(), [[[1, 0]]])[0]!).document;
    const reordered = { position: pointMm(0, 0, 0), kind: "open", tree: "t1", id: "n1" } as TreeNode;
    const operation: Operation = { code: "move-node", changes: [{ table: "node", id: "n1", from: reordered, to: null }] };
    expect(apply(before, operation).document.nodes.size).toBe(0);
  });

  it("tells what was added, updated and removed", () => {
    const [first, second] = operations(emptyDocument(), [
      [
        [1, 0],
        [2, 0],
      ],
      [
        [1, 5],
        [2, null],
        [3, 1],
        [3, null],
      ],
    ]);
    expect(diffOf(first!)).toEqual({ added: ["n1", "n2"], updated: [], removed: [] });
    expect(apply(apply(emptyDocument(), first!).document, second!).diff).toEqual({ added: [], updated: ["n1"], removed: ["n2"] });
  });

  it("adds curves once; a known id keeps its curve", () => {
    const curve = (x: number): Curve => ({
      id: "c1",
      points: Float64Array.of(0, 0, 0, x, 0, 0),
      radii: Float64Array.of(1, 1),
      madeBy: [],
      imageFit: null,
    });
    const once = withCurves(emptyDocument(), [curve(1)]);
    expect(withCurves(once, [curve(2)]).curves.get("c1")!.points[3]).toBe(1);
  });
});
