import { readFile } from "node:fs/promises";
import { gatherShares } from "#main/cli/shares.ts";
import type { SharedVerb, Verb } from "#main/cli/verb.ts";
import { agree } from "#main/cli/verbs/agree.ts";
import { compare } from "#main/cli/verbs/compare.ts";
import { score } from "#main/cli/verbs/score.ts";
import { unreadable } from "#shared/errors.ts";

const SHARED_VERBS: readonly SharedVerb[] = [compare, score, agree];

/** `tautline gather`: joins the shares of a work that was spread over machines. */
export const gather: Verb = {
  name: "gather",
  summary: "join the shares that a verb made with --shard",
  help: `tautline gather FILES... [--json]

Joins the JSON Lines that 'compare', 'score' or 'agree' printed with --shard 1/n to n/n, in any order, into what the verb
would have said in one piece, with the same exit code. Every share must be there once.`,
  options: {},
  positionals: [1, 100_000],
  async run({ positionals }) {
    const lines: { text: string; where: string }[] = [];
    for (const path of positionals) {
      const text = await readFile(path, "utf8").catch(() => {
        throw unreadable(path, "the output of a verb run with --shard", "nothing that can be read", undefined, "Check the name.");
      });
      for (const [k, line] of text.split("\n").entries()) lines.push({ text: line, where: `${path}, line ${k + 1}` });
    }
    const gathered = gatherShares(lines, positionals.length === 1 ? positionals[0]! : `${positionals.length} files`);
    const verb = SHARED_VERBS.find((candidate) => candidate.name === gathered.verb);
    if (!verb)
      throw unreadable(
        positionals[0]!,
        `shares of ${SHARED_VERBS.map((one) => one.name).join(" or ")}`,
        `shares of '${gathered.verb}'`,
      );
    return verb.gather(gathered);
  },
};
