import { removeUnfinished } from "#main/intake/make-specimen.ts";
import { runIntake, runLook } from "#main/intake/run-intake.ts";
import type { Abilities } from "#main/node/abilities.ts";
import type { Engine } from "#shared/api/engine.ts";
import { TautlineError } from "#shared/errors.ts";

/** The engine, the intake and the demo valve over the library in `root`; its lease is ours. */
export async function desktopAbilities(root: string): Promise<Abilities> {
  await removeUnfinished(root);
  const missing = async (): Promise<never> => {
    throw new TautlineError("internal", "This part of the program is not there yet.", { what: "missing" });
  };
  const engine = new Proxy({}, { get: (_, name) => (name === "close" ? async () => {} : missing) }) as Engine;
  return { engine, look: (path) => runLook(path), runIntake, runDemo: missing, demoPasses: missing };
}
