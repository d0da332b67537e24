import type { Verb } from "#main/cli/verb.ts";
import { agree } from "#main/cli/verbs/agree.ts";
import { check } from "#main/cli/verbs/check.ts";
import { compare } from "#main/cli/verbs/compare.ts";
import { convert } from "#main/cli/verbs/convert.ts";
import { follow } from "#main/cli/verbs/follow.ts";
import { gather } from "#main/cli/verbs/gather.ts";
import { info } from "#main/cli/verbs/info.ts";
import { intake } from "#main/cli/verbs/intake.ts";
import { measure } from "#main/cli/verbs/measure.ts";
import { overlooked } from "#main/cli/verbs/overlooked.ts";
import { phantom } from "#main/cli/verbs/phantom.ts";
import { score } from "#main/cli/verbs/score.ts";
import { trace } from "#main/cli/verbs/trace.ts";

/** Every verb, in the order of the job. */
export const VERBS: readonly Verb[] = [
  info,
  intake,
  trace,
  follow,
  overlooked,
  measure,
  check,
  compare,
  score,
  agree,
  gather,
  convert,
  phantom,
];
