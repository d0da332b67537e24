import { run } from "#main/cli/run.ts";
import { isShareThread, serveShare, threadRunner } from "#main/cli/share-threads.ts";
import { VERBS } from "#main/cli/verbs.ts";

if (isShareThread()) await serveShare(VERBS);
else {
  // A reader that closes early (`| head`) has what it wanted.
  process.stdout.on("error", (error: NodeJS.ErrnoException) => process.exit(error.code === "EPIPE" ? 0 : 3));
  const interrupted = new AbortController();
  for (const signal of ["SIGINT", "SIGTERM"] as const) process.once(signal, () => interrupted.abort());
  process.exitCode = await run(process.argv.slice(2), VERBS, {
    stdout: (text) => void process.stdout.write(text),
    stderr: (text) => void process.stderr.write(text),
    signal: interrupted.signal,
    runInThread: threadRunner(new URL(import.meta.url), interrupted.signal),
  });
}
