import { setImmediate as nextTurn } from "node:timers/promises";
import { realOption } from "#main/cli/number-option.ts";
import { openVoxels } from "#main/cli/open-voxels.ts";
import { givenPolarity, POLARITY_HELP, POLARITY_OPTION, settledPolarity } from "#main/cli/polarity-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { givenSpacing, SPACING_HELP, SPACING_OPTIONS } from "#main/cli/spacing-option.ts";
import { refuseOtherScan, tellOtherFrame } from "#main/cli/trees-on-scan.ts";
import type { Verb, VerbCall } from "#main/cli/verb.ts";
import { TautlineError } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { type ExplainingLine, findStretches } from "#shared/tracing/overlooked/find-stretches.ts";
import { blockCounts, type FoundPoints, searchBlock, searchLevel } from "#shared/tracing/overlooked/search-block.ts";
import { createTraceContext, type TraceContext } from "#shared/tracing/trace-context.ts";

/** The shortest string, unless it is said otherwise. */
const MINIMUM_MM = 1;

/** `tautline overlooked`: strings of a scan that no strand explains. */
export const overlooked: Verb = {
  name: "overlooked",
  summary: "list stretches of string in a scan that no strand explains, longest first",
  help: `tautline overlooked <volume or specimen folder> --trees T [options] [--json]

Searches the scan for strings, leaves out what lies in a tube about the strands and cross-links of T, and lists the rest, longest
first. Sheets (leaflets) and muscle are no strings. The result depends on scan, trees and options alone.

  --trees T           tree file; strands without points explain the straight lines between their pins
  --minimum L         leave out stretches shorter than this, mm (${MINIMUM_MM} when not given)
${POLARITY_HELP}
${SPACING_HELP}
  --other-scan        search even though T belongs to another scan`,
  options: {
    trees: { type: "string" },
    minimum: { type: "string" },
    ...POLARITY_OPTION,
    ...SPACING_OPTIONS,
    "other-scan": { type: "boolean" },
  },
  positionals: [1, 1],
  async run(call) {
    const { positionals, options, say } = call;
    const path = treesOption(options);
    const polarityGiven = givenPolarity(options);
    const minimumMm = realOption(options, "minimum", MINIMUM_MM);
    const given = givenSpacing(options);
    const trees = await readTreeFile(path);
    const voxels = await openVoxels(positionals[0]!, given, call);
    try {
      refuseOtherScan(trees, path, voxels, options["other-scan"] === true, "used", say);
      tellOtherFrame(trees, path, voxels, say);
      const polarity = settledPolarity(polarityGiven, voxels, say);
      const context = createTraceContext(voxels.pyramid, polarity);
      const found = await searched(context, call);
      const stretches = findStretches(context, found, linesOf(trees), { minimumMm });
      const lines = stretches.map(
        ({ lengthMm, from, to }) => `${lengthMm.toFixed(3)} mm  from ${from.join(", ")}  to ${to.join(", ")}`,
      );
      lines.push(
        `${stretches.length} stretch${stretches.length === 1 ? "" : "es"} of ${minimumMm} mm or more that no strand explains`,
      );
      const json = stretches.map(({ lengthMm, from, to, radiusMm, points }) => ({
        length: lengthMm,
        from,
        to,
        radius: radiusMm,
        points: Array.from({ length: points.length / 3 }, (_, i) => points.slice(3 * i, 3 * i + 3)),
      }));
      return { json: { stretches: json }, text: lines.join("\n"), exit: 0 };
    } finally {
      await voxels.close();
    }
  },
};

function treesOption(options: VerbCall["options"]): string {
  const value = options.trees;
  if (typeof value === "string" && value !== "") return value;
  const what = "overlooked needs --trees with the name of a tree file.";
  throw new TautlineError("misuse", what, { what });
}

/** Searches all blocks, with progress and a look for an interruption between them. */
async function searched(context: TraceContext, { io, say }: VerbCall): Promise<FoundPoints[]> {
  const total = blockCounts(context.pyramid.levels[searchLevel(context.pyramid)]!).reduce((product, count) => product * count, 1);
  const found: FoundPoints[] = [];
  let told = 0;
  for (let block = 0; block < total; block++) {
    await nextTurn();
    found.push(searchBlock(context, block, io.signal));
    const tenth = Math.floor((10 * (block + 1)) / total);
    if (tenth > told && total >= 64) say(`searched ${10 * tenth} %`);
    told = tenth;
  }
  return found;
}

/** What explains a string: the points of every strand and cross-link, or the straight lines between its pins. */
function linesOf(file: ChordaeFile): ExplainingLine[] {
  const places = new Map(file.trees.flatMap(({ nodes }) => nodes.map(({ id, position }) => [id, position] as const)));
  return [...file.trees.flatMap(({ strands }) => strands), ...(file.crossLinks ?? [])].map(({ points, radii, from, via, to }) => {
    if (points) return { points: points.flat(), radii: radii ?? points.map(() => null) };
    const pins = [places.get(from)!, ...(via ?? []), places.get(to)!];
    return { points: pins.flat(), radii: pins.map(() => null) };
  });
}
