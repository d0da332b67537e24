import { existsSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { Worker } from "node:worker_threads";
import type {
  DemoOrder,
  DemoOutcome,
  DemoSpecimenOrder,
  DemoStudyLog,
  IntakeOrder,
  IntakeOutcome,
  TurnedOrder,
  WorkerMessage,
  WorkerRequest,
  WorkerResult,
  WorkerTask,
} from "#main/intake/intake-messages.ts";
import type { IntakeProgress } from "#main/intake/progress.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import type { ProjectionsAnswer, ProjectionsRequest } from "#shared/api/projections.ts";
import type { ScanLookAnswer } from "#shared/api/routes.ts";
import { decodeError, TautlineError } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

export interface RunHooks {
  readonly signal?: AbortSignal;
  onProgress?(progress: IntakeProgress): void;
}

/** Takes a scan in, in a thread of its own. On failure or cancel nothing is left in the library. @throws as `makeSpecimen` */
export async function runIntake(order: IntakeOrder, hooks: RunHooks = {}): Promise<IntakeOutcome> {
  return (await runWorker({ task: "intake", order }, hooks)) as IntakeOutcome;
}

/** Makes the demo valve's specimen, in a thread of its own. @throws as `makeSpecimen` */
export async function runDemo(order: DemoOrder, hooks: RunHooks = {}): Promise<DemoOutcome> {
  return (await runWorker({ task: "demo", order }, hooks)) as DemoOutcome;
}

/** Makes a specimen's turned copy, in a thread of its own. @throws as `makeTurned` */
export async function runTurned(order: TurnedOrder, hooks: RunHooks = {}): Promise<IntakeOutcome> {
  return (await runWorker({ task: "turn", order }, hooks)) as IntakeOutcome;
}

/** The demo valve's invented passes alone, in a thread of its own. */
export async function runDemoPasses(sha256: string, hooks: RunHooks = {}): Promise<DemoOutcome["passes"]> {
  return (await runWorker({ task: "demo-passes", sha256 }, hooks)) as DemoOutcome["passes"];
}

/** Makes one of the demo study's small specimens, in a thread of its own. @throws as `makeDemoSpecimen` */
export async function runDemoSpecimen(order: DemoSpecimenOrder, hooks: RunHooks = {}): Promise<IntakeOutcome> {
  return (await runWorker({ task: "demo-specimen", order }, hooks)) as IntakeOutcome;
}

/** The logs of the demo study's passes, drawn in a thread of its own. */
export async function runDemoStudyLogs(hooks: RunHooks = {}): Promise<readonly DemoStudyLog[]> {
  return (await runWorker({ task: "demo-study-logs" }, hooks)) as readonly DemoStudyLog[];
}

/** Writes trees as a label volume to a new file, in a thread of its own. @throws as `writeLabels` */
export async function runLabels(file: ChordaeFile, path: string, hooks: RunHooks = {}): Promise<void> {
  await runWorker({ task: "labels", file, path }, hooks);
}

/** Looks at a scan in a thread of its own. @throws unreadable-input, cancelled */
export async function runLook(path: string, hooks: RunHooks & { choice?: ScanChoice } = {}): Promise<ScanLookAnswer> {
  return (await runWorker({ task: "look", path, ...(hooks.choice ? { choice: hooks.choice } : {}) }, hooks)) as ScanLookAnswer;
}

/** Projections of a scan, made in a thread of its own. @throws as `projectScan` */
export async function runProjections(request: ProjectionsRequest, hooks: RunHooks = {}): Promise<ProjectionsAnswer> {
  return (await runWorker({ task: "project", request }, hooks)) as ProjectionsAnswer;
}

/** The built worker stands beside the bundle that asks for it; from sources it is the one in `dist`. */
function workerFile(): URL {
  const fromSource = import.meta.url.endsWith(".ts");
  const url = new URL(fromSource ? "../../dist/main/intake-worker.mjs" : "./intake-worker.mjs", import.meta.url);
  if (!existsSync(fileURLToPath(url)))
    throw new TautlineError("internal", "The intake worker is not built; run 'npm run build'.", {
      what: "intake-worker.mjs missing",
    });
  return url;
}

function runWorker(task: WorkerTask, hooks: RunHooks): Promise<WorkerResult> {
  return new Promise((resolve, reject) => {
    if (hooks.signal?.aborted) {
      reject(new TautlineError("cancelled", "Stopped.", { what: task.task }));
      return;
    }
    const worker = new Worker(workerFile(), { workerData: task });
    const stop = () => worker.postMessage({ stop: true } satisfies WorkerRequest);
    const settle = (act: () => void) => {
      hooks.signal?.removeEventListener("abort", stop);
      act();
    };
    hooks.signal?.addEventListener("abort", stop, { once: true });
    worker.on("message", (message: WorkerMessage) => {
      if (message.type === "progress") hooks.onProgress?.(message.progress);
      else if (message.type === "done") settle(() => resolve(message.result));
      else settle(() => reject(decodeError(message.error)));
    });
    worker.on("error", (error) => settle(() => reject(error)));
    worker.on("exit", (code) =>
      settle(() => reject(new TautlineError("internal", "The intake stopped unexpectedly.", { what: `worker exit ${code}` }))),
    );
  });
}
