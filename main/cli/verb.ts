import type { ParseArgsConfig } from "node:util";

/** What a verb may touch besides files: output streams and the signal that Ctrl-C aborts. */
export interface CliIo {
  readonly stdout: (text: string) => void;
  readonly stderr: (text: string) => void;
  readonly signal: AbortSignal;
}

export interface VerbCall {
  readonly positionals: readonly string[];
  /** Values of the declared options; repeated options are arrays. */
  readonly options: Readonly<Record<string, string | boolean | (string | boolean)[] | undefined>>;
  readonly io: CliIo;
  /** Progress or a warning for a person, on stderr. */
  readonly say: (line: string) => void;
}

/** `json` is printed under --json and nothing else; `text` is printed otherwise. `exit` 1: done, but a check or gate failed. */
export interface VerbResult {
  readonly json: unknown;
  readonly text: string;
  readonly exit: 0 | 1;
}

/** One command-line verb: one file under `verbs/`, listed in `verbs.ts`. Failures are thrown as tagged errors. */
export interface Verb {
  readonly name: string;
  /** Half a line for the list of verbs. */
  readonly summary: string;
  /** The usage line and what each option means. */
  readonly help: string;
  readonly options: NonNullable<ParseArgsConfig["options"]>;
  /** Least and most positionals. */
  readonly positionals: readonly [number, number];
  run(call: VerbCall): Promise<VerbResult>;
}
