// A worker thread of the engine: one task at a time. Between tasks the guide's fronts grow, and planes and ridges are made ahead.
import { parentPort, workerData } from "node:worker_threads";
import { BrickCache } from "#main/engine/brick-cache.ts";
import { Calls } from "#main/engine/calls.ts";
import { RidgeStore } from "#main/engine/ridge-store.ts";
import { TaskRunner } from "#main/engine/run-task.ts";
import type { FromWorker, ToWorker, WorkerStart } from "#main/engine/tasks.ts";
import { encodeError, isTautlineError } from "#shared/errors.ts";

const start = workerData as WorkerStart;
const port = parentPort!;
const calls = new Calls(start.calls);
// Clears what a dead thread of this number left in the cache, before anything else.
const ridges = start.ridges && new RidgeStore(start.ridges, start.worker);
const runner = new TaskRunner(new BrickCache(start.memory, start.worker), ridges, start.ridgeBytes, start.frontBytes);
/** Pause between two slices of work that nobody waits for: half a core stays free for sections and for the page itself. */
const PAUSE_MS = 6;
let idling = false;
let received = 0;

function post(message: FromWorker, transfer: ArrayBuffer[] = []): void {
  port.postMessage(message, transfer);
}

function run(message: Extract<ToWorker, { type: "run" }>): void {
  const { id, kind, store, input } = message;
  received++;
  try {
    const answer = runner.run(kind, store, input, calls.signalOf(start.worker, id));
    const body = (answer as { body?: Uint8Array } | null)?.body;
    post({ type: "done", id, answer }, body ? [body.buffer as ArrayBuffer] : []);
  } catch (error) {
    // A fault of the program: its trace stays on this side, the asker gets a sentence.
    if (!isTautlineError(error)) console.error(error);
    post({ type: "failed", id, error: encodeError(error) });
  }
}

/** One slice of work ahead, then whatever message came in meanwhile, then the next slice. */
function idle(): void {
  idling = false;
  const signal = calls.signalBeyond(start.worker, received);
  try {
    if (runner.guides.growing) runner.guides.grow(signal);
    else if (runner.planes.busy) runner.planes.fetch(signal);
    else runner.ridges.makeNext(signal);
  } catch (error) {
    // Nobody asked for this work: the request that needs it meets the same error and reports it.
    if (!isTautlineError(error)) console.error(error);
  }
  idleSoon();
}

function idleSoon(): void {
  if (idling || !(runner.guides.growing || runner.planes.busy || runner.ridges.busy)) return;
  idling = true;
  if (runner.planes.busy || (runner.guides.growing && runner.guides.awaited)) setImmediate(idle);
  else setTimeout(idle, PAUSE_MS);
}

port.on("message", (message: ToWorker) => {
  if (message.type === "run") run(message);
  else if (message.type === "close-guide") runner.guides.close(message.session);
  else if (message.type === "close-follow") runner.follows.close(message.session);
  else runner.searches.rest();
  idleSoon();
});
post({ type: "ready" });
