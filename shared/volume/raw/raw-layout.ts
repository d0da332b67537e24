import { unreadable } from "#shared/errors.ts";
import { type SizeXyz, sizeXyz, type Vec3 } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { mmPerUnit } from "#shared/volume/length-unit.ts";
import { PLACELESS, type ScanHeader } from "#shared/volume/scan-header.ts";

/** How voxels lie in a file without a header: x fastest, then y, then z, nothing between them. */
export interface RawScan {
  readonly size: SizeXyz;
  readonly dtype: SourceDtype;
  readonly littleEndian: boolean;
  /** Bytes before the first voxel. */
  readonly offset: number;
  /** Distances between voxel centres in `unit`; null when not said. */
  readonly spacing: Vec3 | null;
  readonly unit: string | null;
}

/** A sidecar: the layout and, where it names one, the file that holds the voxels. */
export interface RawSidecar extends RawScan {
  readonly file: string | null;
}

/** The word by which a sidecar says what it is. */
export const RAW_FORMAT = "tautline-raw";
const KEYS = ["format", "version", "file", "size", "dtype", "endian", "offset", "spacing", "unit"];

/** The whole format of a sidecar, for help texts. */
export const RAW_SIDECAR_HELP = `{"format": "${RAW_FORMAT}", "version": 1, "file": "scan.raw", "size": [nx, ny, nz], "dtype": "uint16",
   "endian": "little", "offset": 0, "spacing": [sx, sy, sz], "unit": "um"}`;

/** True when a JSON text is meant as a sidecar. */
export function isRawSidecar(value: unknown): value is Record<string, unknown> {
  return typeof value === "object" && value !== null && (value as { format?: unknown }).format === RAW_FORMAT;
}

/**
 * A sidecar of {@link RAW_SIDECAR_HELP}. `endian` may be left out for one-byte types; `file`, `offset`, `spacing` and `unit` may be left out.
 * @throws unreadable-input for another version, a key that is missing, ill-formed or unknown (a misspelt one would be a silent mistake).
 */
export function parseRawSidecar(value: Record<string, unknown>, file: string): RawSidecar {
  const fail = (where: string, expected: string) => unreadable(file, expected, short(value[where]), where);
  if (value.version !== 1) throw fail("version", "version 1");
  const unknown = Object.keys(value).find((key) => !KEYS.includes(key));
  if (unknown !== undefined) throw unreadable(file, `the keys ${KEYS.join(", ")}`, `'${unknown.slice(0, 40)}'`);
  const { size, dtype, endian, offset = 0, spacing = null, unit = null } = value;
  if (!isThree(size) || !size.every((n) => isSide(n))) throw fail("size", "three whole numbers from 1 to 2147483647");
  if (typeof dtype !== "string" || !Object.hasOwn(BYTES_OF_DTYPE, dtype))
    throw fail("dtype", `one of ${Object.keys(BYTES_OF_DTYPE).join(", ")}`);
  const bytes = BYTES_OF_DTYPE[dtype as SourceDtype];
  if (endian !== "little" && endian !== "big" && !(endian === undefined && bytes === 1)) throw fail("endian", "little or big");
  if (!Number.isSafeInteger(offset) || (offset as number) < 0) throw fail("offset", "a whole number of bytes");
  if (spacing !== null && !isThree(spacing)) throw fail("spacing", "three numbers");
  if (unit !== null && typeof unit !== "string") throw fail("unit", "nm, um, mm, cm or m");
  if (value.file !== undefined && (typeof value.file !== "string" || value.file === "" || value.file.includes("\0")))
    throw fail("file", "the name of the file that holds the voxels");
  return {
    size: sizeXyz(...size),
    dtype: dtype as SourceDtype,
    littleEndian: endian !== "big",
    offset: offset as number,
    spacing,
    unit,
    file: (value.file as string | undefined) ?? null,
  };
}

/**
 * The header of a raw scan.
 * @param fileBytes must be exactly what the layout says: a wrong size would give a skewed picture, not an error.
 * @throws unreadable-input when it is not.
 */
export function rawHeader(scan: RawScan, fileBytes: number, file: string): ScanHeader {
  const { size, dtype, offset, spacing, unit } = scan;
  const voxels = size[0] * size[1] * size[2] * BYTES_OF_DTYPE[dtype];
  if (!Number.isSafeInteger(voxels + offset))
    throw unreadable(file, "sizes whose product can be counted", size.join(" x "), "size");
  if (voxels + offset !== fileBytes)
    throw unreadable(
      file,
      `${voxels + offset} bytes (${offset} before ${size.join(" x ")} voxels of ${dtype})`,
      `${fileBytes} bytes`,
      "size",
      "Check size, type and offset.",
    );
  const mm = mmPerUnit(unit);
  const factors: Vec3 | null = mm === null ? null : [mm, mm, mm];
  return {
    ...PLACELESS,
    family: "raw",
    dtype,
    size,
    headerSpacing: spacing,
    unit,
    mmPerUnit: factors,
    originMmPerUnit: factors,
  };
}

function isThree(value: unknown): value is [number, number, number] {
  return Array.isArray(value) && value.length === 3 && value.every((n) => typeof n === "number" && Number.isFinite(n));
}

function isSide(value: number): boolean {
  return Number.isInteger(value) && value >= 1 && value < 2 ** 31;
}

function short(value: unknown): string {
  const text = JSON.stringify(value) ?? "nothing";
  return text.length > 60 ? `${text.slice(0, 60)}...` : text;
}
