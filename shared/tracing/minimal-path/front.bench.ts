// Shortest paths from one source over a whole cube; CPU time, so that neighbours on the machine do not count.
import { createFront, createFrontDomain, expandFront } from "#shared/tracing/minimal-path/front.ts";

/** Costs of a few kinds between 0.05 and 1: uniform noise, smooth waves, and a flat field. */
export function benchCost(kind: "uniform" | "waves" | "flat", side: number): Float32Array {
  const cost = new Float32Array(side ** 3);
  let seed = 12345;
  for (let i = 0; i < cost.length; i++) {
    seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
    const x = i % side;
    const y = Math.floor(i / side) % side;
    const z = Math.floor(i / side / side);
    const wave = 0.5 + 0.25 * Math.sin(x / 7) + 0.25 * Math.cos(y / 5 + z / 9);
    const value = kind === "uniform" ? seed / 2 ** 32 : kind === "waves" ? wave : 0.5;
    cost[i] = 0.05 + 0.95 * value;
  }
  return cost;
}

/** Runs the benchmark; one line a case with a checksum. */
export function bench(print: (line: string) => void, cpuMs: () => number, sides: readonly number[] = [128, 192]): void {
  for (const side of sides)
    for (const kind of ["uniform", "waves", "flat"] as const) {
      const cost = benchCost(kind, side);
      const box = { size: [side, side, side], spacing: [1, 1, 1], leastCost: 0.05, mostCost: 1 } as const;
      const times: number[] = [];
      let sum = 0;
      for (let round = 0; round < 4; round++) {
        const start = cpuMs();
        const front = createFront(createFrontDomain(box, cost), 0);
        expandFront(front, Number.POSITIVE_INFINITY);
        times.push(cpuMs() - start);
        sum = 0;
        for (const d of front.distance) sum += d;
      }
      const median = times.slice(1).sort((a, b) => a - b)[1]!;
      print(
        `shortest paths  ${kind.padEnd(8)} ${side}^3  ${median.toFixed(0)} CPU ms  ${((median * 1e6) / side ** 3).toFixed(0)} ns/voxel  checksum ${sum.toFixed(6)}`,
      );
    }
}
