import { runServer } from "#main/cli/run-server.ts";

const stopped = new AbortController();
// A second signal ends the process at once, should stopping hang.
for (const signal of ["SIGINT", "SIGTERM", "SIGHUP"] as const) process.once(signal, () => stopped.abort());

process.exitCode = await runServer(process.argv.slice(2), {
  env: process.env,
  signal: stopped.signal,
  say: (line) => void process.stdout.write(`${line}\n`),
  complain: (line) => void process.stderr.write(`${line}\n`),
});
// Worker threads or a browser's pipe must not keep a server alive that has closed everything.
setTimeout(() => process.exit(), 3_000).unref();
