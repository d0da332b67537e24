import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import type { DemoOrder, DemoOutcome } from "#main/intake/intake-messages.ts";
import { type IntakeHooks, makeSpecimen } from "#main/intake/make-specimen.ts";
import { demoValve } from "#shared/phantom/demo-valve.ts";
import { withVolumeHash } from "#shared/phantom/phantom-specimen.ts";

/** Makes the demo valve's specimen in this thread, and gives the invented annotators' passes over it. */
export async function makeDemo(order: DemoOrder, hooks: IntakeHooks = {}): Promise<DemoOutcome> {
  const demo = demoValve();
  const source = sourceFromSlabs(demo.name, demo.grid, demo.dtype, demo.renderSlab as Parameters<typeof sourceFromSlabs>[3]);
  const made = await makeSpecimen(
    source,
    {
      ...order,
      name: demo.name,
      spacing: demo.grid.spacing,
      handedness: "confirmed",
      polarity: "bright",
      facts: demo.facts,
      landmarks: demo.landmarks,
      synthetic: true,
      blurFwhmMm: demo.blurFwhmMm,
    },
    hooks,
  );
  return { ...made, passes: demoPasses(made.record.volume.sha256) };
}

/** The invented annotators' passes over the demo valve, whose stored voxels have this hash. */
export function demoPasses(sha256: string): DemoOutcome["passes"] {
  return demoValve().passes.map(({ annotator, file }) => ({ annotator, file: withVolumeHash(file, sha256) }));
}
