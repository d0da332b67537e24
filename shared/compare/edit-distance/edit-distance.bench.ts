// Edit distance on fixed populations of chordae-shaped trees: how long the proof takes, and how often it ends in time.
import { canonicalTree } from "#shared/compare/canonical.ts";
import { geometryCosts, structureCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { population } from "#test/shared/compare/populations.ts";
import { seededRandom } from "#test/shared/compare/small-trees.ts";

const LIMIT_MS = { near: 30_000, unrelated: 5_000 };

/** One line a population: median and largest CPU seconds, share proven within the limit, and a checksum of the distances. */
export function bench(print: (line: string) => void, cpuMs: () => number, sizes: readonly number[] = [10, 20, 30, 40, 60]): void {
  print("population  costs      nodes  median CPU s  most CPU s  proven  partial maps  checksum");
  for (const kind of ["near", "unrelated"] as const) {
    for (const size of sizes) {
      const pairs = population(kind, size, kind === "near" ? 21 : 7, seededRandom(1000 + size));
      for (const costs of [geometryCosts(2), structureCosts()]) {
        const times: number[] = [];
        let [proven, visited, checksum] = [0, 0, 0];
        for (const [a, b] of pairs) {
          const start = cpuMs();
          const answer = editDistance(
            canonicalTree(a, 0),
            canonicalTree(b, 0),
            costs,
            "held",
            () => cpuMs() - start > LIMIT_MS[kind],
          );
          times.push(cpuMs() - start);
          if (answer.exact) proven += 1;
          visited += answer.visited;
          checksum += answer.exact ? answer.ged : 0;
        }
        times.sort((x, y) => x - y);
        const seconds = (ms: number) => (ms / 1000).toFixed(3).padStart(10);
        print(
          `${kind.padEnd(10)}  ${costs.preset.padEnd(9)}  ${String(size).padStart(5)}  ${seconds(times[Math.floor(times.length / 2)]!)}    ${seconds(times[times.length - 1]!)}  ${`${proven}/${pairs.length}`.padStart(6)}  ${String(visited).padStart(12)}  ${checksum.toFixed(6)}`,
        );
      }
    }
  }
}
