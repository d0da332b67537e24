import type { VerbCall } from "#main/cli/verb.ts";
import { TautlineError } from "#shared/errors.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { mmPerUnit, toMm } from "#shared/volume/length-unit.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";
import { judgeSpacing } from "#shared/volume/spacing-policy.ts";

/** Declaration of `--spacing` and `--unit` for verbs that read a scan. */
export const SPACING_OPTIONS = { spacing: { type: "string" }, unit: { type: "string" } } as const;

/** Lines of help for {@link SPACING_OPTIONS}. */
export const SPACING_HELP = `  --spacing sx,sy,sz  distances between voxel centres, in place of the header's; one number serves all three
  --unit U            unit of --spacing: nm, um, mm, cm or m (mm when not given)`;

/** The voxel size given on the command line, millimetres; null when none is. @throws misuse */
export function givenSpacing(options: VerbCall["options"]): Vec3 | null {
  const { spacing, unit } = options;
  if (spacing === undefined) {
    if (unit !== undefined) throw wrong("--unit is the unit of --spacing and needs it.");
    return null;
  }
  const factor = mmPerUnit(typeof unit === "string" ? unit : "mm");
  if (factor === null) throw wrong(`--unit must be nm, um, mm, cm or m, found '${String(unit)}'.`);
  const words = String(spacing).split(",");
  const numbers = words.map((word) => (word.trim() === "" ? Number.NaN : Number(word)));
  if ((numbers.length !== 3 && numbers.length !== 1) || !numbers.every((n) => Number.isFinite(n) && n > 0))
    throw wrong(`--spacing must be three positive numbers such as 0.04,0.04,0.04, found '${String(spacing)}'.`);
  const mm = numbers.map((n) => toMm(n, factor));
  return mm.length === 1 ? [mm[0]!, mm[0]!, mm[0]!] : [mm[0]!, mm[1]!, mm[2]!];
}

/**
 * The voxel size to work with: the given one, else the header's. An unsettled header is an error; a doubtful one is an error where
 * `strict` (it would be kept for good), else a warning through `say`.
 * @throws spacing-unsettled
 */
export function settledSpacing(
  header: ScanHeader,
  file: string,
  given: Vec3 | null,
  how: { strict: boolean; say: (line: string) => void },
): Vec3 {
  if (given) return given;
  const { spacing, doubtful, warnings } = judgeSpacing(header);
  const doubts = warnings.filter((warning) => warning.code !== "no-frame").map((warning) => warning.message);
  if (spacing && !(how.strict && doubtful)) {
    for (const doubt of doubts) how.say(`${file}: ${doubt}`);
    return spacing;
  }
  const found = doubts.join(" ");
  const message = `${file}: the voxel size must be settled by a person. ${found} Give it with --spacing sx,sy,sz --unit um (or mm).`;
  throw new TautlineError("spacing-unsettled", message, { file, found });
}

function wrong(what: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", what, { what });
}
