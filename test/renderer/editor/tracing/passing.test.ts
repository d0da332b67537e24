import { describe, expect, it } from "vitest";
import { passing, type Sight, settleAnchor } from "#renderer/editor/tracing/passing.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { at, newEditor } from "#test/renderer/editor/fake-places.ts";

const sight = (x: number, y: number, z = 0): Sight => ({ at: pointMm(x, y, z), normal: [0, 0, 1], mmPerPx: 0.05, slabMm: 0.4 });

/** A strand from (0, 0, 0) to (10, 0, 0), straight. */
async function oneStrand() {
  const { editor } = newEditor();
  for (const x of [0, 10]) editor.click(at(x, 0));
  await editor.settled();
  return editor.document.value;
}

describe("what passes the pointer", () => {
  it("is the strand within 20 pixels as it is seen, at the place nearest to the pointer", async () => {
    const document = await oneStrand();
    expect(passing(document, sight(4, 0.9))).toMatchObject({ near: [4, 0, 0] });
    expect(passing(document, sight(4, 1.1))).toBeNull();
  });

  it("is a node rather than its strand when the pointer is on it", async () => {
    const document = await oneStrand();
    expect(passing(document, sight(10.3, 0.2))).toHaveProperty("node");
  });

  it("is nothing that lies far before or behind the plane", async () => {
    const document = await oneStrand();
    expect(passing(document, sight(4, 0, 0.6))).not.toBeNull();
    expect(passing(document, sight(4, 0, 0.8))).toBeNull();
  });

  it("is asked for with a clear refusal when nothing is there", async () => {
    const document = await oneStrand();
    expect(() => settleAnchor(document, { passing: sight(4, 5) })).toThrow("Point at the string");
  });
});
