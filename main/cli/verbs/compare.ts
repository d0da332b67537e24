import { COMPARE_HELP, COMPARE_OPTIONS, compareOptionsOf } from "#main/cli/compare-options.ts";
import { realOption, wordOption } from "#main/cli/number-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { refuseOtherFrame, scanWarnings } from "#main/cli/same-scan.ts";
import { itemsOf, runShared, SHARE_HELP, SHARE_OPTIONS, shareLines } from "#main/cli/shares.ts";
import type { SharedVerb } from "#main/cli/verb.ts";
import { comparePairs } from "#shared/compare/compare-pairs.ts";
import { assembleComparison, type ComparisonFrame, frameOfComparison } from "#shared/compare/compare-sets.ts";
import type { ComparedPair, Comparison } from "#shared/compare/comparison.ts";
import { matchSets } from "#shared/compare/matched-sets.ts";

interface PairItem {
  readonly pair: ComparedPair;
  readonly warnings: readonly string[];
}

/** `tautline compare`: how far the trees of B are from those of A. */
export const compare: SharedVerb = {
  name: "compare",
  summary: "two tree files: which tree is which, edit distance with proof, events, overlap, distances",
  help: `tautline compare A B [options] [--json]

Compares the trees of B with those of A, the reference. Trees are matched by where they lie; each pair gets its edit
distance with proven bounds, the script, and the differences as events.

  --costs geometry|structure   what an edit costs (geometry)
  --origin held|free           whether the two origins are mapped to each other (held)
${COMPARE_HELP}
  --seconds s                  wall time for the whole call; bounds are proven when it ends (30)
${SHARE_HELP}`,
  options: {
    costs: { type: "string" },
    origin: { type: "string" },
    seconds: { type: "string" },
    ...COMPARE_OPTIONS,
    ...SHARE_OPTIONS,
  },
  positionals: [2, 2],
  run: (call) => runShared(compare, call),

  async share({ positionals, options }, share) {
    const began = performance.now();
    const seconds = realOption(options, "seconds", 30);
    const preset = wordOption(options, "costs", ["geometry", "structure"]) ?? "geometry";
    const origin = wordOption(options, "origin", ["held", "free"]) ?? "held";
    const named = await Promise.all(positionals.map(async (name) => ({ name, file: await readTreeFile(name) })));
    const [reference, other] = [named[0]!, named[1]!];
    refuseOtherFrame(reference, other);
    const compareOptions = compareOptionsOf(options, reference.file, { preset, origin });
    const matched = matchSets(reference.file, other.file);
    const numbers = itemsOf(share, matched.pairs.length);
    const found = comparePairs(matched, numbers, compareOptions, () => seconds * 1000 - (performance.now() - began));
    const head = { files: positionals, options: compareOptions };
    const frame = () => ({ ...frameOfComparison(matched, compareOptions), scanWarnings: scanWarnings(reference, other) });
    const item = (k: number): PairItem => ({
      pair: found.pairs[numbers.indexOf(k)]!,
      warnings: found.warnings[numbers.indexOf(k)]!,
    });
    return shareLines("compare", share, head, matched.pairs.length, frame, item);
  },

  gather({ frame, items }) {
    const { scanWarnings: ofScan, ...rest } = frame as ComparisonFrame & { scanWarnings: string[] };
    const pairs = items as readonly PairItem[];
    const warnings = [...ofScan, ...pairs.flatMap((item) => item.warnings)];
    const answer = assembleComparison(
      rest,
      pairs.map((item) => item.pair),
      warnings,
    );
    return { json: answer, text: inWords(answer), exit: 0, notes: answer.warnings.map((warning) => `Warning: ${warning}`) };
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
