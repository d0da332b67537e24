// Beside a general graph library's exact edit distance in one run, on one machine: median CPU seconds and their ratio.
import { canonicalTree } from "#shared/compare/canonical.ts";
import { geometryCosts } from "#shared/compare/costs.ts";
import { editDistance } from "#shared/compare/edit-distance/edit-distance.ts";
import { libraryDistances } from "#test/shared/compare/general-library-distances.ts";
import { population } from "#test/shared/compare/populations.ts";
import { seededRandom } from "#test/shared/compare/small-trees.ts";

const PEER_LIMIT_SECONDS = 60;
const PAIRS = 3;

/** One line a size and population; the peer's column says why when it is missing. */
export function bench(print: (line: string) => void, cpuMs: () => number, sizes: readonly number[] = [6, 8, 10, 12]): void {
  print(`geometry costs, free origin, median of ${PAIRS} pairs; the peer has ${PEER_LIMIT_SECONDS} s a pair`);
  print("population  nodes  here CPU s  peer CPU s  ratio here/peer");
  for (const kind of ["near", "unrelated"] as const) {
    for (const size of sizes) {
      const pairs = population(kind, size, PAIRS, seededRandom(2000 + size)).map(
        ([a, b]) => [canonicalTree(a, 0), canonicalTree(b, 0)] as const,
      );
      editDistance(pairs[0]![0], pairs[0]![1], geometryCosts(2), "free");
      const own = pairs.map(([a, b]) => {
        const start = cpuMs();
        const { map } = editDistance(a, b, geometryCosts(2), "free");
        return { map, seconds: (cpuMs() - start) / 1000 };
      });
      const peer = libraryDistances(
        pairs,
        own.map((answer) => answer.map),
        2,
        PEER_LIMIT_SECONDS,
      );
      const here = median(own.map((answer) => answer.seconds));
      const start = `${kind.padEnd(10)}  ${String(size).padStart(5)}  ${here.toFixed(4).padStart(10)}`;
      if (typeof peer === "string") print(`${start}  skipped: ${peer}`);
      else {
        const there = median(peer.answers.map((answer) => answer.seconds));
        const late = there >= 0.95 * PEER_LIMIT_SECONDS ? " (stopped at its limit)" : "";
        print(`${start}  ${there.toFixed(4).padStart(10)}  ${(here / there).toFixed(4)}${late}`);
      }
    }
  }
}

function median(values: readonly number[]): number {
  return [...values].sort((x, y) => x - y)[Math.floor(values.length / 2)]!;
}
