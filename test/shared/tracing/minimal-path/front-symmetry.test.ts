import { describe, expect, it } from "vitest";
import { createFront, createFrontDomain, expandFront } from "#shared/tracing/minimal-path/front.ts";
import { meetFronts } from "#shared/tracing/minimal-path/meet.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

type Triple = readonly [number, number, number];

const SIZE: Triple = [14, 11, 9];
const SPACING: Triple = [0.04, 0.05, 0.09];
const random = seeded(23);
const COST = Float32Array.from({ length: SIZE[0] * SIZE[1] * SIZE[2] }, () =>
  random() < 0.1 ? Number.POSITIVE_INFINITY : 0.03 + 0.97 * random() ** 3,
);
const voxel = (size: Triple, [x, y, z]: Triple) => (z * size[1] + y) * size[0] + x;
const FROM: Triple = [1, 2, 1];
const TO: Triple = [12, 8, 7];
COST[voxel(SIZE, FROM)] = 0.5;
COST[voxel(SIZE, TO)] = 0.5;

const domainOf = (size: Triple, spacing: Triple, cost: Float32Array) =>
  createFrontDomain({ size, spacing, leastCost: 0.03, mostCost: 1 }, cost);

/** Distances of all voxels from a source, by an exhausted front; NaN where there is no way. */
function distances(size: Triple, spacing: Triple, cost: Float32Array, from: Triple): Float64Array {
  const front = createFront(domainOf(size, spacing, cost), voxel(size, from));
  while (!front.exhausted) expandFront(front, 1 << 20);
  const { mark } = front;
  return front.distance.map((distance, v) => (mark[v]! >= 32 ? distance : Number.NaN));
}

/** The same costs in a box that is moved, turned or mirrored: where each voxel goes. */
function moved(to: Triple, place: (at: Triple) => Triple): Float32Array {
  const out = new Float32Array(to[0] * to[1] * to[2]).fill(Number.POSITIVE_INFINITY);
  for (let z = 0; z < SIZE[2]; z++)
    for (let y = 0; y < SIZE[1]; y++)
      for (let x = 0; x < SIZE[0]; x++) out[voxel(to, place([x, y, z]))] = COST[voxel(SIZE, [x, y, z])]!;
  return out;
}

const plain = distances(SIZE, SPACING, COST, FROM);

// Sums along a path run in the same order whatever the frame: distances agree to rounding.
describe("a front's distances, and the cheapest path between two places", () => {
  for (const [what, size, spacing, place] of [
    ["turned by 90 degrees", [11, 14, 9], [0.05, 0.04, 0.09], ([x, y, z]: Triple): Triple => [10 - y, x, z]],
    ["turned about another axis", [9, 11, 14], [0.09, 0.05, 0.04], ([x, y, z]: Triple): Triple => [8 - z, y, x]],
    ["mirrored", SIZE, SPACING, ([x, y, z]: Triple): Triple => [13 - x, y, z]],
    ["in a larger box", [20, 18, 16], SPACING, ([x, y, z]: Triple): Triple => [x + 3, y + 5, z + 4]],
  ] as const)
    it(`are the same ${what}`, () => {
      const cost = moved(size, place);
      const other = distances(size, spacing, cost, place(FROM));
      for (let z = 0; z < SIZE[2]; z++)
        for (let y = 0; y < SIZE[1]; y++)
          for (let x = 0; x < SIZE[0]; x++) {
            const [a, b] = [plain[voxel(SIZE, [x, y, z])]!, other[voxel(size, place([x, y, z]))]!];
            if (Number.isNaN(a)) expect(b).toBeNaN();
            else expect(b).toBeCloseTo(a, 12);
          }
      const met = meetFronts(domainOf(size, spacing, cost), voxel(size, place(FROM)), voxel(size, place(TO)), 1e6);
      expect(met.kind === "met" && met.cost).toBeCloseTo(plain[voxel(SIZE, TO)]!, 12);
    });

  it("grow with the spacing", () => {
    const spacing = SPACING.map((mm) => 2.5 * mm) as unknown as Triple;
    distances(SIZE, spacing, COST, FROM).forEach((distance, v) => {
      if (Number.isNaN(plain[v]!)) expect(distance).toBeNaN();
      else expect(distance / 2.5).toBeCloseTo(plain[v]!, 12);
    });
  });
});
