// How far a fork's proposed place is from the true one when the fork was clicked beside it.
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, distance, scale } from "#shared/geometry/vec3.ts";
import { anySide } from "#shared/phantom/trials/string-shapes.ts";
import type { TrialPhantom } from "#shared/phantom/trials/trial-phantom.ts";
import { SeededRandom } from "#shared/random/seeded-random.ts";
import { type ForkArm, placeFork } from "#shared/tracing/place-fork.ts";
import { solveStrand } from "#shared/tracing/solve-strand.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";

/** How far beside its true place each fork is clicked, local diameters. */
const CLICKED_OFF = 0.75;

/** Distances from the true places in local diameters (of the thickest string at the fork), after placing each fork by its solved strands. */
export function forkErrors(made: TrialPhantom): number[] {
  const pyramid = memoryPyramid(made.grid, made.voxels);
  const context = createTraceContext(pyramid, made.parameters.polarity);
  const random = new SeededRandom(made.seed, 20);
  return made.truth.trees.flatMap(({ nodes, strands }) =>
    nodes
      .filter((node) => node.kind === "fork")
      .map((fork) => {
        const meeting = strands.filter((strand) => strand.from === fork.id || strand.to === fork.id);
        const radius = Math.max(
          ...meeting.map((strand) => (strand.from === fork.id ? strand.radii![0]! : strand.radii!.at(-1)!)),
        );
        const clicked = roundPoint(add(fork.position as Vec3, scale(anySide(random), CLICKED_OFF * 2 * radius)));
        const arms = meeting.map((strand): ForkArm => {
          const other = made.clicks.get(strand.from === fork.id ? strand.to : strand.from)!;
          const { points, radii } = solveStrand(
            pyramid,
            { from: clicked, via: [], to: other },
            made.parameters,
            undefined,
            context,
          );
          return { points, radii };
        });
        const place = placeFork(arms, clicked, radius);
        return place ? distance(place.at, fork.position as Vec3) / (2 * radius) : Number.POSITIVE_INFINITY;
      }),
  );
}
