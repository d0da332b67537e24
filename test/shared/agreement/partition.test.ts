import { describe, expect, it } from "vitest";
import { type Attraction, bestPartition, EXACT_VERTICES } from "#shared/agreement/partition.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";

/** Greatest total over all partitions, by going through every one of them: an independent slow model. */
function greatestTotal(passOf: readonly number[], attractions: readonly Attraction[]): number {
  const gain = new Map(attractions.map(({ a, b, gain: g }) => [`${Math.min(a, b)} ${Math.max(a, b)}`, g]));
  const label: number[] = [];
  let best = 0;
  const visit = (vertex: number, groups: number, total: number): void => {
    if (vertex === passOf.length) {
      best = Math.max(best, total);
      return;
    }
    for (let g = 0; g <= groups; g++) {
      const mates = label.flatMap((of, other) => (of === g && other < vertex ? [other] : []));
      if (mates.some((other) => passOf[other] === passOf[vertex])) continue;
      label[vertex] = g;
      const more = mates.reduce((sum, other) => sum + (gain.get(`${other} ${vertex}`) ?? 0), 0);
      visit(vertex + 1, Math.max(groups, g + 1), total + more);
    }
    label[vertex] = -1;
  };
  visit(0, 0, 0);
  return best;
}

function randomProblem(random: SeededRandom, passes: number, each: number, density: number) {
  const passOf = Array.from({ length: passes }, (_, p) => Array.from({ length: 1 + random.below(each) }, () => p)).flat();
  const attractions: Attraction[] = [];
  passOf.forEach((p, a) => {
    for (let b = a + 1; b < passOf.length; b++)
      if (passOf[b] !== p && random.unit() < density) attractions.push({ a, b, gain: random.between(0.1, 5) });
  });
  return { passOf, attractions };
}

describe("the best partition", () => {
  it("reaches the greatest total that trying all partitions finds", () => {
    const random = new SeededRandom(31);
    for (let run = 0; run < 150; run++) {
      const { passOf, attractions } = randomProblem(random, 2 + random.below(3), 3, random.between(0.2, 1));
      const found = bestPartition(passOf, attractions);
      expect(found.exact).toBe(true);
      expect(found.total).toBeCloseTo(greatestTotal(passOf, attractions), 9);
    }
  });

  it("holds every vertex once, at most one of each pass in a group, and the total it claims", () => {
    const random = new SeededRandom(32);
    for (let run = 0; run < 40; run++) {
      const { passOf, attractions } = randomProblem(random, 4, 9, 0.5);
      const { groups, total } = bestPartition(passOf, attractions);
      expect(groups.flat().sort((a, b) => a - b)).toEqual(passOf.map((_, i) => i));
      for (const group of groups) expect(new Set(group.map((i) => passOf[i])).size).toBe(group.length);
      const groupOf = new Map(groups.flatMap((group, g) => group.map((i) => [i, g] as const)));
      const inside = attractions.filter(({ a, b }) => groupOf.get(a) === groupOf.get(b));
      expect(total).toBeCloseTo(
        inside.reduce((sum, { gain }) => sum + gain, 0),
        9,
      );
    }
  });

  it("is exact for parts of the stated size even when everything attracts everything", () => {
    const random = new SeededRandom(33);
    for (const passes of [3, 4, 8]) {
      const passOf = Array.from({ length: EXACT_VERTICES }, (_, i) => Math.floor((i * passes) / EXACT_VERTICES));
      const attractions = passOf.flatMap((p, a) =>
        passOf.flatMap((q, b) => (b > a && q !== p ? [{ a, b, gain: random.between(1, 2) }] : [])),
      );
      expect(bestPartition(passOf, attractions).exact).toBe(true);
    }
  });

  it("says so where it took the best found", () => {
    const random = new SeededRandom(34);
    const passOf = Array.from({ length: 30 }, (_, i) => Math.floor(i / 6));
    const attractions = passOf.flatMap((p, a) =>
      passOf.flatMap((q, b) => (b > a && q !== p ? [{ a, b, gain: random.between(1, 2) }] : [])),
    );
    const { exact, unproven } = bestPartition(passOf, attractions);
    expect(exact).toBe(false);
    expect(unproven).toEqual([30]);
  });

  it("keeps apart what nothing holds together", () => {
    expect(bestPartition([0, 1, 2], []).groups).toEqual([[0], [1], [2]]);
    expect(bestPartition([], [])).toMatchObject({ groups: [], total: 0, exact: true });
  });

  it("lets a third pass join two that do not attract each other", () => {
    const { groups } = bestPartition(
      [0, 1, 2],
      [
        { a: 0, b: 2, gain: 1 },
        { a: 1, b: 2, gain: 1 },
      ],
    );
    expect(groups).toEqual([[0, 1, 2]]);
  });
});
