// The robot annotator on every trial volume, a block of four trees and the demo valve, with seeds that nothing was developed on: what
// it reached by the guide alone and with follow, against the fewest vertices of whoever clicks polylines.
import type { FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { demoValve } from "#shared/phantom/demo-valve.ts";
import type { PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";
import { trialPhantom } from "#shared/phantom/trials/trial-phantom.ts";
import { TRIAL_VOLUMES } from "#shared/phantom/trials/trial-volumes.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import type { VoxelPyramid } from "#shared/volume/pyramid.ts";
import { interactions } from "#test/tools/tracing-robot/effort.ts";
import { bestPlane, drawTree, thickestFirst } from "#test/tools/tracing-robot/robot-annotator.ts";
import { RobotDesk } from "#test/tools/tracing-robot/robot-desk.ts";
import { followTree } from "#test/tools/tracing-robot/robot-follower.ts";
import { type RobotResult, resultOf } from "#test/tools/tracing-robot/robot-result.ts";

const SEED = 4301;

interface Case {
  readonly name: string;
  readonly make: () => {
    readonly pyramid: VoxelPyramid;
    readonly parameters: TraceParameters;
    readonly trees: readonly FileTree[];
  };
}

function ofSpecimen({ grid, renderSlab, blurFwhmMm, truth }: PhantomSpecimen): ReturnType<Case["make"]> {
  const voxels = new Uint16Array(grid.size[0] * grid.size[1] * grid.size[2]);
  renderSlab(0, grid.size[2], voxels);
  return { pyramid: memoryPyramid(grid, voxels), parameters: { polarity: "bright", blurFwhmMm }, trees: truth.trees };
}

const CASES: readonly Case[] = [
  ...TRIAL_VOLUMES.map(
    (volume): Case => ({
      name: volume.name,
      make: () => {
        const { grid, voxels, parameters, truth } = trialPhantom(volume, SEED);
        return { pyramid: memoryPyramid(grid, voxels), parameters, trees: truth.trees };
      },
    }),
  ),
  {
    name: "block of 4 trees",
    make: () =>
      ofSpecimen(blockPhantom({ name: "block", seed: SEED, size: [192, 192, 192], spacingMm: 0.05, trees: 4, noise: 0.1 })),
  },
  { name: "demo valve", make: () => ofSpecimen(demoValve()) },
];

/** @param names of cases; all when left out. */
export async function bench(print: (line: string) => void, _cpuMs: () => number, names?: readonly string[]): Promise<void> {
  print("                              clicks       a    error, voxels   vertices with   vertices a click or key");
  print("volume             by     nodes + keys wheel  node   mean   most   this mean, most     mean  most");
  const total = { guide: { cost: 0, mean: 0, most: 0 }, follow: { cost: 0, mean: 0, most: 0 } };
  for (const { name, make } of CASES.filter((each) => !names || names.includes(each.name))) {
    const { pyramid, parameters, trees } = make();
    for (const by of ["guide", "follow"] as const) {
      const desk = new RobotDesk(pyramid, parameters, new SeededRandom(SEED, 60));
      const plane = bestPlane(trees);
      if (plane !== "flat") desk.showPlane(plane);
      for (const tree of thickestFirst(trees)) await (by === "guide" ? drawTree : followTree)(desk, tree);
      const result = resultOf(desk.editor.document.value, trees, desk.effort);
      total[by].cost += interactions(result.effort);
      total[by].mean += result.verticesOnAverage;
      total[by].most += result.verticesWithin;
      print(row(name, by, result, desk));
      desk.editor.dispose();
    }
  }
  for (const [by, { cost, mean, most }] of Object.entries(total))
    print(
      `all by ${by}: vertices a click or key ${(mean / cost).toFixed(1)} for the same mean error, ${(most / cost).toFixed(1)} for the same greatest (goal 5)`,
    );
}

function row(name: string, by: string, r: RobotResult, { voxelMm, failures }: RobotDesk): string {
  const cost = interactions(r.effort);
  const n = (value: number, width: number, digits = 0) => value.toFixed(digits).padStart(width);
  const differs =
    r.forks.drawn === r.forks.true && r.ends.drawn === r.ends.true
      ? ""
      : `  structure: ${r.forks.drawn} of ${r.forks.true} forks, ${r.ends.drawn} of ${r.ends.true} ends`;
  const refused = failures.length > 0 ? `  ${failures.length} refused, the first: ${failures[0]}` : "";
  return (
    `${name.padEnd(18)} ${by.padEnd(6)} ${n(r.nodes, 5)} ${n(cost, 6)} ${n(r.effort.wheelSteps, 5)} ${n(cost / r.nodes, 5, 2)}` +
    `  ${n(r.meanMm / voxelMm, 5, 2)} ${n(r.mostMm / voxelMm, 6, 2)}   ${n(r.verticesOnAverage, 9)}, ${n(r.verticesWithin, 4)}` +
    `     ${n(r.verticesOnAverage / cost, 4, 1)}  ${n(r.verticesWithin / cost, 4, 1)}${differs}${refused}`
  );
}
