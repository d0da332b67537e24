import { isMainThread, parentPort, Worker, workerData } from "node:worker_threads";
import type { CliIo, SharedVerb, ShareTask, Verb } from "#main/cli/verb.ts";
import { decodeError, encodeError, TautlineError } from "#shared/errors.ts";

type ShareMessage = { readonly say: string } | { readonly lines: readonly string[] } | { readonly error: unknown };

/** Runs shares in threads started from this very program; the main thread stays free to hear an interrupt, which ends them at once. */
export function threadRunner(program: URL, signal: AbortSignal): NonNullable<CliIo["runInThread"]> {
  return (task, say) =>
    new Promise((resolve, reject) => {
      const worker = new Worker(program, { workerData: { shareTask: task } });
      const end = () => {
        void worker.terminate();
        reject(new TautlineError("cancelled", "Interrupted.", { what: task.verb }));
      };
      if (signal.aborted) return end();
      signal.addEventListener("abort", end, { once: true });
      worker.on("message", (message: ShareMessage) => {
        if ("say" in message) say(message.say);
        else if ("lines" in message) resolve(message.lines);
        else reject(decodeError(message.error));
      });
      worker.on("error", reject);
      worker.on("exit", () => {
        signal.removeEventListener("abort", end);
        reject(new TautlineError("internal", `A thread of '${task.verb}' ended without an answer.`, { what: "thread ended" }));
      });
    });
}

/** True when this program was started as a thread that works on a share. */
export function isShareThread(): boolean {
  return !isMainThread && (workerData as { shareTask?: unknown } | null)?.shareTask !== undefined;
}

/** Works on the share this thread was started for and posts its lines, or the error. */
export async function serveShare(verbs: readonly Verb[]): Promise<void> {
  const port = parentPort!;
  const post = (message: ShareMessage) => port.postMessage(message);
  const task = (workerData as { shareTask: ShareTask }).shareTask;
  const say = (line: string) => post({ say: line });
  const io: CliIo = { stdout: say, stderr: say, signal: new AbortController().signal };
  try {
    const verb = verbs.find((candidate) => candidate.name === task.verb) as SharedVerb;
    post({ lines: await verb.share({ positionals: task.positionals, options: task.options, io, say }, task.share) });
  } catch (error) {
    post({ error: encodeError(error) });
  }
}
