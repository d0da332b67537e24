import type { JobsPort } from "#main/http/ports.ts";
import type { Abilities, SpecimenOrder } from "#main/node/abilities.ts";
import { hideFolders } from "#main/node/hide-folders.ts";
import type { Jobs, JobWork } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { NEW_PASS } from "#main/node/pass-file.ts";
import type { FirstEdit } from "#main/node/pass-store.ts";
import type { ServerEvent } from "#shared/api/routes.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { emptyDocument } from "#shared/trees/document.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";
import { IdSource, NO_IDS_YET } from "#shared/trees/ids.ts";

/** The demo valve has the passes of three invented annotators. */
const DEMO_ANNOTATORS = 3;

export interface SpecimenJobsOptions {
  readonly root: string;
  readonly library: Library;
  readonly abilities: Abilities;
  readonly jobs: Jobs;
  readonly newId: () => string;
  /** UTC milliseconds. */
  readonly now: () => number;
  readonly emit: (event: ServerEvent) => void;
}

/** The jobs that make specimens: intake and the demo valve. */
export function specimenJobs(options: SpecimenJobsOptions): JobsPort {
  const { root, library, abilities, jobs, emit } = options;
  const order = (): SpecimenOrder => ({ library: root, id: options.newId(), created: options.now() });
  let demo: string | null = null;

  /** A demo whose making was interrupted is completed, not made twice. */
  const makeDemo: JobWork = async (onProgress, signal) => {
    const { specimens } = await library.shelf();
    const found = specimens.find(({ specimen }) => specimen.synthetic);
    const there = new Set(found?.passes.filter(({ synthetic }) => synthetic).map(({ annotator }) => annotator));
    if (found && there.size >= DEMO_ANNOTATORS) return { specimen: found.specimen.id };
    const made = found
      ? { record: found.specimen, passes: await abilities.runDemoPasses(found.specimen.volume.sha256) }
      : await abilities.runDemo(order(), { onProgress, signal });
    for (const { annotator, file } of made.passes) {
      if (there.has(annotator)) continue;
      const about = { ...NEW_PASS, synthetic: true, state: "finished" } as const;
      await library.passes.createFilled(made.record.id, annotator, about, editOfFile(file));
    }
    emit({ event: "shelf" });
    return { specimen: made.record.id };
  };

  async function openDemo(): Promise<{ job: string }> {
    const running = jobs.states().find(({ id, state }) => id === demo && state === "running");
    demo = running?.id ?? jobs.start("demo", makeDemo).job;
    return { job: demo };
  }

  return {
    async startIntake(request) {
      return jobs.start("intake", async (onProgress, signal) => {
        try {
          const { record } = await abilities.runIntake({ ...request, ...order() }, { onProgress, signal });
          emit({ event: "shelf" });
          return { specimen: record.id };
        } catch (error) {
          throw hideFolders(hideFolders(error, request.path), root);
        }
      });
    },
    openDemo,
    cancel: async (job) => jobs.cancel(job),
    jobs: () => jobs.states(),
  };
}

/** A file's trees as the first edit of a pass. */
function editOfFile(file: ChordaeFile): FirstEdit {
  const { operation, curves } = takeInTrees(emptyDocument(), new IdSource(NO_IDS_YET), { incoming: documentFromFile(file) });
  return { operation, curves, label: "Synthetic trees taken in" };
}
