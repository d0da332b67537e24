import { realOption } from "#main/cli/number-option.ts";
import type { VerbCall } from "#main/cli/verb.ts";
import type { CompareOptions } from "#shared/compare/comparison.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

/** Sampling step where the reference names no volume, millimetres. */
const STEP_WITHOUT_VOLUME_MM = 0.02;

/** Options that every verb which compares trees takes. */
export const COMPARE_OPTIONS = {
  "position-scale": { type: "string" },
  merge: { type: "string" },
  tolerance: { type: "string" },
  "minimum-diameter": { type: "string" },
} as const;

/** Their lines in a verb's help. */
export const COMPARE_HELP = `  --position-scale mm          displacement that costs as much as an insertion; geometry costs only (2)
  --merge mm                   forks joined by shorter strands are one (0.3)
  --tolerance mm               within which lines and places agree (0.5)
  --minimum-diameter mm        stretches of the reference at least this thick count for OT (OT is not given without it)`;

/** The options of a comparison as a command line gives them; the sampling step is half the reference's smallest voxel spacing. @throws misuse */
export function compareOptionsOf(
  options: VerbCall["options"],
  reference: ChordaeFile,
  more: Pick<CompareOptions, "preset" | "origin">,
): CompareOptions {
  const spacing = reference.volume?.spacing;
  return {
    ...more,
    positionScale: realOption(options, "position-scale", 2),
    merge: realOption(options, "merge", 0.3, 0, true),
    tolerance: realOption(options, "tolerance", 0.5),
    minimumDiameter: realOption(options, "minimum-diameter", null),
    step: spacing ? Math.min(...spacing) / 2 : STEP_WITHOUT_VOLUME_MM,
  };
}
