import { wholeOption, wordOption } from "#main/cli/number-option.ts";
import type { VerbCall } from "#main/cli/verb.ts";
import { TautlineError } from "#shared/errors.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { RAW_SIDECAR_HELP, type RawScan } from "#shared/volume/raw/raw-layout.ts";

/** Declaration of the flags for voxels without a header. */
export const RAW_OPTIONS = {
  "raw-size": { type: "string" },
  "raw-dtype": { type: "string" },
  "raw-endian": { type: "string" },
  "raw-offset": { type: "string" },
} as const;

const DTYPES = Object.keys(BYTES_OF_DTYPE) as SourceDtype[];

/** Lines of help for {@link RAW_OPTIONS}. */
export const RAW_HELP = `  --raw-size x,y,z       the file has no header: so many voxels, x fastest, then y, then z
  --raw-dtype T          their type: ${DTYPES.slice(0, 6).join(", ")},
                         ${DTYPES.slice(6).join(", ")}
  --raw-endian E         little or big; needed for types of more than one byte
  --raw-offset n         bytes before the first voxel (0 when not given)
A raw file may instead have a sidecar beside it, a JSON file of its name with .json at the end (scan.raw.json):
  ${RAW_SIDECAR_HELP}
endian may be left out for one-byte types; file, offset, spacing and unit may be left out; unit is nm, um, mm, cm or m.`;

/** The layout that the flags give; undefined when none is given. @throws misuse */
export function givenRaw(options: VerbCall["options"]): RawScan | undefined {
  const given = Object.keys(RAW_OPTIONS).filter((name) => options[name] !== undefined);
  if (given.length === 0) return undefined;
  const dtype = wordOption(options, "raw-dtype", DTYPES);
  const sizeText = options["raw-size"];
  if (sizeText === undefined || dtype === undefined) throw wrong(`--${given[0]} needs --raw-size and --raw-dtype beside it.`);
  const words = String(sizeText).split(",");
  const size = words.map((word) => (/^\s*\d{1,10}\s*$/.test(word) ? Number(word) : Number.NaN));
  if (size.length !== 3 || !size.every((n) => n >= 1 && n < 2 ** 31))
    throw wrong(`--raw-size must be three whole numbers such as 2000,2000,1000, found '${String(sizeText)}'.`);
  const endian = wordOption(options, "raw-endian", ["little", "big"] as const);
  if (endian === undefined && BYTES_OF_DTYPE[dtype] > 1) throw wrong(`--raw-dtype ${dtype} needs --raw-endian little or big.`);
  return {
    size: sizeXyz(size[0]!, size[1]!, size[2]!),
    dtype,
    littleEndian: endian !== "big",
    offset: offsetOf(options),
    spacing: null,
    unit: null,
  };
}

/** Bytes to pass over; beyond what {@link wholeOption} takes, since scans are large. */
function offsetOf(options: VerbCall["options"]): number {
  const text = options["raw-offset"];
  if (text === undefined) return 0;
  const value = /^\d{1,15}$/.test(String(text)) ? Number(text) : Number.NaN;
  if (!(value >= 0)) throw wrong(`--raw-offset must be a whole number of bytes, found '${String(text)}'.`);
  return value;
}

/** What the person chose of a scan that has more than one reading. @throws misuse */
export function givenChoice(options: VerbCall["options"]): { channel?: number; time?: number; raw?: RawScan } {
  const channel = wholeOption(options, "channel", 0);
  const time = wholeOption(options, "time", 0);
  const raw = givenRaw(options);
  return {
    ...(channel === undefined ? {} : { channel }),
    ...(time === undefined ? {} : { time }),
    ...(raw === undefined ? {} : { raw }),
  };
}

function wrong(what: string): TautlineError<"misuse"> {
  return new TautlineError("misuse", what, { what });
}
