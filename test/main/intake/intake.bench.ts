// Taking a scan in beside a synced plain copy of the same file, in the order A-B-B-A, five rounds: so that what else happens on
// the machine meets both. Run: npm run build && npm run bench -- intake [GB]   (0.25 without a size)
import { execFile } from "node:child_process";
import { closeSync, copyFileSync, fsyncSync, openSync } from "node:fs";
import { rm } from "node:fs/promises";
import { loadavg } from "node:os";
import { join } from "node:path";
import { promisify } from "node:util";
import { DIST } from "#test/browser/running-program.ts";
import { writeReferenceScan } from "#test/tools/reference-scan.ts";
import { sizesOr, withWorkFolder } from "#test/tools/work-folder.ts";

const ROUNDS = 5;
const run = promisify(execFile);

interface Cost {
  readonly wall: number;
  readonly cpu: number;
}

/** A line each for intake and copy: medians of seconds per GB over all rounds, least and greatest beside them. */
export async function bench(print: (line: string) => void, cpuMs: () => number): Promise<void> {
  for (const bytes of sizesOr([0.25])) {
    await withWorkFolder(3.6 * bytes + 0.5e9, async (folder) => {
      const scan = join(folder, "scan.nrrd");
      const gb = (await writeReferenceScan(scan, bytes)) / 1e9;
      const hashes = new Set<string>();
      const takeIn = async (): Promise<Cost> => {
        const library = join(folder, "library");
        const args = [join(DIST, "main/cli.mjs"), "intake", scan, "--library", library, "--polarity", "bright", "--json"];
        const { stdout } = await run(process.execPath, args);
        const { seconds, cpuSeconds, sha256 } = JSON.parse(stdout);
        hashes.add(sha256);
        await rm(library, { recursive: true });
        return { wall: seconds / gb, cpu: cpuSeconds / gb };
      };
      const copy = async (): Promise<Cost> => {
        const [began, cpu] = [performance.now(), cpuMs()];
        const to = join(folder, "copy.nrrd");
        copyFileSync(scan, to);
        const file = openSync(to, "r+");
        fsyncSync(file);
        closeSync(file);
        const cost = { wall: (performance.now() - began) / 1000 / gb, cpu: (cpuMs() - cpu) / 1000 / gb };
        await rm(to);
        return cost;
      };
      await copy(); // The file is in the system's cache for both from here on.
      const intakes: Cost[] = [];
      const copies: Cost[] = [];
      for (let round = 0; round < ROUNDS; round++) {
        const [a, b] = [await takeIn(), await copy()];
        const [c, d] = [await copy(), await takeIn()];
        intakes.push(mean(a, d));
        copies.push(mean(b, c));
      }
      print(
        `${gb.toFixed(2)} GB, median of ${ROUNDS} rounds A-B-B-A (least to greatest), seconds per GB; load ${loadavg()[0]!.toFixed(1)}`,
      );
      print(`intake:      wall ${spread(intakes, "wall")}, CPU ${spread(intakes, "cpu")}`);
      print(`synced copy: wall ${spread(copies, "wall")}, CPU ${spread(copies, "cpu")}`);
      print(`checksum ${[...hashes].map((hash) => hash.slice(0, 12)).join(" ")}`);
    });
  }
}

function mean(a: Cost, b: Cost): Cost {
  return { wall: (a.wall + b.wall) / 2, cpu: (a.cpu + b.cpu) / 2 };
}

function spread(costs: readonly Cost[], key: keyof Cost): string {
  const sorted = costs.map((cost) => cost[key]).sort((x, y) => x - y);
  return `${sorted[ROUNDS >> 1]!.toFixed(2)} (${sorted[0]!.toFixed(2)} to ${sorted[ROUNDS - 1]!.toFixed(2)})`;
}
