// The robot annotator on every trial volume, with seeds that nothing was developed on, and what it reached.
import { trialPhantom } from "#shared/phantom/trials/trial-phantom.ts";
import { TRIAL_VOLUMES } from "#shared/phantom/trials/trial-volumes.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { interactions } from "#test/tools/tracing-robot/effort.ts";
import { bestPlane, drawTree, thickestFirst } from "#test/tools/tracing-robot/robot-annotator.ts";
import { RobotDesk } from "#test/tools/tracing-robot/robot-desk.ts";
import { resultOf } from "#test/tools/tracing-robot/robot-result.ts";

const SEED = 4301;

export async function bench(print: (line: string) => void, _cpuMs: () => number, names?: readonly string[]): Promise<void> {
  print("volume               nodes  clicks keys wheel  a node   mean  most (voxels)   vertices: mean most   ratio: mean most");
  for (const volume of TRIAL_VOLUMES.filter(({ name }) => !names || names.includes(name))) {
    const made = trialPhantom(volume, SEED);
    const desk = new RobotDesk(memoryPyramid(made.grid, made.voxels), made.parameters, new SeededRandom(SEED, 60));
    const { trees } = made.truth;
    const plane = bestPlane(trees);
    if (plane !== "flat") desk.showPlane(plane);
    for (const tree of thickestFirst(trees)) await drawTree(desk, tree);
    const r = resultOf(desk.editor.document.value, trees, desk.effort);
    const cost = interactions(r.effort);
    const n = (value: number, digits = 0) => value.toFixed(digits);
    print(
      `${volume.name.padEnd(20)} ${n(r.nodes).padStart(5)}  ${n(r.effort.clicks).padStart(5)} ${n(r.effort.keys).padStart(4)} ${n(r.effort.wheelSteps).padStart(5)}  ` +
        `${n(cost / r.nodes, 2).padStart(6)}  ${n(r.meanMm / desk.voxelMm, 2).padStart(5)} ${n(r.mostMm / desk.voxelMm, 2).padStart(5)}` +
        `           ${n(r.verticesOnAverage).padStart(14)} ${n(r.verticesWithin).padStart(4)}` +
        `          ${n(r.verticesOnAverage / cost, 1).padStart(5)} ${n(r.verticesWithin / cost, 1).padStart(4)}` +
        (r.forks.drawn === r.forks.true && r.ends.drawn === r.ends.true
          ? ""
          : `  structure differs: ${r.forks.drawn}/${r.forks.true} forks, ${r.ends.drawn}/${r.ends.true} ends`) +
        (desk.failures.length > 0 ? `  ${desk.failures.length} edits refused: ${desk.failures[0]}` : ""),
    );
  }
}
