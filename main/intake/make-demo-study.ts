import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import type { DemoSpecimenOrder, DemoStudyLog, IntakeOutcome } from "#main/intake/intake-messages.ts";
import { type IntakeHooks, makeSpecimen } from "#main/intake/make-specimen.ts";
import { TautlineError } from "#shared/errors.ts";
import { demoBlock, demoStudy } from "#shared/phantom/demo-study.ts";
import { demoPassLog } from "#shared/phantom/demo-study-log.ts";

/** Makes one of the demo study's small specimens in this thread. @throws not-found for another name */
export async function makeDemoSpecimen({ name, ...order }: DemoSpecimenOrder, hooks: IntakeHooks = {}): Promise<IntakeOutcome> {
  const demo = demoBlock(name);
  if (!demo) throw new TautlineError("not-found", `The demo study has no specimen ${name}.`, { what: "specimen", id: name });
  const source = sourceFromSlabs(demo.name, demo.grid, demo.dtype, demo.renderSlab as Parameters<typeof sourceFromSlabs>[3]);
  return makeSpecimen(
    source,
    {
      ...order,
      name,
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
}

/** The logs of the invented annotators' passes of the demo study. */
export function demoStudyLogs(): DemoStudyLog[] {
  return demoStudy().passes.map((pass, k) => ({
    specimen: pass.specimen,
    annotator: pass.annotator,
    pass: pass.pass,
    records: demoPassLog(pass, k + 1),
  }));
}
