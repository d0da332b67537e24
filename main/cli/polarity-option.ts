import { wordOption } from "#main/cli/number-option.ts";
import type { OpenVoxels } from "#main/cli/open-voxels.ts";
import type { VerbCall } from "#main/cli/verb.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";

export const POLARITY_OPTION = { polarity: { type: "string" } } as const;
export const POLARITY_HELP = "  --polarity P        bright or dark strings (as the values suggest when not given)";

/** What `--polarity` says; undefined when it was not given. @throws misuse */
export function givenPolarity(options: VerbCall["options"]): Polarity | undefined {
  return wordOption(options, "polarity", ["bright", "dark"] as const);
}

/** The polarity given, else the one that the scan's values suggest, which is said. */
export function settledPolarity(given: Polarity | undefined, voxels: OpenVoxels, say: (line: string) => void): Polarity {
  if (given !== undefined) return given;
  say(`strings are taken to be ${voxels.suggestedPolarity}; --polarity says otherwise.`);
  return voxels.suggestedPolarity;
}
