import { createEngine } from "#main/engine/engine.ts";
import { checkInPlace } from "#main/intake/in-place/in-place-scan.ts";
import { removeUnfinished } from "#main/intake/make-specimen.ts";
import {
  runDemo,
  runDemoPasses,
  runDemoSpecimen,
  runDemoStudyLogs,
  runIntake,
  runLabels,
  runLook,
  runProjections,
  runTurned,
} from "#main/intake/run-intake.ts";
import type { Abilities } from "#main/node/abilities.ts";
import type { Library } from "#main/node/library.ts";

/** The engine, the intake and the demo valve over a library whose lease is ours. @param memoryBytes the engine's limit. */
export async function desktopAbilities(library: Library, memoryBytes: number): Promise<Abilities> {
  await removeUnfinished(library.layout.root);
  const engine = createEngine({
    library: async (id) => {
      const record = await library.specimen(id);
      if (record.volume.inPlace) await checkInPlace(record.volume.inPlace);
      return { folder: library.layout.specimen(id), record };
    },
    workerUrl: new URL("./engine-worker.mjs", import.meta.url),
    memoryBytes,
  });
  return {
    engine,
    look: ({ path, ...choice }) => runLook(path, { choice }),
    runProjections,
    runIntake,
    runDemo,
    runTurned,
    runDemoSpecimen,
    runDemoStudyLogs: ({ signal }) => runDemoStudyLogs({ signal }),
    runDemoPasses: (sha256) => runDemoPasses(sha256),
    runLabels: (file, path) => runLabels(file, path),
    forgetSpecimen: (specimen) => engine.forget(specimen),
  };
}
