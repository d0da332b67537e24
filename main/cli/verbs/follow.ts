import { basename } from "node:path";
import { setImmediate as nextTurn } from "node:timers/promises";
import { type OpenVoxels, openVoxels } from "#main/cli/open-voxels.ts";
import { givenPolarity, POLARITY_HELP, POLARITY_OPTION, settledPolarity } from "#main/cli/polarity-option.ts";
import { givenSpacing, SPACING_HELP, SPACING_OPTIONS } from "#main/cli/spacing-option.ts";
import { refuseUnwritable } from "#main/cli/trees-on-scan.ts";
import type { Verb, VerbCall } from "#main/cli/verb.ts";
import { diskFiles } from "#main/node/disk-files.ts";
import { writeWhole } from "#main/node/whole-file.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import type { ChordaeFile, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { fileFromDocument } from "#shared/formats/chordae/file-from-document.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { pointMm, roundPoint } from "#shared/geometry/types.ts";
import { proposalDocument } from "#shared/tracing/follow/accept-proposal.ts";
import { followString } from "#shared/tracing/follow/follow-string.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import type { TraceParameters } from "#shared/tracing/strand-request.ts";
import { createTraceContext } from "#shared/tracing/trace-context.ts";
import { isInside } from "#shared/volume/grid.ts";

/** `tautline follow`: the whole string through one point, proposed as a tree. */
export const follow: Verb = {
  name: "follow",
  summary: "propose the whole string through one point of a scan, with its forks and ends",
  help: `tautline follow <volume or specimen folder> --at x,y,z [--out T] [options] [--json]

Runs from a point both ways along its string, to its forks and ends, and proposes the whole as one tree: a proposal for a person
to look at, not a finding. What is doubtful is marked so. The result depends on point, scan and parameters alone.
Exit 1 when no string is near the point: the tree is null then, and nothing is written.

  --at x,y,z          the point, millimetres in the frame of the scan (or --at=x,y,z, when x is negative)
  --out T             tree file to write; written whole or not at all
${POLARITY_HELP}
${SPACING_HELP}`,
  options: { at: { type: "string" }, out: { type: "string" }, ...POLARITY_OPTION, ...SPACING_OPTIONS },
  positionals: [1, 1],
  async run(call) {
    const { positionals, options, say } = call;
    const at = placeOption(options);
    const out = options.out === undefined ? null : String(options.out);
    const polarityGiven = givenPolarity(options);
    const given = givenSpacing(options);
    if (out !== null) await refuseUnwritable(out);
    const path = positionals[0]!;
    const voxels = await openVoxels(path, given, call);
    try {
      const { grid } = voxels.pyramid;
      if (!isInside(grid, at))
        throw unreadable("--at", "a place inside the scan", `(${at.join(", ")}) mm, which is outside`, undefined, OUTSIDE_ADVICE);
      const polarity = settledPolarity(polarityGiven, voxels, say);
      const parameters: TraceParameters = { polarity, blurFwhmMm: voxels.blurFwhmMm ?? null };
      if (parameters.blurFwhmMm === null) say("blur of the scan unknown: radii stay as measured.");
      const proposal = await run(voxels, parameters, at, call.io.signal);
      if (!proposal) {
        const sentence = `No ${polarity} string is near (${at.join(", ")}) mm. Give a point on a string, within half a millimetre or one diameter.`;
        return { json: { tree: null, reasons: { tree: sentence } }, text: sentence, exit: 1 };
      }
      const file = fileOf(proposal, path, voxels, parameters);
      if (out !== null) await writeWhole(diskFiles(), out, new TextEncoder().encode(writeChordaeFile(file)));
      const tree = file.trees[0]!;
      return { json: { tree }, text: [summary(tree, proposal), ...(out === null ? [] : [out])].join("\n"), exit: 0 };
    } finally {
      await voxels.close();
    }
  },
};

const OUTSIDE_ADVICE = "Check voxel size, unit and frame of the scan, and the point.";

function placeOption(options: VerbCall["options"]) {
  const words = String(options.at ?? "").split(",");
  const [x, y, z] = words.map((word) => (/^\s*[-+]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?\s*$/.test(word) ? Number(word) : Number.NaN));
  if (words.length === 3 && [x, y, z].every(Number.isFinite)) return roundPoint(pointMm(x!, y!, z!));
  const found = options.at === undefined ? "nothing" : `'${String(options.at)}'`;
  const what = `follow needs --at with three numbers in millimetres such as 4.2,3.9,10, found ${found}.`;
  throw new TautlineError("misuse", what, { what });
}

/** Runs the proposal, with a look for an interruption between its steps. */
async function run(
  { pyramid }: OpenVoxels,
  parameters: TraceParameters,
  at: ReturnType<typeof roundPoint>,
  signal: AbortSignal,
): Promise<FollowProposal | null> {
  const steps = followString(pyramid, createTraceContext(pyramid, parameters.polarity), parameters, at, { signal });
  for (;;) {
    await nextTurn();
    const step = steps.next();
    if (step.done) return step.value;
  }
}

function fileOf(proposal: FollowProposal, path: string, voxels: OpenVoxels, { blurFwhmMm }: TraceParameters): ChordaeFile {
  const { grid, dtype } = voxels.pyramid;
  const { size, spacing, origin, direction, frame } = grid;
  const volume = {
    name: basename(path),
    sha256: voxels.sha256,
    dtype,
    size,
    spacing,
    origin,
    direction,
    blurFwhm: blurFwhmMm,
    ...(voxels.derivedFrom !== null && { derivedFrom: { sha256: voxels.derivedFrom } }),
  };
  const radii = blurFwhmMm === null ? "raw" : "blur-corrected";
  return fileFromDocument(proposalDocument(proposal), { frame, volume, software: { name: "Tautline" }, radii });
}

function summary(tree: FileTree, { lengthMm, nodes, strands }: FollowProposal): string {
  const lines = nodes.map(
    ({ id, kind, position, certainty }) =>
      `${id}  ${kind}  ${position.join(", ")}${certainty === "doubtful" ? "  doubtful" : ""}`,
  );
  const doubts = strands.reduce((sum, { doubtful }) => sum + doubtful.length, 0);
  lines.push(`${tree.strands.length} strands, ${lengthMm.toFixed(3)} mm, ${doubts} doubtful stretch${doubts === 1 ? "" : "es"}`);
  return lines.join("\n");
}
