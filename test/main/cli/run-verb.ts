import { run } from "#main/cli/run.ts";
import { VERBS } from "#main/cli/verbs.ts";

export interface VerbOutcome {
  readonly code: number;
  readonly stdout: string;
  readonly stderr: string;
}

/** Runs one command line in this process and gives what a shell would see. */
export async function runVerb(args: readonly string[], signal: AbortSignal = new AbortController().signal): Promise<VerbOutcome> {
  let [stdout, stderr] = ["", ""];
  const code = await run(args, VERBS, {
    stdout: (text) => {
      stdout += text;
    },
    stderr: (text) => {
      stderr += text;
    },
    signal,
  });
  return { code, stdout, stderr };
}
