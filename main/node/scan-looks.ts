import type { ScansPort } from "#main/http/ports.ts";
import type { Abilities } from "#main/node/abilities.ts";
import { hideFolders } from "#main/node/hide-folders.ts";
import type { Jobs } from "#main/node/jobs.ts";
import type { ProjectionsAnswer } from "#shared/api/projections.ts";
import { TautlineError } from "#shared/errors.ts";

/** Projections kept for the pages that asked for them. */
const KEPT = 4;

/** Looks at scans of this computer that are not taken in yet. */
export function scanLooks(abilities: Pick<Abilities, "look" | "runProjections">, jobs: Jobs): ScansPort {
  const made = new Map<string, ProjectionsAnswer>();
  return {
    look: (request) =>
      abilities.look(request).catch((error) => {
        throw hideFolders(error, request.path);
      }),
    async startProjections(request) {
      const { job } = jobs.start("look", async (onProgress, signal) => {
        const answer = await abilities.runProjections(request, { onProgress, signal }).catch((error) => {
          throw hideFolders(error, request.path);
        });
        made.set(job, answer);
        for (const old of [...made.keys()].slice(0, -KEPT)) made.delete(old);
        return undefined;
      });
      return { job };
    },
    async projections(job) {
      const answer = made.get(job);
      if (answer) return answer;
      throw new TautlineError("not-found", "These projections are not there any more. Ask for them again.", {
        what: "look",
        id: job,
      });
    },
  };
}
