import { describe, expect, it } from "vitest";
import {
  createFront,
  createFrontDomain,
  expandFront,
  type FrontDomain,
  hasReached,
  walkBack,
  walkBackInto,
} from "#shared/tracing/minimal-path/front.ts";
import { meetFronts } from "#shared/tracing/minimal-path/meet.ts";
import { plainFront } from "#test/shared/tracing/minimal-path/front-in-javascript.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

type Size = readonly [number, number, number];

function domain(size: Size, spacing: Size, cost: Float32Array): FrontDomain {
  let least = 1;
  let most = 0;
  for (const c of cost)
    if (Number.isFinite(c)) {
      least = Math.min(least, c);
      most = Math.max(most, c);
    }
  return createFrontDomain({ size, spacing, leastCost: least, mostCost: most }, cost);
}

/** Dijkstra by repeated scan over all voxels: slow, and plainly right (Dijkstra 1959). */
function slowDistances({ size, spacing, cost }: FrontDomain, source: number): Float64Array {
  const [nx, ny, nz] = size;
  const n = nx * ny * nz;
  const distance = new Float64Array(n).fill(Number.POSITIVE_INFINITY);
  const done = new Uint8Array(n);
  distance[source] = 0;
  for (;;) {
    let v = -1;
    for (let i = 0; i < n; i++) if (!done[i] && distance[i]! < (v < 0 ? Number.POSITIVE_INFINITY : distance[v]!)) v = i;
    if (v < 0) return distance;
    done[v] = 1;
    const x = v % nx;
    const y = Math.floor(v / nx) % ny;
    const z = Math.floor(v / (nx * ny));
    for (let dz = -1; dz <= 1; dz++)
      for (let dy = -1; dy <= 1; dy++)
        for (let dx = -1; dx <= 1; dx++) {
          const [ux, uy, uz] = [x + dx, y + dy, z + dz];
          if (ux < 0 || uy < 0 || uz < 0 || ux >= nx || uy >= ny || uz >= nz) continue;
          const u = (uz * ny + uy) * nx + ux;
          const length = Math.hypot(dx * spacing[0], dy * spacing[1], dz * spacing[2]);
          distance[u] = Math.min(distance[u]!, distance[v]! + ((cost[v]! + cost[u]!) / 2) * length);
        }
  }
}

function randomCost(count: number, seed: number, walls = 0): Float32Array {
  const random = seeded(seed);
  return Float32Array.from({ length: count }, () => (random() < walls ? Number.POSITIVE_INFINITY : 0.03 + 0.97 * random() ** 3));
}

