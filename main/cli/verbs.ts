import type { Verb } from "#main/cli/verb.ts";
import { info } from "#main/cli/verbs/info.ts";
import { intake } from "#main/cli/verbs/intake.ts";

/** Every verb, in the order of the job. */
export const VERBS: readonly Verb[] = [info, intake];
