import { describe, expect, test } from "vitest";
import { PlanesAhead } from "#main/engine/planes-ahead.ts";
import type { SectionRequest } from "#shared/api/engine.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { type BrickPyramid, bricksOf } from "#shared/volume/bricks.ts";
import { plainGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

const SIDE = 160;

/** A pyramid that writes down which bricks are held. */
function watched(): { bricks: BrickPyramid; held: Set<number> } {
  const inner = bricksOf(memoryPyramid(plainGrid([SIDE, SIDE, SIDE], [1, 1, 1]), new Uint8Array(SIDE ** 3)));
  const held = new Set<number>();
  const bricks: BrickPyramid = {
    ...inner,
    holdInto(level, numbers, count, bases) {
      for (let n = 0; n < count; n++) held.add(numbers[n]!);
      inner.holdInto(level, numbers, count, bases);
    },
  };
  return { bricks, held };
}

function request(z: number, u: Vec3 = [1, 0, 0], window = "w"): SectionRequest {
  return {
    ticket: { window, lane: "section", number: 1 },
    specimen: "s",
    plane: { origin: pointMm(0, 0, z), u, v: [0, 1, 0], width: SIDE, height: SIDE },
    slabMm: 0,
    slabMode: "max",
    low: 0,
    high: 1,
    quality: "still",
  };
}

const never = { aborted: false };
/** Layers of bricks (32 voxels, 5 x 5 bricks each) that were held. */
const layers = (held: Set<number>) => [...new Set([...held].map((brick) => Math.floor(brick / 25)))].sort();

describe("Planes ahead", () => {
  test("fetches the bricks in the direction of the steps, and no others", () => {
    for (const [first, second, expected] of [
      [20, 26, [0, 1, 2]],
      [140, 134, [2, 3, 4]],
    ] as const) {
      const { bricks, held } = watched();
      const ahead = new PlanesAhead();
      ahead.shown(bricks, 1, request(first));
      expect(ahead.busy).toBe(false);
      ahead.shown(bricks, 1, request(second));
      let planes = 0;
      for (; ahead.busy; planes++) ahead.fetch(never);
      expect(planes).toBe(8);
      // Eight steps of 6 voxels from 26 reach 74; from 134 down they reach 86.
      expect(layers(held)).toEqual(expected);
    }
  });

  test("goes on in the same direction when the plane is asked for again at another resolution", () => {
    const { bricks, held } = watched();
    const ahead = new PlanesAhead();
    ahead.shown(bricks, 1, request(140));
    ahead.shown(bricks, 1, request(134));
    const { plane } = request(134);
    ahead.shown(bricks, 1, {
      ...request(134),
      plane: { ...plane, u: [2, 0, 0], v: [0, 2, 0], width: SIDE / 2, height: SIDE / 2 },
    });
    while (ahead.busy) ahead.fetch(never);
    expect(held.size).toBeGreaterThan(0);
  });

  test("does nothing after a turned plane, another window's plane or the same plane as the first", () => {
    const { bricks } = watched();
    const ahead = new PlanesAhead();
    ahead.shown(bricks, 1, request(20));
    for (const next of [request(26, [1, 0, 0.1]), request(30, [1, 0, 0.1], "other"), request(36), request(36)]) {
      ahead.shown(bricks, 1, next);
      expect(ahead.busy).toBe(false);
    }
  });

  test("leaves off at once when a task arrives, and is over then", () => {
    const { bricks, held } = watched();
    const ahead = new PlanesAhead();
    ahead.shown(bricks, 1, request(20));
    ahead.shown(bricks, 1, request(26));
    ahead.fetch({ aborted: true });
    expect(held.size).toBe(0);
    expect(ahead.busy).toBe(false);
  });
});
