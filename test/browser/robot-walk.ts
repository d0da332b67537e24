// The walk of the robot through the demo valve: opens it, draws the trees asked for, exports them and has the program's own
// command line compare them with the true ones.
import { spawnSync } from "node:child_process";
import { writeFile } from "node:fs/promises";
import { join } from "node:path";
import { demoValve } from "#shared/phantom/demo-valve.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { exportTreeFile, startPass } from "#test/browser/desk-steps.ts";
import { PageRobot } from "#test/browser/page-robot.ts";
import { DIST, openPage, startProgram } from "#test/browser/running-program.ts";
import { type Effort, interactions } from "#test/tools/tracing-robot/effort.ts";
import { stringsToDraw } from "#test/tools/tracing-robot/strings-to-draw.ts";

const SEED = 4302;

/** What the walk reached on one tree. */
export interface WalkedTree {
  readonly name: string;
  readonly nodes: number;
  readonly effort: Effort;
  /** Edit distance in structure from the true tree, and centreline distances; null when the tree was not matched. */
  readonly ged: number | null;
  readonly meanMm: number | null;
}

export interface Walk {
  readonly trees: readonly WalkedTree[];
  readonly faults: readonly string[];
}

interface Comparison {
  readonly pairs: readonly {
    readonly a: string;
    readonly ged: number;
    readonly exact: boolean;
    readonly distances?: { readonly mean: number | null };
  }[];
}

/** @param names of the demo valve's trees. @param told of each tree as it is done. */
export async function walkDemoValve(names: readonly string[], told: (line: string) => void = () => undefined): Promise<Walk> {
  const { truth } = demoValve();
  const program = await startProgram();
  const { page, faults, close } = await openPage(program.url, join(program.folder, "profile"), { width: 1920, height: 1080 });
  try {
    await page.getByRole("button", { name: "Open the demo valve" }).first().click();
    await page.getByRole("button", { name: /^Open AN-1/ }).waitFor({ timeout: 300_000 });
    await startPass(page, "AN-4");
    told("desk open");
    const robot = await PageRobot.on(page, new SeededRandom(SEED));
    told("planes looked at");
    const chosen = truth.trees.filter(({ name }) => names.includes(name!));
    const efforts: Effort[] = [];
    for (const tree of chosen) {
      const before = { ...robot.effort };
      await robot.showPlaneFor(tree);
      for (const [n, string] of stringsToDraw(tree).entries()) await robot.draw(string, n > 0);
      const { clicks, keys, wheelSteps } = robot.effort;
      efforts.push({ clicks: clicks - before.clicks, keys: keys - before.keys, wheelSteps: wheelSteps - before.wheelSteps });
      told(`drawn: ${tree.name}`);
    }
    const [mine, right] = [join(program.folder, "mine.chordae.json"), join(program.folder, "truth.chordae.json")];
    await exportTreeFile(page, mine);
    // Only the trees that were to be drawn; the scan is the same whatever its hash.
    const { volume: _, ...rest } = truth;
    await writeFile(right, JSON.stringify({ ...rest, volume: null, crossLinks: [], trees: chosen }));
    const args = [join(DIST, "main/cli.mjs"), "compare", right, mine, "--costs", "structure", "--json"];
    const run = spawnSync(process.execPath, args, { encoding: "utf8", maxBuffer: 2 ** 28 });
    if (run.status !== 0) throw new Error(`compare ended with ${run.status}: ${run.stderr}`);
    const { pairs } = JSON.parse(run.stdout) as Comparison;
    return {
      faults: [...faults],
      trees: chosen.map((tree, n) => {
        const pair = pairs.find(({ a }) => a === tree.id);
        return {
          name: tree.name!,
          nodes: tree.nodes.length,
          effort: efforts[n]!,
          ged: pair?.ged ?? null,
          meanMm: pair?.distances?.mean ?? null,
        };
      }),
    };
  } finally {
    await close();
    await program.stop();
  }
}

/** The walk as lines of a table, and the sums. */
export function walkTable({ trees, faults }: Walk): string[] {
  const row = ({ name, nodes, effort, ged, meanMm }: Omit<WalkedTree, "ged"> & { readonly ged: number | null | string }) =>
    `${name.padEnd(10)} ${String(nodes).padStart(5)}  ${String(effort.clicks).padStart(6)} ${String(effort.keys).padStart(4)} ${String(effort.wheelSteps).padStart(5)}` +
    `  ${(interactions(effort) / nodes).toFixed(2).padStart(6)}  ${String(ged ?? "not matched").padStart(4)}  ${meanMm === null ? "" : `${meanMm.toFixed(3)} mm`}`;
  const sum = (of: (tree: WalkedTree) => number) => trees.reduce((total, tree) => total + of(tree), 0);
  const effort = {
    clicks: sum((tree) => tree.effort.clicks),
    keys: sum((tree) => tree.effort.keys),
    wheelSteps: sum((tree) => tree.effort.wheelSteps),
  };
  return [
    "tree       nodes  clicks keys wheel  a node  edit distance, mean distance",
    ...trees.map(row),
    row({ name: "all", nodes: sum(({ nodes }) => nodes), effort, ged: sum(({ ged }) => ged ?? 0), meanMm: null }),
    ...faults.map((fault) => `error on the browser's console: ${fault}`),
  ];
}
