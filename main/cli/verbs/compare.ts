import { realOption, wordOption } from "#main/cli/number-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { refuseOtherFrame, scanWarnings } from "#main/cli/same-scan.ts";
import type { Verb } from "#main/cli/verb.ts";
import { compareSets } from "#shared/compare/compare-sets.ts";
import type { Comparison } from "#shared/compare/comparison.ts";

/** Sampling step where A names no volume, millimetres. */
const STEP_WITHOUT_VOLUME_MM = 0.02;

/** `tautline compare`: how far the trees of B are from those of A. */
export const compare: Verb = {
  name: "compare",
  summary: "two tree files: which tree is which, edit distance with proof, events, overlap, distances",
  help: `tautline compare A B [options] [--json]

Compares the trees of B with those of A, the reference. Trees are matched by where they lie; each pair gets its edit
distance with proven bounds, the script, and the differences as events.

  --costs geometry|structure   what an edit costs (geometry)
  --origin held|free           whether the two origins are mapped to each other (held)
  --position-scale mm          displacement that costs as much as an insertion; geometry only (2)
  --merge mm                   forks joined by shorter strands are one (0.3)
  --tolerance mm               within which lines and places agree (0.5)
  --minimum-diameter mm        stretches of A at least this thick count for OT (OT is not given without it)
  --seconds s                  wall time for the whole call; bounds are proven when it ends (30)`,
  options: {
    costs: { type: "string" },
    origin: { type: "string" },
    "position-scale": { type: "string" },
    merge: { type: "string" },
    tolerance: { type: "string" },
    "minimum-diameter": { type: "string" },
    seconds: { type: "string" },
  },
  positionals: [2, 2],
  async run({ positionals, options, io, say }) {
    const began = performance.now();
    const seconds = realOption(options, "seconds", 30);
    const preset = wordOption(options, "costs", ["geometry", "structure"]) ?? "geometry";
    const origin = wordOption(options, "origin", ["held", "free"]) ?? "held";
    const positionScale = realOption(options, "position-scale", 2);
    const merge = realOption(options, "merge", 0.3, 0, true);
    const tolerance = realOption(options, "tolerance", 0.5);
    const minimumDiameter = realOption(options, "minimum-diameter", null);
    const named = await Promise.all(positionals.map(async (name) => ({ name, file: await readTreeFile(name) })));
    const [reference, other] = [named[0]!, named[1]!];
    refuseOtherFrame(reference, other);
    const warnings = scanWarnings(reference, other);
    const timeLeft = () => (io.signal.aborted ? 0 : seconds * 1000 - (performance.now() - began));
    const spacing = reference.file.volume?.spacing;
    const step = spacing ? Math.min(...spacing) / 2 : STEP_WITHOUT_VOLUME_MM;
    const found = compareSets(
      reference.file,
      other.file,
      { preset, origin, positionScale, merge, tolerance, minimumDiameter, step },
      timeLeft,
    );
    const answer: Comparison = { ...found, warnings: [...warnings, ...found.warnings] };
    for (const warning of answer.warnings) say(`Warning: ${warning}`);
    return { json: answer, text: inWords(answer), exit: 0 };
  },
};

function inWords({ pairs, onlyA, onlyB, whole, costs }: Comparison): string {
  const number = (value: number | null, digits = 3) => (value === null ? "-" : value.toFixed(digits));
  const distance = (pair: { ged: number; lower: number; exact: boolean }) =>
    pair.exact ? number(pair.ged) : `${number(pair.lower)} to ${number(pair.ged)}`;
  const lines = [`Edit distance with ${costs.preset} costs, origin ${costs.origin}. A is the reference.`, ""];
  for (const pair of pairs) {
    lines.push(
      `${pair.a} - ${pair.b}: distance ${distance(pair)}, of A's cost ${number(pair.normalised.reference)}; mean distance ${number(pair.distances.mean)} mm`,
    );
    for (const event of pair.events) {
      const what = event.a && event.b ? `${event.a} - ${event.b}` : (event.a ?? event.b);
      lines.push(`    ${event.event} ${what} at ${event.at.map((x) => x.toFixed(1)).join(", ")} (${event.length.toFixed(2)} mm)`);
    }
  }
  if (onlyA.length > 0) lines.push(`only in A: ${onlyA.join(", ")}`);
  if (onlyB.length > 0) lines.push(`only in B: ${onlyB.join(", ")}`);
  const { count, length } = whole.detection;
  lines.push(
    "",
    `whole set: distance ${distance(whole)}, of A's cost ${number(whole.normalised.reference)}, of both ${number(whole.normalised.pair)}`,
    `strands: ${count.true} found, ${count.missed} missed, ${count.extra} extra; by length recall ${number(length.recall)}, precision ${number(length.precision)}`,
    `overlap OV ${number(whole.overlap.ov)}, OF ${number(whole.overlap.of)}, AI ${number(whole.overlap.ai)} mm; mean distance ${number(whole.distances.mean)} mm, 95th percentile ${number(whole.distances.hd95)} mm`,
  );
  return lines.join("\n");
}
