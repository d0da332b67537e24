import { describe, expect, it } from "vitest";
import type { Intent } from "#renderer/editor/session/intent.ts";
import { project, tipOf } from "#renderer/editor/tracing/projection.ts";
import { NOTHING } from "#renderer/editor/tracing/under-way.ts";
import { pointMm } from "#shared/geometry/types.ts";
import { emptyDocument } from "#shared/trees/document.ts";

const pin = (x: number): Intent => ({ do: "pin", at: { point: pointMm(x, 0, 0) } });
const of = (...waiting: Intent[]) => project(emptyDocument(), NOTHING, waiting);

describe("what will be under way", () => {
  it("is a strand with every pin that waits, the guide starting from the last", () => {
    const projection = of(pin(0), pin(1), pin(2));
    expect(projection).toMatchObject({ kind: "strand", settled: 0 });
    expect(projection.pins).toHaveLength(3);
    expect(tipOf(projection)).toEqual([2, 0, 0]);
  });

  it("is nothing after an end, after leaving, and after a jump in the history", () => {
    const ends: Intent[] = [{ do: "end", kind: "insertion", at: null }, { do: "leave" }, { do: "jump", seq: 0 }];
    for (const end of ends) expect(of(pin(0), pin(1), end).kind).toBe("nothing");
  });

  it("takes waiting pins back one by one", () => {
    expect(of(pin(0), pin(1), { do: "back" }).pins).toEqual([[0, 0, 0]]);
    expect(of(pin(0), { do: "back" }).kind).toBe("nothing");
  });

  it("changes the next stretch over to straight, and back to the image with the pin", () => {
    expect(of(pin(0), { do: "straight" }).leg).toBe("straight");
    expect(of(pin(0), { do: "straight" }, { do: "straight" }).leg).toBe("guide");
    expect(of(pin(0), { do: "straight" }, pin(1)).leg).toBe("guide");
  });

  it("counts a place that is still to be snapped where it was aimed", () => {
    const aim = { at: pointMm(4, 5, 6), normal: [0, 0, 1] as const, slabMm: 0, reachMm: 1, snap: true, candidate: 0 };
    expect(tipOf(of(pin(0), { do: "pin", at: { aim } }))).toEqual([4, 5, 6]);
  });

  it("starts a branch at the place pointed at while its string is not there yet", () => {
    const sight = { at: pointMm(1, 1, 1), normal: [0, 0, 1] as const, mmPerPx: 0.1, slabMm: 0.4 };
    expect(of({ do: "branch", from: { passing: sight } })).toMatchObject({ kind: "branch", pins: [[1, 1, 1]] });
  });
});