describe("a front", () => {
  it("gives the distances of a slow Dijkstra, on anisotropic voxels and around walls", () => {
    for (const [seed, walls] of [
      [1, 0],
      [2, 0.3],
      [3, 0.6],
    ] as const) {
      const size = [9, 8, 7] as const;
      const cost = randomCost(504, seed, walls);
      cost[100] = 0.5;
      const d = domain(size, [0.04, 0.05, 0.1], cost);
      const front = createFront(d, 100);
      expandFront(front, Number.POSITIVE_INFINITY);
      const slow = slowDistances(d, 100);
      for (let v = 0; v < 504; v++) {
        if (Number.isFinite(slow[v]!)) expect(front.distance[v]).toBeCloseTo(slow[v]!, 12);
        else expect(hasReached(front, v)).toBe(false);
      }
    }
  });

  it("settles the same labels in small bites as at once, and every path it gives costs its distance", () => {
    const size = [12, 11, 10] as const;
    const d = domain(size, [1, 1, 1], randomCost(1320, 4));
    const whole = createFront(d, 7);
    expandFront(whole, Number.POSITIVE_INFINITY);
    const bites = createFront(d, 7);
    while (!bites.exhausted) expandFront(bites, 13);
    expect(bites.distance).toEqual(whole.distance);
    expect(bites.mark).toEqual(whole.mark);
    for (const target of [0, 500, 1319]) {
      const path = walkBack(whole, target)!;
      expect(path[0]).toBe(target);
      expect(path[path.length - 1]).toBe(7);
      let cost = 0;
      for (let i = 1; i < path.length; i++) {
        const [a, b] = [path[i - 1]!, path[i]!];
        const delta = [
          (a % 12) - (b % 12),
          (Math.floor(a / 12) % 11) - (Math.floor(b / 12) % 11),
          Math.floor(a / 132) - Math.floor(b / 132),
        ];
        expect(Math.max(...delta.map(Math.abs))).toBe(1);
        cost += ((d.cost[a]! + d.cost[b]!) / 2) * Math.hypot(...delta);
      }
      expect(cost).toBeCloseTo(whole.distance[target]!, 9);
    }
  });

  it("is, to the last bit, a front of plain stacks that looks at one neighbour at a time", () => {
    const cases = [
      { size: [17, 13, 11], spacing: [0.04, 0.05, 0.1], walls: 0.2, goal: -1 },
      { size: [17, 13, 11], spacing: [0.04, 0.04, 0.04], walls: 0, goal: 2400 },
      { size: [1, 40, 9], spacing: [1, 2, 3], walls: 0.1, goal: -1 },
      { size: [40, 2, 2], spacing: [1, 1, 1], walls: 0, goal: 150 },
      { size: [3, 3, 60], spacing: [1, 1, 0.5], walls: 0.1, goal: -1 },
      // Buckets of many labels, and a memory that grows meanwhile.
      { size: [70, 60, 50], spacing: [1, 1, 1], walls: 0, goal: -1 },
    ] as const;
    for (const [n, { size, spacing, walls, goal }] of cases.entries()) {
      const cost = randomCost(size[0] * size[1] * size[2], 20 + n, walls);
      cost[7] = 0.5;
      if (goal >= 0) cost[goal] = 0.5;
      const d = domain(size, spacing, cost);
      const front = createFront(d, 7, goal);
      expandFront(front, Number.POSITIVE_INFINITY);
      const plain = plainFront(d, 7, goal);
      expect(front.mark).toEqual(plain.mark);
      expect(front.settled).toBe(plain.settled);
      const apart = front.distance.filter((distance, v) => plain.mark[v]! >= 32 && distance !== plain.distance[v]);
      expect(apart).toHaveLength(0);
    }
  });

  it("stands as before when costs cannot be filled, and can be let grow again", () => {
    const cost = randomCost(70 * 40 * 36, 31);
    let failing = true;
    const filling: FrontDomain = createFrontDomain({
      size: [70, 40, 36],
      spacing: [1, 1, 1],
      leastCost: 0.03,
      mostCost: 1,
      fill(voxel) {
        if (failing && voxel % 70 >= 32) throw new Error("the disk is gone");
        const tileOf = (v: number) => [v % 70, Math.floor(v / 70) % 40, Math.floor(v / 2800)].map((at) => at >> 5).join();
        const costs = filling.cost;
        for (let v = 0; v < cost.length; v++) if (tileOf(v) === tileOf(voxel)) costs[v] = cost[v]!;
      },
    });
    const front = createFront(filling, 3);
    for (let n = 0; n < 3; n++) expect(() => expandFront(front, Number.POSITIVE_INFINITY)).toThrow("the disk is gone");
    expect(front.exhausted).toBe(false);
    failing = false;
    expandFront(front, Number.POSITIVE_INFINITY);
    expect(front.settled).toBe(cost.length);
    const whole = createFront(
      createFrontDomain({ size: [70, 40, 36], spacing: [1, 1, 1], leastCost: 0.03, mostCost: 1 }, cost),
      3,
    );
    expandFront(whole, Number.POSITIVE_INFINITY);
    expect(front.distance).toEqual(whole.distance);
    expect(front.mark).toEqual(whole.mark);
  });

  it("asks for the cost of a tile only where it goes", () => {
    let filled = 0;
    const d: FrontDomain = createFrontDomain({
      size: [64, 32, 32],
      spacing: [1, 1, 1],
      leastCost: 0.5,
      mostCost: 0.5,
      fill(voxel) {
        filled++;
        const { cost } = d;
        const tile = Math.floor((voxel % 64) / 32);
        for (let v = 0; v < cost.length; v++) if (Math.floor((v % 64) / 32) === tile) cost[v] = 0.5;
      },
    });
    const front = createFront(d, 0);
    expandFront(front, 100);
    expect(filled).toBe(1);
    expandFront(front, Number.POSITIVE_INFINITY);
    expect(filled).toBe(2);
    expect(front.settled).toBe(64 * 32 * 32);
  });

  it("has no path to a voxel it has not seen, nor one longer than the room it is given", () => {
    const d = domain([5, 5, 5], [1, 1, 1], new Float32Array(125).fill(1));
    const front = createFront(d, 0);
    expect(walkBack(front, 124)).toBeNull();
    expandFront(front, Number.POSITIVE_INFINITY);
    expect(walkBackInto(front, 124, new Int32Array(3))).toBe(-1);
    expect(walkBackInto(front, 124, new Int32Array(5))).toBe(5);
    expect(() => createFront(d, 125)).toThrow(RangeError);
  });
});

