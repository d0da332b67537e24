import { describe, expect, test } from "vitest";
import { DEFAULT_MEMORY_MB, LEAST_MEMORY_MB, MOST_THREADS, memoryLimit, planMemory } from "#main/engine/memory-plan.ts";

const MB = 2 ** 20;

describe("The engine's memory limit", () => {
  test("is 512 MB, or what the environment says, or what was given, which goes before it", () => {
    expect(memoryLimit(undefined, {})).toBe(512 * MB);
    expect(memoryLimit(undefined, { TAUTLINE_MEMORY: "1024" })).toBe(1024 * MB);
    expect(memoryLimit("2048", { TAUTLINE_MEMORY: "1024" })).toBe(2048 * MB);
  });

  test("is refused with its name and range when it is no number of MB, or too small to work with", () => {
    for (const text of ["447", "0", "-5", "1e3", "512 MB", "9999999"])
      expect(() => memoryLimit(text, {})).toThrow(new RegExp(`^--memory must be .* from ${LEAST_MEMORY_MB} .*found '${text}'`));
    expect(() => memoryLimit(undefined, { TAUTLINE_MEMORY: "lots" })).toThrow(/^TAUTLINE_MEMORY .*'lots'/);
  });

  test("is shared out to less than itself at every size, and a larger one gives every part more", () => {
    let before = planMemory(LEAST_MEMORY_MB * MB, MOST_THREADS, 2);
    for (const mb of [DEFAULT_MEMORY_MB, 1024, 8192]) {
      const plan = planMemory(mb * MB, MOST_THREADS, 2);
      expect(plan.bricks + plan.ridges + 2 * plan.ownRidges + plan.fronts).toBeLessThan(mb * MB);
      for (const part of ["bricks", "ridges", "ownRidges", "fronts"] as const) expect(plan[part]).toBeGreaterThan(before[part]);
      before = plan;
    }
    // Enough for the 250 bricks of 64 KB that a plane touches in each of two showing threads, with the least limit too.
    expect(planMemory(LEAST_MEMORY_MB * MB, MOST_THREADS, 2).bricks).toBeGreaterThan(2 * 250 * 65536);
  });
});
