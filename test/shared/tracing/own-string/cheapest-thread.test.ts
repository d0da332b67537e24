import { describe, expect, it } from "vitest";
import { cheapestThread } from "#shared/tracing/own-string/cheapest-thread.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

/** What a thread costs, by the definition in words: places between planes 1 and the last, and sideways steps. */
function costOf(thread: readonly number[], ridge: Float64Array, side: number, halfway: number): number {
  let cost = 0;
  for (let i = 1; i < thread.length; i++) {
    const [a, b] = [thread[i - 1]!, thread[i]!];
    const du = (b % side) - (a % side);
    const dv = Math.floor(b / side) - Math.floor(a / side);
    const ratio = Math.min(1.6, ridge[i * side * side + b]! / halfway);
    cost += 0.06 * (du * du + dv * dv) + 0.03 + 0.97 / (1 + 4 * ratio ** 4);
  }
  return cost;
}

/** The least cost of all threads, each tried: slow, and shares no code with the kernel. */
function leastCost(ridge: Float64Array, count: number, side: number, halfway: number): number {
  const middle = (side * side) >> 1;
  let least = Number.POSITIVE_INFINITY;
  const walk = (thread: number[]) => {
    if (thread.length === count) {
      if (thread[count - 1] === middle) least = Math.min(least, costOf(thread, ridge, side, halfway));
      return;
    }
    const at = thread[thread.length - 1]!;
    for (let v = Math.floor(at / side) - 1; v <= Math.floor(at / side) + 1; v++)
      for (let u = (at % side) - 1; u <= (at % side) + 1; u++)
        if (u >= 0 && v >= 0 && u < side && v < side) walk([...thread, v * side + u]);
  };
  walk([middle]);
  return least;
}

describe("the cheapest thread through planes", () => {
  it("costs what the cheapest of all threads costs", () => {
    const random = seeded(4);
    for (let trial = 0; trial < 6; trial++) {
      const [count, side] = [6, 3];
      const ridge = Float64Array.from({ length: count * side * side }, () => 2 * random());
      const thread = cheapestThread(ridge, count, side, 1);
      expect(costOf([...thread], ridge, side, 1)).toBeCloseTo(leastCost(ridge, count, side, 1), 12);
    }
  });

  it("goes from middle to middle by steps of at most one sample, straight where nothing is seen", () => {
    const side = 9;
    const thread = cheapestThread(new Float64Array(20 * side * side), 20, side, 1);
    expect([...thread]).toEqual(new Array(20).fill((side * side) >> 1));
  });

  it("runs along a string beside the middle and does not change over to a stronger one", () => {
    const side = 13;
    const count = 40;
    const ridge = new Float64Array(count * side * side);
    // Own string two samples to one side, a stronger one four to the other: both seen, nothing between.
    for (let i = 0; i < count; i++) {
      const own = Math.min(2, i, count - 1 - i);
      ridge[i * side * side + 6 * side + 6 + own] = 1;
      ridge[i * side * side + 6 * side + 2] = 3;
    }
    const thread = cheapestThread(ridge, count, side, 0.5);
    for (let i = 4; i < count - 4; i++) expect(thread[i]).toBe(6 * side + 8);
  });

  it("mirrors and turns with the planes", () => {
    const random = seeded(6);
    const [count, side] = [12, 7];
    const ridge = Float64Array.from({ length: count * side * side }, () => random());
    const moved = (place: (u: number, v: number) => number) => {
      const out = new Float64Array(ridge.length);
      for (let i = 0; i < count; i++)
        for (let v = 0; v < side; v++)
          for (let u = 0; u < side; u++) out[i * side * side + place(u, v)] = ridge[(i * side + v) * side + u]!;
      return out;
    };
    const plain = costOf([...cheapestThread(ridge, count, side, 0.4)], ridge, side, 0.4);
    for (const place of [(u: number, v: number) => v * side + side - 1 - u, (u: number, v: number) => u * side + side - 1 - v]) {
      const other = moved(place);
      expect(costOf([...cheapestThread(other, count, side, 0.4)], other, side, 0.4)).toBeCloseTo(plain, 12);
    }
  });
});
