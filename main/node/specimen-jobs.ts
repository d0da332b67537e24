import type { JobsPort } from "#main/http/ports.ts";
import type { Abilities, SpecimenOrder } from "#main/node/abilities.ts";
import { hideFolders } from "#main/node/hide-folders.ts";
import type { Jobs, JobWork, Progress } from "#main/node/jobs.ts";
import type { Library } from "#main/node/library.ts";
import { NEW_PASS } from "#main/node/pass-file.ts";
import type { FirstEdit } from "#main/node/pass-store.ts";
import { plantDemoStudy } from "#main/node/study/plant-demo-study.ts";
import type { StudyStore } from "#main/node/study/study-store.ts";
import { Turns } from "#main/node/turns.ts";
import type { ServerEvent } from "#shared/api/routes.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { documentFromFile } from "#shared/formats/chordae/document-from-file.ts";
import { DEMO_VALVE_NAME } from "#shared/phantom/demo-valve.ts";
import { emptyDocument } from "#shared/trees/document.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";
import { IdSource, NO_IDS_YET } from "#shared/trees/ids.ts";

/** Share of the demo study's job that the demo valve takes. */
const VALVE_SHARE = 0.6;
/** The demo valve has the passes of three invented annotators. */
const DEMO_ANNOTATORS = 3;

export interface SpecimenJobsOptions {
  readonly root: string;
  readonly library: Library;
  readonly abilities: Abilities;
  readonly jobs: Jobs;
  readonly studies: StudyStore;
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
  let demoStudy: string | null = null;

  /** A demo whose making was interrupted is completed, not made twice. */
  const makeValve: JobWork = async (onProgress, signal) => {
    const { specimens } = await library.shelf();
    const found = specimens.find(({ specimen }) => specimen.synthetic && specimen.name === DEMO_VALVE_NAME);
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

  /** Asked for alone and with the study at once, the valve is made once. */
  const valveTurns = new Turns();
  const makeDemo: JobWork = (onProgress, signal) => valveTurns.take(() => makeValve(onProgress, signal));

  /** The job of this id when it still runs. */
  const running = (id: string | null) => jobs.states().find((state) => state.id === id && state.state === "running")?.id;

  async function openDemo(): Promise<{ job: string }> {
    demo = running(demo) ?? jobs.start("demo", makeDemo).job;
    return { job: demo };
  }

  /** The study's own valve is the demo valve, with its passes, as if it had been opened before. */
  const makeDemoStudy: JobWork = async (onProgress, signal) => {
    const part = (from: number, to: number) => (progress: Progress) =>
      onProgress({ ...progress, progress: from + (to - from) * progress.progress, secondsLeft: null });
    const valve = await makeDemo(part(0, VALVE_SHARE), signal);
    const plant = { ...options, store: options.studies };
    const study = await plantDemoStudy(plant, valve!.specimen!, { signal, onProgress: part(VALVE_SHARE, 1) });
    emit({ event: "shelf" });
    emit({ event: "studies" });
    return { study };
  };

  async function openDemoStudy(): Promise<{ job: string }> {
    demoStudy = running(demoStudy) ?? jobs.start("demo-study", makeDemoStudy).job;
    return { job: demoStudy };
  }

  return {
    async startIntake(request) {
      return jobs.start("intake", async (onProgress, signal) => {
        try {
          const { record } = await abilities.runIntake({ ...request, ...order() }, { onProgress, signal });
          // An earlier specimen may have been given the scan's new place: what was opened at the old one is let go.
          await abilities.forgetSpecimen?.(record.id);
          emit({ event: "shelf" });
          return { specimen: record.id };
        } catch (error) {
          throw hideFolders(hideFolders(error, request.path), root);
        }
      });
    },
    openDemo,
    openDemoStudy,
    cancel: async (job) => jobs.cancel(job),
    jobs: () => jobs.states(),
  };
}

/** A file's trees as the first edit of a pass. */
function editOfFile(file: ChordaeFile): FirstEdit {
  const { operation, curves } = takeInTrees(emptyDocument(), new IdSource(NO_IDS_YET), { incoming: documentFromFile(file) });
  return { operation, curves, label: "Synthetic trees taken in" };
}
