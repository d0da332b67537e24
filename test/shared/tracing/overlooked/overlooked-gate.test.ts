// The gate of the search. Source of the figures: the project's issue on tracing (95 % of removed strands longer than 1 mm found, at
// most 2 false stretches a volume). Truth: the phantom generator, from whose trees strands are taken away at random.
import { describe, expect, it } from "vitest";
import type { FileStrand } from "#shared/formats/chordae/chordae-file.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { findStretches } from "#shared/tracing/overlooked/find-stretches.ts";
import { blockCounts, searchBlock, searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { phantomScan, placesOf } from "#test/shared/tracing/follow/phantom-scan.ts";

/** Seeds fixed before the code was run on them: seed, voxels a side, trees, noise as a share of the strings' contrast. */
const CASES = [
  [9201, 160, 1, 0.05],
  [9202, 192, 2, 0.1],
  [9203, 192, 2, 0.2],
  [9204, 224, 4, 0.1],
  [9205, 224, 4, 0.2],
] as const;
const DRAWS = 4;

function lengthOf({ points }: FileStrand): number {
  return points!.reduce((sum, point, i) => sum + (i === 0 ? 0 : distance(points![i - 1]!, point)), 0);
}

describe("the search for overlooked strings", () => {
  it("finds strands that were taken away, and hardly anything else", { timeout: 300_000 }, () => {
    let [removedStrands, foundStrands] = [0, 0];
    for (const [seed, side, trees, noise] of CASES) {
      const { specimen, pyramid } = phantomScan(seed, side, trees, noise);
      const context = createTraceContext(pyramid, "bright");
      const blocks = blockCounts(context.pyramid.levels[searchLevel(context.pyramid)]!).reduce((a, b) => a * b, 1);
      const points = Array.from({ length: blocks }, (_, block) => searchBlock(context, block));
      const strands = specimen.truth.trees.flatMap((tree) => tree.strands);
      const lineOf = (strand: FileStrand) => ({ points: strand.points!.flat(), radii: strand.radii! });
      const random = new SeededRandom(seed);
      for (let draw = 0; draw < DRAWS; draw++) {
        const removed = strands.filter(() => random.unit() < 0.25);
        const kept = strands.filter((strand) => !removed.includes(strand));
        const stretches = findStretches(context, points, kept.map(lineOf), { minimumMm: 1 }).map((stretch) =>
          placesOf(stretch.points),
        );
        const near = new SegmentIndex(stretches);
        // A strand counts as found when stretches lie along half of it: within its radius and two voxels of the searched level.
        for (const strand of removed.filter((one) => lengthOf(one) > 1)) {
          removedStrands += 1;
          const beside = strand.points!.filter((point, i) => near.nearest(point).distance <= (strand.radii![i] ?? 0) + 0.16);
          if (beside.length >= strand.points!.length / 2) foundStrands += 1;
        }
        const truth = new SegmentIndex(removed.map((strand) => strand.points!));
        const wrong = stretches.filter((line) => line.filter((at) => truth.nearest(at).distance <= 0.5).length < line.length / 2);
        expect(wrong.length, `false stretches of seed ${seed}`).toBeLessThanOrEqual(2);
      }
    }
    console.log(`overlooked: ${foundStrands} of ${removedStrands} removed strands found`);
    expect(foundStrands / removedStrands).toBeGreaterThanOrEqual(0.95);
  });
});
