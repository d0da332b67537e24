import { describe, expect, it } from "vitest";
import type { Client } from "#renderer/client/client.ts";
import { type FollowedLine, SectionModel } from "#renderer/desk/model/section-model.ts";
import { awayFrom } from "#renderer/section/view-plane.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { plainGrid } from "#shared/volume/grid.ts";

const specimen = {
  id: "s1",
  display: { low: 10, high: 90 },
  polarity: "bright",
  landmarks: {},
  volume: { ...plainGrid([100, 100, 200], [0.1, 0.1, 0.1]), range: { min: 0, max: 100 } },
} as unknown as SpecimenRecord;

function newModel(line: FollowedLine | null = null) {
  const model = new SectionModel({ client: {} as Client, specimen: { value: specimen }, followed: () => line });
  model.showAll();
  return model;
}

const rounded = (values: readonly number[]) => values.map((value) => Math.round(value * 1e6) / 1e6 + 0);

describe("the section", () => {
  it("begins in the middle of the scan, seeing all of it", () => {
    const model = newModel();
    expect(rounded(model.plane.value!.centre)).toEqual([4.95, 4.95, 9.95]);
  });

  it("steps by one voxel along the line of sight", () => {
    const model = newModel();
    const before = model.plane.value!.centre;
    model.step(3);
    const moved = model.plane.value!.centre.map((value, axis) => value - before[axis]!);
    expect(rounded(moved)).toEqual(rounded(awayFrom(model.plane.value!).map((value) => value * 0.3)));
  });

  it("keeps the place under the pointer where it is while it zooms", () => {
    const model = newModel();
    const { centre, mmPerPx } = model.plane.value!;
    model.zoom(2);
    expect(rounded(model.plane.value!.centre)).toEqual(rounded(centre));
    expect(model.plane.value!.mmPerPx).toBeCloseTo(mmPerPx / 2, 9);
  });

  it("stands across the followed line, and steps along it", () => {
    const model = newModel({
      points: [
        [0, 5, 5],
        [10, 5, 5],
      ],
      doubtful: [],
    });
    model.showPlane("across");
    expect(rounded(awayFrom(model.plane.value!).map(Math.abs))).toEqual([1, 0, 0]);
    const x = model.plane.value!.centre[0];
    model.step(2);
    expect(model.plane.value!.centre[0]).toBeCloseTo(x + 0.2, 6);
    expect(rounded(model.plane.value!.centre.slice(1))).toEqual([5, 5]);
  });

  it("contains the followed line when it shows along it", () => {
    const model = newModel({
      points: [
        [0, 5, 5],
        [10, 5, 5],
      ],
      doubtful: [],
    });
    model.showPlane("along");
    expect(Math.abs(awayFrom(model.plane.value!)[0])).toBeLessThan(1e-9);
  });

  it("goes to each doubtful place in turn, and begins again after the last", () => {
    const model = newModel({
      points: [
        [0, 5, 5],
        [10, 5, 5],
      ],
      doubtful: [
        [2, 3],
        [7, 8],
      ],
    });
    model.goTo([0.1, 5, 5] as never);
    const visited: number[] = [];
    for (let i = 0; i < 3; i++) {
      model.nextDoubtfulPlace();
      visited.push(model.plane.value!.centre[0]);
    }
    expect(rounded(visited)).toEqual([2.5, 7.5, 2.5]);
  });

  it("never lets the grey window close", () => {
    const model = newModel();
    model.setWindow(50, 20);
    expect(model.high.value).toBeGreaterThan(model.low.value);
  });
});
