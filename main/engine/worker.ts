// A worker thread of the engine: one task at a time; between tasks the guide's fronts grow in slices.
import { parentPort, workerData } from "node:worker_threads";
import { BrickCache } from "#main/engine/brick-cache.ts";
import { TaskRunner } from "#main/engine/run-task.ts";
import type { FromWorker, ToWorker, WorkerStart } from "#main/engine/tasks.ts";
import { encodeError, isTautlineError } from "#shared/errors.ts";

const start = workerData as WorkerStart;
const port = parentPort!;
const stop = new Int32Array(start.stop);
// Clears what a dead thread of this number left in the cache, before anything else.
const runner = new TaskRunner(new BrickCache(start.memory, start.worker), start.ridgeBytes, start.frontBytes);
let growing = false;

function post(message: FromWorker, transfer: ArrayBuffer[] = []): void {
  port.postMessage(message, transfer);
}

function run(message: Extract<ToWorker, { type: "run" }>): void {
  const { id, kind, store, input } = message;
  const signal = {
    get aborted() {
      return Atomics.load(stop, start.worker) === id;
    },
  };
  try {
    const answer = runner.run(kind, store, input, signal);
    const body = (answer as { body?: Uint8Array } | null)?.body;
    post({ type: "done", id, answer }, body ? [body.buffer as ArrayBuffer] : []);
  } catch (error) {
    // A fault of the program: its trace stays on this side, the asker gets a sentence.
    if (!isTautlineError(error)) console.error(error);
    post({ type: "failed", id, error: encodeError(error) });
  }
}

/** One slice of growth, then whatever message came in meanwhile, then the next slice. */
function grow(): void {
  growing = false;
  try {
    runner.guides.grow();
  } catch (error) {
    if (!isTautlineError(error)) console.error(error);
  }
  growSoon();
}

function growSoon(): void {
  if (growing || !runner.guides.growing) return;
  growing = true;
  setImmediate(grow);
}

port.on("message", (message: ToWorker) => {
  if (message.type === "run") run(message);
  else runner.guides.close(message.session);
  growSoon();
});
post({ type: "ready" });
