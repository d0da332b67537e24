import { parentPort, workerData } from "node:worker_threads";
import type { WorkerMessage, WorkerResult, WorkerTask } from "#main/intake/intake-messages.ts";
import { demoPasses, makeDemo } from "#main/intake/make-demo.ts";
import { demoStudyLogs, makeDemoSpecimen } from "#main/intake/make-demo-study.ts";
import type { IntakeProgress } from "#main/intake/progress.ts";
import { projectScan } from "#main/intake/project-scan.ts";
import { lookAtScan } from "#main/intake/scan-info.ts";
import { takeIn } from "#main/intake/take-in.ts";
import { makeTurned } from "#main/intake/turned/make-turned.ts";
import { writeLabels } from "#main/intake/write-labels.ts";
import { encodeError } from "#shared/errors.ts";

// The thread that reads, converts, hashes and writes, so that neither a window's server nor the command line stands still.
const port = parentPort!;
const tell = (message: WorkerMessage) => port.postMessage(message);
const stop = new AbortController();
port.on("message", () => stop.abort());

async function perform(work: WorkerTask): Promise<WorkerResult> {
  const hooks = { signal: stop.signal, onProgress: (progress: IntakeProgress) => tell({ type: "progress", progress }) };
  switch (work.task) {
    case "intake":
      return takeIn(work.order, hooks);
    case "demo":
      return makeDemo(work.order, hooks);
    case "turn":
      return makeTurned(work.order, hooks);
    case "demo-specimen":
      return makeDemoSpecimen(work.order, hooks);
    case "demo-study-logs":
      return demoStudyLogs();
    case "demo-passes":
      return demoPasses(work.sha256);
    case "labels":
      return writeLabels(work.file, work.path, { signal: stop.signal });
    case "project":
      return projectScan(work.request, hooks);
    case "look":
      return lookAtScan(work.path, { signal: stop.signal, ...(work.choice ? { choice: work.choice } : {}) });
  }
}

try {
  const result = await perform(workerData as WorkerTask);
  tell({ type: "done", result });
} catch (error) {
  const body = encodeError(error);
  // The page gets no stack; the log of the process does.
  if (body.tag === "internal") console.error(error);
  tell({ type: "failed", error: body });
}
port.close();
