import { unreadable } from "#shared/errors.ts";
import { sizeXyz } from "#shared/geometry/types.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { niftiPlace } from "#shared/volume/nifti/nifti-place.ts";
import type { ScanHeader } from "#shared/volume/scan-header.ts";

/** What a NIfTI-1 header says of a scan and where its voxels are. */
export interface NiftiHeader {
  readonly scan: ScanHeader;
  readonly littleEndian: boolean;
  /** True: the voxels follow in the same file; false: they stand in the `.img` file beside it. */
  readonly attached: boolean;
  /** Byte of the first voxel of the first volume in its (decompressed) file. */
  readonly offset: number;
  /** Number of the chosen volume and of all volumes. */
  readonly volume: number;
  readonly volumes: number;
}

/** Bytes of the header. */
export const NIFTI_HEADER_BYTES = 348;

/** `datatype` codes. @source nifti1.h, NIFTI_TYPE_ constants (memory); checked against files that ITK writes. */
const TYPES: Readonly<Record<number, SourceDtype>> = {
  2: "uint8",
  4: "int16",
  8: "int32",
  16: "float32",
  64: "float64",
  256: "int8",
  512: "uint16",
  768: "uint32",
  1024: "int64",
  1280: "uint64",
};

/** `n+1` (attached) or `ni1` (in two files) where the bytes begin as a NIfTI-1 header does, `2` for NIfTI-2, else null. */
export function niftiMagic(head: Uint8Array): "n+1" | "ni1" | "2" | null {
  const text = String.fromCharCode(...head.subarray(344, 348));
  if (head.length >= NIFTI_HEADER_BYTES && text === "n+1\0") return "n+1";
  if (head.length >= NIFTI_HEADER_BYTES && text === "ni1\0") return "ni1";
  return /^n(\+|i)2\0/.test(String.fromCharCode(...head.subarray(4, 8))) ? "2" : null;
}

interface VolumeChoice {
  readonly channel?: number;
  readonly time?: number;
  /** Where a choice is missing the first is taken. */
  readonly orFirst?: boolean;
}

/**
 * A NIfTI-1 header, understood.
 * @param bytes at least the first 348 bytes. @param choice which time point and channel (both from 0) where there are several.
 * @throws unreadable-input when it is no NIfTI-1 header, or has not one grey value per voxel of three axes.
 * @source nifti1.h, the format's definition (memory).
 */
export function parseNifti(bytes: Uint8Array, file: string, choice: VolumeChoice = {}): NiftiHeader {
  const magic = niftiMagic(bytes);
  if (magic === "2")
    throw unreadable(file, "a NIfTI-1 header", "a NIfTI-2 header", undefined, "Save the scan as NIfTI-1 or NRRD.");
  if (magic === null) throw unreadable(file, "a NIfTI-1 header", "other bytes");
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const littleEndian = view.getInt32(0, true) === NIFTI_HEADER_BYTES;
  if (!littleEndian && view.getInt32(0, false) !== NIFTI_HEADER_BYTES)
    throw unreadable(file, `a header of ${NIFTI_HEADER_BYTES} bytes`, `${view.getInt32(0, true)}`, "sizeof_hdr");
  const attached = magic === "n+1";
  const dims = Array.from({ length: 8 }, (_, k) => view.getInt16(40 + 2 * k, littleEndian));
  const { size, volume, volumes, readings } = volumesOf(dims, choice, file);
  const code = view.getInt16(70, littleEndian);
  const dtype = TYPES[code];
  if (!dtype) throw unreadable(file, "an integer or float type", `datatype ${code}`, "datatype", "Save the scan as grey values.");
  const bits = view.getInt16(72, littleEndian);
  if (bits !== BYTES_OF_DTYPE[dtype] * 8)
    throw unreadable(file, `${BYTES_OF_DTYPE[dtype] * 8} bits for ${dtype}`, `${bits}`, "bitpix");
  const offset = view.getFloat32(108, littleEndian);
  const least = attached ? 352 : 0;
  // The offset is a 32-bit float: a whole number up to 2^24, beyond that only some.
  if (!(Number.isSafeInteger(offset) && offset >= least))
    throw unreadable(file, `voxels from byte ${least} or later on`, `${offset}`, "vox_offset");
  const { notes, ...place } = niftiPlace(view, littleEndian, file);
  const slope = view.getFloat32(112, littleEndian);
  const inter = view.getFloat32(116, littleEndian);
  const scaled = Number.isFinite(slope) && slope !== 0 && !(slope === 1 && inter === 0);
  const all = scaled
    ? [...notes, `The header's scale (slope ${slope}, intercept ${inter}) is not applied; values are kept as stored.`]
    : notes;
  const scan: ScanHeader = { family: "NIfTI-1", dtype, size: sizeXyz(...size), ...place, ...readings, notes: all };
  return { scan, littleEndian, attached, offset, volume, volumes };
}

/** Sides of a volume, and which of several the person chose: channels (fifth axis) of time points (fourth axis). */
function volumesOf(dims: readonly number[], choice: VolumeChoice, file: string) {
  const count = dims[0]!;
  if (!(count >= 3 && count <= 7)) throw unreadable(file, "3 to 7 axes", `${count}`, "dim");
  const side = (k: number) => (k <= count ? dims[k]! : 1);
  const sides = [1, 2, 3, 4, 5, 6, 7].map(side);
  // Negative sides are what writers leave behind when a scan is larger than the format's 32767 voxels a side.
  if (!sides.every((n) => n >= 1))
    throw unreadable(file, "sides from 1 to 32767 (the most that NIfTI-1 can say)", sides.slice(0, count).join(" x "), "dim");
  if (sides[5] !== 1 || sides[6] !== 1) throw unreadable(file, "at most five axes", sides.join(" x "), "dim");
  const pick = (of: number, chosen: number | undefined, what: string, option: string): number => {
    if (chosen === undefined && of > 1 && !choice.orFirst)
      throw unreadable(file, `one ${what}`, `${of}`, "dim", `Choose one with --${option} 0 to ${of - 1}.`);
    if (chosen !== undefined && chosen >= of)
      throw unreadable(file, `a ${what} from 0 to ${of - 1}`, `number ${chosen} of ${of}`, "dim");
    return chosen ?? 0;
  };
  const time = pick(sides[3]!, choice.time, "time point", "time");
  const channel = pick(sides[4]!, choice.channel, "channel", "channel");
  const size: [number, number, number] = [sides[0]!, sides[1]!, sides[2]!];
  const volumes = sides[3]! * sides[4]!;
  const readings = volumes > 1 ? { readings: { channels: sides[4]!, times: sides[3]! } } : {};
  return { size, volume: channel * sides[3]! + time, volumes, readings };
}
