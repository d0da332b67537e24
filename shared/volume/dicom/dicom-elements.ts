import { unreadable } from "#shared/errors.ts";
import { latin1, quote } from "#shared/volume/nrrd/nrrd-fields.ts";

/** A piece of the file that the parser wants to see next; what it is given may be longer, never shorter. */
export interface BytesWanted {
  readonly at: number;
  readonly length: number;
}

/** Where the voxels stand. `length` 0xFFFFFFFF: in compressed fragments. */
export interface DicomPixels {
  readonly offset: number;
  readonly length: number;
  readonly vr: string;
  readonly kind: "integer" | "float32" | "float64";
}

/** The elements of one DICOM file that place and type its voxels, not yet understood. */
export interface DicomElements {
  readonly transferSyntax: string;
  readonly littleEndian: boolean;
  /** Values by tag (group * 65536 + element). */
  readonly values: ReadonlyMap<number, Uint8Array>;
  readonly pixels: DicomPixels | null;
}

/** Tags that are read. @source DICOM PS3.6, data dictionary (memory). */
export const DICOM_TAG = {
  sopClass: 0x00080016,
  sliceThickness: 0x00180050,
  betweenSlices: 0x00180088,
  study: 0x0020000d,
  series: 0x0020000e,
  position: 0x00200032,
  orientation: 0x00200037,
  samples: 0x00280002,
  photometric: 0x00280004,
  frames: 0x00280008,
  rows: 0x00280010,
  columns: 0x00280011,
  pixelSpacing: 0x00280030,
  bitsAllocated: 0x00280100,
  bitsStored: 0x00280101,
  highBit: 0x00280102,
  signed: 0x00280103,
  intercept: 0x00281052,
  slope: 0x00281053,
} as const;

const WANTED = new Set<number>(Object.values(DICOM_TAG));
const PIXELS: ReadonlyMap<number, DicomPixels["kind"]> = new Map([
  [0x7fe00008, "float32"],
  [0x7fe00009, "float64"],
  [0x7fe00010, "integer"],
]);
const ITEM = 0xfffee000;
const ITEM_END = 0xfffee00d;
const SEQUENCE_END = 0xfffee0dd;
const UNDEFINED = 0xffffffff;
/** Value representations whose length takes four bytes, after two reserved ones. */
const LONG_FORM = new Set(["OB", "OD", "OF", "OL", "OV", "OW", "SQ", "SV", "UC", "UN", "UR", "UT", "UV"]);
const IMPLICIT_LITTLE = "1.2.840.10008.1.2";
const EXPLICIT_BIG = "1.2.840.10008.1.2.2";
const DEFLATED = "1.2.840.10008.1.2.1.99";
const MOST_ELEMENTS = 200_000;
const MOST_VALUE_BYTES = 4096;
const MOST_DEPTH = 32;

/** True when the bytes begin as a DICOM file does. */
export function isDicom(head: Uint8Array): boolean {
  return head.length >= 132 && latin1(head.subarray(128, 132)) === "DICM";
}

type Parser<T> = Generator<BytesWanted, T, Uint8Array>;

interface ElementHead {
  readonly tag: number;
  readonly vr: string;
  readonly length: number;
  /** Byte of the value. */
  readonly at: number;
}

/**
 * Walks a DICOM file's elements up to its pixel data, asking for the bytes it needs as it goes, so that nothing is read that is not looked at.
 * @param fileBytes size of the file; every element must lie inside it.
 * @throws unreadable-input when it is no DICOM file, or its elements run past the end.
 * @source DICOM PS3.5 sections 7 (data set) and A (transfer syntaxes), PS3.10 section 7 (file).
 */
