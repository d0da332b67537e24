import { realOption, wholeOption } from "#main/cli/number-option.ts";
import type { Verb, VerbCall } from "#main/cli/verb.ts";
import { writePhantom } from "#main/cli/write-phantom.ts";
import { TautlineError } from "#shared/errors.ts";
import { blockPhantom, LEAST_SIDE_VOXELS, mostTrees } from "#shared/phantom/block-phantom.ts";
import { holdsValve, VALVE_TREES, valvePhantom, valveSize } from "#shared/phantom/demo-valve.ts";
import type { PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";

const SPACING_MM = 0.04;
const MOST_SIDE_VOXELS = 4096;
const VALVE_SIZE = valveSize(SPACING_MM);

/** `tautline phantom`: a synthetic specimen whose trees are known. */
export const phantom: Verb = {
  name: "phantom",
  summary: "make a synthetic scan with its true trees, pins, and passes with known errors",
  help: `tautline phantom --out DIR --seed N [--size nx,ny,nz] [--trees K] [--noise s] [--json]

Makes a synthetic specimen in DIR: volume.nrrd (uint16, voxels of 40 um, space LPS), true.chordae.json, pins.chordae.json,
an-1.chordae.json to an-3.chordae.json, and errors.json with the mistakes that were put into these three passes. The same
options give the same bytes.

  --out DIR        folder to write into; made when it is not there
  --seed N         whole number from 0 on
  --size nx,ny,nz  voxels; 256,256,256 when not given, each side from ${LEAST_SIDE_VOXELS} to ${MOST_SIDE_VOXELS}
  --trees K        4 when not given; each needs 32 x 32 voxels across
                   (${VALVE_TREES} trees in ${VALVE_SIZE.join(",")} voxels or more: a whole valve instead of a block)
  --noise s        standard deviation as a share of a string's contrast; 0.05 when not given`,
  options: {
    out: { type: "string" },
    seed: { type: "string" },
    size: { type: "string" },
    trees: { type: "string" },
    noise: { type: "string" },
  },
  positionals: [0, 0],
  async run({ options, io, say }) {
    const folder = options.out;
    if (typeof folder !== "string" || folder === "") throw misuse("phantom needs --out with the name of a folder.");
    const seed = wholeOption(options, "seed", 0);
    if (seed === undefined) throw misuse("phantom needs --seed with a whole number.");
    const size = sizeOption(options) ?? [256, 256, 256];
    const trees = wholeOption(options, "trees", 1) ?? 4;
    const noise = realOption(options, "noise", 0.05, 0, true);
    const specimen = makeSpecimen(size, trees, noise, seed);
    const files = await writePhantom(specimen, folder, seed, io.signal, say);
    const list = [files.volume, files.true, files.pins, ...files.passes, files.errors];
    const text = `a synthetic ${trees === 1 ? "tree" : `set of ${specimen.truth.trees.length} trees`} in ${specimen.grid.size.join(" x ")} voxels\n${list.join("\n")}`;
    return { json: { files }, text, exit: 0 };
  },
};

function makeSpecimen(size: readonly [number, number, number], trees: number, noise: number, seed: number): PhantomSpecimen {
  const name = `phantom-${seed}`;
  if (trees === VALVE_TREES && holdsValve(size, SPACING_MM))
    return valvePhantom({ name, seed, spacingMm: SPACING_MM, noise, size });
  const most = mostTrees(size);
  if (trees > most) throw misuse(`--trees ${trees} does not fit: a scan of ${size.join(",")} voxels has room for ${most}.`);
  return blockPhantom({ name, seed, size, spacingMm: SPACING_MM, trees, noise });
}

function sizeOption(options: VerbCall["options"]): [number, number, number] | undefined {
  const text = options.size;
  if (text === undefined) return undefined;
  const sides = String(text)
    .split(",")
    .map((word) => (/^\d{1,5}$/.test(word) ? Number(word) : Number.NaN));
  if (sides.length === 3 && sides.every((n) => n >= LEAST_SIDE_VOXELS && n <= MOST_SIDE_VOXELS))
    return sides as [number, number, number];
  const expected = `three whole numbers from ${LEAST_SIDE_VOXELS} to ${MOST_SIDE_VOXELS}, as in 256,256,256`;
  throw misuse(`--size must be ${expected}, found '${String(text)}'.`);
}

function misuse(what: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", what, { what });
}
