// The search of a scan for strings, block by block: voxels of the searched level per CPU second, with what that means for a scan of
// 2000 x 2000 x 1000 voxels of 40 um (8 GB), whose searched level has an eighth of them.
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { findStretches } from "#shared/tracing/overlooked/find-stretches.ts";
import { blockCounts, searchBlock, searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

const SIDE = 256;
/** Voxels of the searched level of the 8 GB scan. */
const LARGE = (2000 * 2000 * 1000) / 8;

/** Runs the benchmark; one line a phantom. */
export function bench(print: (line: string) => void, cpuMs: () => number): void {
  for (const noise of [0.02, 0.05, 0.2]) {
    const specimen = blockPhantom({ name: "bench", seed: 9401, size: [SIDE, SIDE, SIDE], spacingMm: 0.04, trees: 4, noise });
    const voxels = new Uint16Array(SIDE ** 3);
    specimen.renderSlab(0, SIDE, voxels);
    const context = createTraceContext(memoryPyramid(specimen.grid, voxels), "bright", { ridgeTiles: 40, bricks: 48 });
    const level = context.pyramid.levels[searchLevel(context.pyramid)]!;
    const total = blockCounts(level).reduce((product, count) => product * count, 1);
    let start = cpuMs();
    const found = Array.from({ length: total }, (_, block) => searchBlock(context, block));
    const search = (cpuMs() - start) / 1000;
    const searched = level.size.reduce((product, side) => product * side, 1);
    start = cpuMs();
    const stretches = findStretches(context, found, [], { minimumMm: 1 });
    const list = cpuMs() - start;
    const points = found.reduce((sum, { strengths }) => sum + strengths.length, 0);
    print(
      `noise ${noise.toFixed(2)}  ${(searched / search / 1e6).toFixed(2)} Mvoxel/CPU s, ${points} points, ${stretches.length} stretches in ${list.toFixed(0)} ms; ` +
        `8 GB by extrapolation ${(LARGE / (searched / search)).toFixed(0)} CPU s`,
    );
  }
}