export function* walkDicom(fileBytes: number, file: string): Parser<DicomElements> {
  const state = { elements: 0 };
  const values = new Map<number, Uint8Array>();
  const peek = function* (at: number, length: number, where: string): Parser<DataView> {
    if (!(at + length <= fileBytes))
      throw unreadable(
        file,
        `${at + length} bytes or more`,
        `${fileBytes} bytes`,
        where,
        "The file was cut short; copy it again.",
      );
    const bytes = yield { at, length };
    return new DataView(bytes.buffer, bytes.byteOffset, length);
  };
  const elementAt = function* (at: number, little: boolean, explicit: boolean): Parser<ElementHead> {
    if (++state.elements > MOST_ELEMENTS) throw unreadable(file, `at most ${MOST_ELEMENTS} elements`, "more");
    const view = yield* peek(at, 8, `element at byte ${at}`);
    const tag = view.getUint16(0, little) * 65536 + view.getUint16(2, little);
    if (!explicit || tag >= ITEM) return { tag, vr: "", length: view.getUint32(4, little), at: at + 8 };
    const vr = String.fromCharCode(view.getUint8(4), view.getUint8(5));
    if (!/^[A-Z]{2}$/.test(vr))
      throw unreadable(file, "a value representation of two letters", quote(vr), `element ${name(tag)}`);
    if (!LONG_FORM.has(vr)) return { tag, vr, length: view.getUint16(6, little), at: at + 8 };
    return { tag, vr, length: (yield* peek(at + 8, 4, `element ${name(tag)}`)).getUint32(0, little), at: at + 12 };
  };
  /** Byte after an element that holds items of undefined length. */
  const afterItems = function* (from: number, little: boolean, explicit: boolean, depth: number): Parser<number> {
    if (depth > MOST_DEPTH) throw unreadable(file, `sequences at most ${MOST_DEPTH} deep`, "deeper ones", `byte ${from}`);
    for (let at = from; ; ) {
      const item = yield* elementAt(at, little, false);
      if (item.tag === SEQUENCE_END) return item.at;
      if (item.tag !== ITEM) throw unreadable(file, "an item of a sequence", `element ${name(item.tag)}`, `byte ${at}`);
      at = item.length === UNDEFINED ? yield* afterElements(item.at, little, explicit, depth) : item.at + item.length;
    }
  };
  const afterElements = function* (from: number, little: boolean, explicit: boolean, depth: number): Parser<number> {
    for (let at = from; ; ) {
      const element = yield* elementAt(at, little, explicit);
      if (element.tag === ITEM_END) return element.at;
      at = yield* after(element, little, explicit, depth);
    }
  };
  const after = function* (element: ElementHead, little: boolean, explicit: boolean, depth: number): Parser<number> {
    if (element.length !== UNDEFINED) return element.at + element.length;
    if (element.vr !== "" && element.vr !== "SQ" && element.vr !== "UN")
      throw unreadable(file, "a length", "an undefined one", `element ${name(element.tag)}`);
    // An unknown value of undefined length holds items in implicit form, whatever the file's own.
    return yield* afterItems(element.at, little, explicit && element.vr !== "UN", depth + 1);
  };

  const head = yield { at: 0, length: Math.min(132, fileBytes) };
  if (!isDicom(head.subarray(0, Math.min(132, fileBytes)))) throw unreadable(file, "a DICOM file", "other bytes");
  let at = 132;
  let transferSyntax: string | null = null;
  while (at < fileBytes) {
    const view = yield* peek(at, 2, "file meta information");
    if (view.getUint16(0, true) !== 2) break;
    const element = yield* elementAt(at, true, true);
    if (element.tag === 0x00020010 && element.length <= 128) {
      const value = yield* peek(element.at, element.length, "transfer syntax");
      transferSyntax = dicomText(new Uint8Array(value.buffer, value.byteOffset, element.length));
    }
    at = yield* after(element, true, true, 0);
  }
  if (transferSyntax === null) throw unreadable(file, "a transfer syntax in the file meta information", "none");
  if (transferSyntax === DEFLATED) throw refusedSyntax(transferSyntax, file);
  const littleEndian = transferSyntax !== EXPLICIT_BIG;
  const explicit = transferSyntax !== IMPLICIT_LITTLE;
  while (at < fileBytes) {
    const element = yield* elementAt(at, littleEndian, explicit);
    const kind = PIXELS.get(element.tag);
    if (kind) {
      const pixels = { offset: element.at, length: element.length, vr: element.vr || "OW", kind };
      return { transferSyntax, littleEndian, values, pixels };
    }
    if (WANTED.has(element.tag) && element.length <= MOST_VALUE_BYTES) {
      const value = yield* peek(element.at, element.length, `element ${name(element.tag)}`);
      values.set(element.tag, new Uint8Array(value.buffer, value.byteOffset, element.length).slice());
    }
    at = yield* after(element, littleEndian, explicit, 0);
  }
  return { transferSyntax, littleEndian, values, pixels: null };
}

/** The sentence for a transfer syntax that is not read. */
export function refusedSyntax(uid: string, file: string) {
  const found = `transfer syntax ${uid.slice(0, 64)}${familyOf(uid)}`;
  const next = "Save the series uncompressed (explicit or implicit little-endian).";
  return unreadable(file, "uncompressed voxels", found, undefined, next);
}

function familyOf(uid: string): string {
  if (uid === DEFLATED) return " (deflated)";
  if (uid.startsWith("1.2.840.10008.1.2.5")) return " (run lengths)";
  return uid.startsWith("1.2.840.10008.1.2.4.") ? " (a picture compression)" : "";
}

/** A text value without its padding. */
export function dicomText(bytes: Uint8Array): string {
  return latin1(bytes)
    .replace(/[\0 ]+$/, "")
    .trim();
}

/** A tag as the standard writes it. */
function name(tag: number): string {
  const digits = tag.toString(16).toUpperCase().padStart(8, "0");
  return `(${digits.slice(0, 4)},${digits.slice(4)})`;
}
