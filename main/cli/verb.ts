import type { ParseArgsConfig } from "node:util";

/** What a verb may touch besides files: output streams and the signal that Ctrl-C aborts. */
export interface CliIo {
  readonly stdout: (text: string) => void;
  readonly stderr: (text: string) => void;
  readonly signal: AbortSignal;
  /** Runs one share of a verb in a thread of its own; absent where there is no built program to start one from. */
  readonly runInThread?: (task: ShareTask, say: (line: string) => void) => Promise<readonly string[]>;
}

/** Share `index` (from 1) of `of`. */
export interface Share {
  readonly index: number;
  readonly of: number;
}

/** One share of a verb's work, as it is sent to a thread. */
export interface ShareTask {
  readonly verb: string;
  readonly positionals: readonly string[];
  readonly options: VerbCall["options"];
  readonly share: Share;
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
  /** Warnings for a person, on standard error. */
  readonly notes?: readonly string[];
  /** JSON Lines that take the place of everything else on standard output (one share of a larger work). */
  readonly lines?: readonly string[];
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

/** A verb whose work is a list of independent items, so that it can be spread over threads and machines. */
export interface SharedVerb extends Verb {
  /** The lines of one share: see `shares.ts`. */
  share(call: VerbCall, share: Share): Promise<readonly string[]>;
  /** The result from the lines of all shares, the same whatever the split. */
  gather(gathered: GatheredShares): VerbResult;
}

/** What all shares of one work say together. */
export interface GatheredShares {
  readonly verb: string;
  /** The same in every share: what was asked for. */
  readonly head: unknown;
  /** What only the first share says. */
  readonly frame: unknown;
  /** The items in order. */
  readonly items: readonly unknown[];
}
