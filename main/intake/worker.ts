import { parentPort, workerData } from "node:worker_threads";
import type { WorkerMessage, WorkerTask } from "#main/intake/intake-messages.ts";
import { lookAtScan } from "#main/intake/scan-info.ts";
import { takeIn } from "#main/intake/take-in.ts";
import { encodeError } from "#shared/errors.ts";

// The thread that reads, converts, hashes and writes, so that neither a window's server nor the command line stands still.
const port = parentPort!;
const tell = (message: WorkerMessage) => port.postMessage(message);
const stop = new AbortController();
port.on("message", () => stop.abort());

try {
  const work = workerData as WorkerTask;
  const result =
    work.task === "intake"
      ? await takeIn(work.order, { signal: stop.signal, onProgress: (progress) => tell({ type: "progress", progress }) })
      : await lookAtScan(work.path, { signal: stop.signal, ...(work.choice ? { choice: work.choice } : {}) });
  tell({ type: "done", result });
} catch (error) {
  const body = encodeError(error);
  // The page gets no stack; the log of the process does.
  if (body.tag === "internal") console.error(error);
  tell({ type: "failed", error: body });
}
port.close();
