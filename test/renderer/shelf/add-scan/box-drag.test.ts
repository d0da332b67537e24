import { expect, test } from "vitest";
import { dragged, type FlatBox, gripAt } from "#renderer/shelf/add-scan/box-drag.ts";

const BOX: FlatBox = [20, 30, 60, 80];
const REACH = [4, 4] as const;
const SIDES = [100, 120] as const;

test("a pointer takes hold of sides and corners near them, of the box inside it, and begins a new box elsewhere", () => {
  expect(gripAt(BOX, [21, 50], REACH)).toEqual({ across: -1, down: 0 });
  expect(gripAt(BOX, [63, 50], REACH)).toEqual({ across: 1, down: 0 });
  expect(gripAt(BOX, [40, 78], REACH)).toEqual({ across: 0, down: 1 });
  expect(gripAt(BOX, [58, 82], REACH)).toEqual({ across: 1, down: 1 });
  expect(gripAt(BOX, [40, 50], REACH)).toBe("all");
  expect(gripAt(BOX, [80, 50], REACH)).toBe("new");
  expect(gripAt(BOX, [40, 90], REACH)).toBe("new");
  // A box thinner than the reach is still held by the nearer side.
  expect(gripAt([20, 0, 22, 120], [23, 60], REACH)).toEqual({ across: 1, down: 0 });
});

test("a held side follows the pointer alone, and may pass the other one", () => {
  expect(dragged(BOX, { across: -1, down: 0 }, [20, 50], [33.4, 90], SIDES)).toEqual([33, 30, 60, 80]);
  expect(dragged(BOX, { across: 1, down: 1 }, [60, 80], [500, 500], SIDES)).toEqual([20, 30, 100, 120]);
  expect(dragged(BOX, { across: -1, down: 0 }, [20, 50], [70, 50], SIDES)).toEqual([60, 30, 70, 80]);
});

test("edges stay at least one voxel apart, also at the picture's rim", () => {
  expect(dragged(BOX, { across: -1, down: 0 }, [20, 50], [60.2, 50], SIDES)).toEqual([60, 30, 61, 80]);
  expect(dragged(BOX, "new", [100, 120], [100, 120], SIDES)).toEqual([99, 119, 100, 120]);
  expect(dragged(BOX, "new", [-5, 3.6], [-9, 3.7], SIDES)).toEqual([0, 4, 1, 5]);
});

test("a box moved as a whole keeps its sides and stops at the rim", () => {
  expect(dragged(BOX, "all", [40, 50], [50, 45], SIDES)).toEqual([30, 25, 70, 75]);
  expect(dragged(BOX, "all", [40, 50], [400, -400], SIDES)).toEqual([60, 0, 100, 50]);
});

test("a new box spans from where the pointer went down to where it is", () => {
  expect(dragged(BOX, "new", [80, 100], [10, 90.4], SIDES)).toEqual([10, 90, 80, 100]);
});
