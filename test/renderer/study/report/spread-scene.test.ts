import { describe, expect, it } from "vitest";
import { spreadBounds, spreadLimits, spreadStrands } from "#renderer/study/report/spread-scene.ts";
import type { SpreadStrand } from "#shared/agreement/report/report-data.ts";

const strand = (spreadMm: readonly number[], markedBy = 3): SpreadStrand => ({
  specimen: "HB-07",
  tree: "ALPM-01",
  markedBy,
  of: 3,
  line: [
    [0, 0, 0],
    [0, 0, 1],
    [0, 0, 2],
    [0, 3, 2],
  ],
  spreadMm,
});

describe("where in space annotators differ", () => {
  it("is drawn in pieces that join: quiet where they run together, loud where they are far apart", () => {
    const pieces = spreadStrands([strand([0, 0.1, 0.6, 0.6])], { apart: 0.3, far: 0.5 });
    expect(pieces.map(({ manner }) => manner)).toEqual(["quiet", "loud"]);
    expect([...pieces[0]!.points.slice(-3)]).toEqual([...pieces[1]!.points.slice(0, 3)]);
    expect([...pieces[1]!.points.slice(-3)]).toEqual([0, 3, 2]);
  });

  it("is dashed and of another colour where somebody does not have the strand, also without a number", () => {
    const [whole] = spreadStrands([strand([0, 0, 0, 0])], { apart: 0.3, far: 0.5 });
    const [partial] = spreadStrands([strand([], 1)], { apart: 0.3, far: 0.5 });
    expect(partial!.mark.dash).not.toBe(whole!.mark.dash);
    expect(partial!.mark.colour).not.toBe(whole!.mark.colour);
    expect(partial!.points).toHaveLength(12);
  });

  it("takes its limits from the tenth of all places that differ most", () => {
    // By hand: of 0.1, 0.2 ... 1.0 the tenth from the top begins at 1.0.
    const values = Array.from({ length: 10 }, (_, k) => (k + 1) / 10);
    expect(spreadLimits([strand(values)])).toEqual({ apart: 0.5, far: 1 });
    expect(spreadLimits([])).toEqual({ apart: 0, far: 0 });
  });

  it("knows the middle and the reach of what is shown", () => {
    const { centre, radiusMm } = spreadBounds([strand([])]);
    expect([...centre]).toEqual([0, 1.5, 1]);
    expect(radiusMm).toBeCloseTo(Math.hypot(3, 2) / 2, 12);
    expect(spreadBounds([]).radiusMm).toBe(1);
  });
});
