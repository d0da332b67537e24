import type { Verb } from "#main/cli/verb.ts";

/** Every verb, in the order of the job. */
export const VERBS: readonly Verb[] = [];
