import { basename } from "node:path";
import { type OpenVoxels, openVoxels } from "#main/cli/open-voxels.ts";
import { givenPolarity, POLARITY_HELP, POLARITY_OPTION, settledPolarity } from "#main/cli/polarity-option.ts";
import { readTreeFile } from "#main/cli/read-tree-file.ts";
import { givenSpacing, SPACING_HELP, SPACING_OPTIONS } from "#main/cli/spacing-option.ts";
import { traceFile } from "#main/cli/trace-file.ts";
import { refuseOtherScan, refuseUnwritable, tellOtherFrame } from "#main/cli/trees-on-scan.ts";
import type { Verb, VerbCall } from "#main/cli/verb.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { isInside } from "#shared/volume/grid.ts";

/** `tautline trace`: turns pins and a scan into traced strands. */
export const trace: Verb = {
  name: "trace",
  summary: "follow the strings of a scan between the pins of a tree file",
  help: `tautline trace <volume or specimen folder> --pins P --out T [options] [--json]

Fills in the centrelines, radii and image fit of strands and cross-links that have none, from the pins of P and the scan, and
radii where only these are missing. Nothing else of P is changed. The result depends on pins, scan and parameters alone.
Exit 1 when a strand could not be followed and was written straight.

  --pins P            tree file whose strands need not have points
  --out T             tree file to write; written whole or not at all
${POLARITY_HELP}
${SPACING_HELP}
  --other-scan        trace even though P belongs to another scan`,
  options: {
    pins: { type: "string" },
    out: { type: "string" },
    ...POLARITY_OPTION,
    ...SPACING_OPTIONS,
    "other-scan": { type: "boolean" },
  },
  positionals: [1, 1],
  async run(call) {
    const { positionals, options, say } = call;
    const began = performance.now();
    const pinsPath = pathOption(options, "pins");
    const outPath = pathOption(options, "out");
    const polarityGiven = givenPolarity(options);
    const given = givenSpacing(options);
    await refuseUnwritable(outPath);
    const pins = await readTreeFile(pinsPath);
    const voxels = await openVoxels(positionals[0]!, given, call);
    try {
      refuseOtherScan(pins, pinsPath, voxels, options["other-scan"] === true, "traced", say);
      refuseOutside(pins, pinsPath, voxels);
      tellOtherFrame(pins, pinsPath, voxels, say);
      const polarity = settledPolarity(polarityGiven, voxels, say);
      const blurFwhmMm = voxels.blurFwhmMm !== undefined ? voxels.blurFwhmMm : (pins.volume?.blurFwhm ?? null);
      say(
        blurFwhmMm === null
          ? "blur of the scan unknown: radii stay as measured."
          : `radii corrected for a blur of ${blurFwhmMm} mm.`,
      );
      const traced = await traceFile(pins, voxels.pyramid, { polarity, blurFwhmMm }, call.io.signal, say);
      await writeWhole(diskFiles(), outPath, new TextEncoder().encode(writeChordaeFile(traced.file)));
      const seconds = (performance.now() - began) / 1000;
      const lines = traced.strands.map(
        ({ id, length, meanRadius, imageFit }) =>
          `${id}  ${length.toFixed(3)} mm  radius ${meanRadius?.toFixed(3) ?? "-"}  fit ${imageFit?.toFixed(2) ?? "straight"}`,
      );
      lines.push(
        `${traced.strands.length} traced, ${traced.failed.length} could not be followed, ${seconds.toFixed(1)} s: ${outPath}`,
      );
      return {
        json: { strands: traced.strands, failed: traced.failed, seconds },
        text: lines.join("\n"),
        exit: traced.failed.length > 0 ? 1 : 0,
      };
    } finally {
      await voxels.close();
    }
  },
};

function pathOption(options: VerbCall["options"], name: string): string {
  const value = options[name];
  if (typeof value === "string" && value !== "") return value;
  const what = `trace needs --${name} with the name of a tree file.`;
  throw new TautlineError("misuse", what, { what });
}

function refuseOutside(pins: ChordaeFile, path: string, voxels: OpenVoxels): void {
  const { grid } = voxels.pyramid;
  const refuse = (where: string, p: readonly number[]) =>
    unreadable(
      basename(path),
      "places inside the scan",
      `(${p.join(", ")}) mm, which is outside`,
      where,
      "Check voxel size, unit and frame of scan and file.",
    );
  const lines = [...pins.trees.flatMap((tree) => tree.strands), ...(pins.crossLinks ?? [])];
  for (const tree of pins.trees)
    for (const node of tree.nodes) if (!isInside(grid, node.position)) throw refuse(`node ${node.id}`, node.position);
  for (const line of lines)
    for (const [i, pin] of (line.via ?? []).entries()) if (!isInside(grid, pin)) throw refuse(`${line.id}.via[${i}]`, pin);
}
