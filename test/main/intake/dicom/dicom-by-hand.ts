// DICOM files put together element by element from PS3.5 and PS3.10; nothing here is shared with the reader.
import { bytesOf } from "#test/main/intake/written-by-hand.ts";

export type Syntax = "implicit" | "explicit" | "big";
export const SYNTAX: Record<Syntax, string> = {
  implicit: "1.2.840.10008.1.2",
  explicit: "1.2.840.10008.1.2.1",
  big: "1.2.840.10008.1.2.2",
};

/** [group, element, VR, value]; a number or a list of them becomes unsigned shorts. */
export type Element = readonly [number, number, string, string | number | Uint8Array];

export interface HandDicom {
  readonly columns: number;
  readonly rows: number;
  readonly dtype: "uint8" | "int8" | "uint16" | "int16" | "uint32" | "int32";
  readonly values: readonly number[];
  readonly position?: string | null;
  readonly orientation?: string | null;
  /** Distance of rows, then of columns. */
  readonly pixelSpacing?: string | null;
  readonly series?: string;
  readonly syntax?: Syntax;
  /** Another transfer syntax to claim. */
  readonly claims?: string;
  readonly bitsStored?: number;
  /** Elements that replace or join those above. */
  readonly more?: readonly Element[];
  readonly pixelVr?: "OB" | "OW";
  /** Elements as bytes already in the file's own form, put before the image's. */
  readonly raw?: Uint8Array;
}

const LONG = ["OB", "OW", "SQ", "UN", "UT"];

export function element([group, number, vr, value]: Element, syntax: Syntax): Buffer {
  const big = syntax === "big";
  let bytes: Buffer;
  if (typeof value === "number") {
    bytes = Buffer.alloc(2);
    big ? bytes.writeUInt16BE(value) : bytes.writeUInt16LE(value);
  } else bytes = Buffer.from(value as string, "latin1");
  if (bytes.length % 2) bytes = Buffer.concat([bytes, Buffer.from(vr === "UI" || vr.startsWith("O") ? "\0" : " ")]);
  const short = (v: number) => Buffer.from(big ? [v >> 8, v & 255] : [v & 255, v >> 8]);
  const long = (v: number) =>
    big ? Buffer.concat([short(v >>> 16), short(v & 65535)]) : Buffer.concat([short(v & 65535), short(v >>> 16)]);
  const tag = Buffer.concat([short(group), short(number)]);
  if (syntax === "implicit") return Buffer.concat([tag, long(bytes.length), bytes]);
  const length = LONG.includes(vr) ? Buffer.concat([short(0), long(bytes.length)]) : short(bytes.length);
  return Buffer.concat([tag, Buffer.from(vr), length, bytes]);
}

export function dicomBytes(order: HandDicom): Buffer {
  const syntax = order.syntax ?? "explicit";
  const bits = Number(/\d+/.exec(order.dtype)![0]);
  const uid = order.claims ?? SYNTAX[syntax];
  const instance = `1.2.3.${Math.abs(order.values.reduce((sum, v, k) => (sum * 31 + v + k) % 1e9, 7))}`;
  const meta = [
    element([2, 1, "OB", new Uint8Array([0, 1])], "explicit"),
    element([2, 2, "UI", "1.2.840.10008.5.1.4.1.1.2"], "explicit"),
    element([2, 3, "UI", instance], "explicit"),
    element([2, 0x10, "UI", uid], "explicit"),
  ];
  const metaLength = Buffer.alloc(12);
  metaLength.set([2, 0, 0, 0, 0x55, 0x4c, 4, 0]);
  metaLength.writeUInt32LE(Buffer.concat(meta).length, 8);
  const pixels = bytesOf(order.values, order.dtype, syntax !== "big");
  const vr = order.pixelVr ?? (bits === 8 ? "OB" : "OW");
  if (vr === "OW" && bits === 8 && syntax === "big") Buffer.from(pixels.buffer).swap16();
  const list: (Element | null)[] = [
    [8, 0x16, "UI", "1.2.840.10008.5.1.4.1.1.2"],
    [8, 0x18, "UI", instance],
    [8, 0x60, "CS", "CT"],
    [0x20, 0x0d, "UI", "1.2.3"],
    [0x20, 0x0e, "UI", order.series ?? "1.2.3.4"],
    order.position === null ? null : [0x20, 0x32, "DS", order.position ?? "0\\0\\0"],
    order.orientation === null ? null : [0x20, 0x37, "DS", order.orientation ?? "1\\0\\0\\0\\1\\0"],
    [0x28, 2, "US", 1],
    [0x28, 4, "CS", "MONOCHROME2"],
    [0x28, 0x10, "US", order.rows],
    [0x28, 0x11, "US", order.columns],
    order.pixelSpacing === null ? null : [0x28, 0x30, "DS", order.pixelSpacing ?? "0.04\\0.04"],
    [0x28, 0x100, "US", bits],
    [0x28, 0x101, "US", order.bitsStored ?? bits],
    [0x28, 0x102, "US", (order.bitsStored ?? bits) - 1],
    [0x28, 0x103, "US", order.dtype.startsWith("u") ? 0 : 1],
    [0x7fe0, 0x10, vr, pixels],
  ];
  const key = (e: Element) => e[0] * 65536 + e[1];
  const more = order.more ?? [];
  const all = [...list.filter((e): e is Element => e !== null && !more.some((m) => key(m) === key(e))), ...more];
  all.sort((a, b) => key(a) - key(b));
  const body = all.map((e) => element(e, syntax));
  return Buffer.concat([Buffer.alloc(128), Buffer.from("DICM"), metaLength, ...meta, order.raw ?? Buffer.alloc(0), ...body]);
}
