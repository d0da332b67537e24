import { createEngine } from "#main/engine/engine.ts";
import { removeUnfinished } from "#main/intake/make-specimen.ts";
import { runIntake, runLook } from "#main/intake/run-intake.ts";
import type { Abilities } from "#main/node/abilities.ts";
import type { Library } from "#main/node/library.ts";
import { TautlineError } from "#shared/errors.ts";

/** The engine, the intake and the demo valve over a library whose lease is ours. */
export async function serverAbilities(library: Library): Promise<Abilities> {
  await removeUnfinished(library.layout.root);
  const engine = createEngine({
    library: async (id) => ({ folder: library.layout.specimen(id), record: await library.specimen(id) }),
    workerUrl: new URL("./engine-worker.mjs", import.meta.url),
  });
  const missing = async (): Promise<never> => {
    throw new TautlineError("internal", "This part of the program is not there yet.", { what: "missing" });
  };
  return {
    engine,
    look: (path) => runLook(path),
    runIntake,
    runDemo: missing,
    demoPasses: missing,
    forgetSpecimen: (specimen) => engine.forget(specimen),
  };
}