describe("two fronts that meet", () => {
  it("find a path as cheap as one front does", () => {
    for (const seed of [5, 6, 7, 8]) {
      const d = domain([20, 18, 16], [0.04, 0.04, 0.08], randomCost(5760, seed, seed % 2 ? 0 : 0.2));
      d.cost[3] = 0.2;
      d.cost[5700] = 0.2;
      const one = createFront(d, 3);
      expandFront(one, Number.POSITIVE_INFINITY, 5700);
      const met = meetFronts(d, 3, 5700, Number.POSITIVE_INFINITY);
      expect(met.kind).toBe("met");
      if (met.kind !== "met") return;
      expect(met.cost).toBeCloseTo(one.distance[5700]!, 12);
      expect(met.path[0]).toBe(3);
      expect(met.path[met.path.length - 1]).toBe(5700);
    }
  });

  it("find the path on fewer voxels than without an eye for the other's source, and keep distances exact", () => {
    for (const seed of [11, 12, 13]) {
      const size = [60, 24, 20] as const;
      // A cheap string along x in dear surroundings.
      const cost = Float32Array.from(randomCost(28_800, seed), (c, v) => {
        const y = Math.floor(v / 60) % 24;
        const z = Math.floor(v / 1440);
        return y === 12 && z === 10 ? 0.03 + 0.02 * c : 0.2 + 0.8 * c;
      });
      const d = domain(size, [0.04, 0.05, 0.04], cost);
      const [from, to] = [(10 * 24 + 12) * 60 + 1, (10 * 24 + 12) * 60 + 58];
      const plain = createFront(d, from);
      expandFront(plain, Number.POSITIVE_INFINITY, to);
      const leaning = createFront(d, from, to);
      expandFront(leaning, Number.POSITIVE_INFINITY, to);
      expect(leaning.settled).toBeLessThan(plain.settled / 2);
      const whole = createFront(d, from);
      expandFront(whole, Number.POSITIVE_INFINITY);
      for (let v = 0; v < cost.length; v++) if (hasReached(leaning, v)) expect(leaning.distance[v]).toBe(whole.distance[v]);
      expect(walkBack(leaning, to)).toEqual(walkBack(whole, to));
      const met = meetFronts(d, from, to, Number.POSITIVE_INFINITY);
      expect(met.kind === "met" && [...met.path].reverse()).toEqual([...walkBack(whole, to)!]);
    }
  });

  it("say so when walls part them, the budget ends or the work is stopped; and a voxel reaches itself", () => {
    const cost = new Float32Array(1000).fill(1);
    for (let v = 500; v < 600; v++) cost[v] = Number.POSITIVE_INFINITY;
    const d = domain([10, 10, 10], [1, 1, 1], cost);
    expect(meetFronts(d, 0, 999, 1e9).kind).toBe("blocked");
    // One cheap voxel off the way: nothing is sure then about the cost of what lies ahead.
    const plain = new Float32Array(64000).fill(1);
    plain[39] = 0.01;
    expect(meetFronts(domain([40, 40, 40], [1, 1, 1], plain), 0, 63999, 5000).kind).toBe("over-budget");
    expect(meetFronts(d, 0, 400, 1e9, () => true).kind).toBe("stopped");
    expect(meetFronts(d, 7, 7, 1e9)).toEqual({ kind: "met", path: Int32Array.of(7), cost: 0, settled: 0 });
  });
});
