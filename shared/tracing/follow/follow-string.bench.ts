// One click on trees of block phantoms with seeds that nothing was developed on: time, length found and proposed, and doubt.
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { followWhole } from "#shared/tracing/follow/follow-string.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

const SIDE = 144;
const SEEDS = [9301, 9302, 9303];

/** Runs the benchmark; one line a phantom. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  for (const seed of SEEDS)
    for (const noise of [0.05, 0.2]) {
      const specimen = blockPhantom({ name: "bench", seed, size: [SIDE, SIDE, SIDE], spacingMm: 0.04, trees: 1, noise });
      const voxels = new Uint16Array(SIDE ** 3);
      specimen.renderSlab(0, SIDE, voxels);
      const pyramid = memoryPyramid(specimen.grid, voxels);
      const points = specimen.truth.trees[0]!.strands[1]!.points!;
      const context = createTraceContext(pyramid, "bright");
      const parameters = { polarity: "bright", blurFwhmMm: specimen.blurFwhmMm } as const;
      const start = cpuMs();
      const proposal = followWhole(pyramid, context, parameters, points[points.length >> 1]!);
      const spent = cpuMs() - start;
      const strands = proposal?.strands ?? [];
      const doubts = strands.reduce((sum, { doubtful }) => sum + doubtful.length, 0);
      print(
        `seed ${seed} noise ${noise.toFixed(2)}  ${(proposal?.lengthMm ?? 0).toFixed(1)} mm in ${strands.length} strands ` +
          `(${specimen.truth.trees[0]!.strands.length} true), ${doubts} doubtful  ${(spent / 1000).toFixed(2)} CPU s`,
      );
    }
}
