import { unreadable } from "#shared/errors.ts";

const SIGNATURE = [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a];
/** Chunks that hold the picture and how it looks; all others (texts, times, camera data, colour profiles with names) may tell who or what it is of. */
const KEPT = new Set(["IHDR", "PLTE", "IDAT", "IEND", "tRNS", "gAMA", "sRGB", "cHRM", "sBIT", "pHYs"]);

/**
 * The PNG with only the chunks that make the picture: what programs write into it beside (names, comments, times) is left out.
 * @throws unreadable-input when it is no PNG or ends early
 * @source PNG (third edition), W3C 2025: signature; chunk = length, type, data, CRC
 */
export function keptPng(bytes: Uint8Array): Uint8Array {
  const file = "the picture";
  if (SIGNATURE.some((byte, i) => bytes[i] !== byte))
    throw unreadable(file, "a PNG", `${bytes.length} bytes that are none`, undefined, "Save the still picture as PNG.");
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const parts: Uint8Array[] = [bytes.subarray(0, 8)];
  for (let at = 8; ; ) {
    if (at + 12 > bytes.length) throw unreadable(file, "an end chunk", "the end of the file", `byte ${at}`);
    const length = view.getUint32(at);
    const end = at + 12 + length;
    if (end > bytes.length) throw unreadable(file, `a chunk of ${length} bytes`, `${bytes.length - at - 12}`, `byte ${at}`);
    const type = String.fromCharCode(...bytes.subarray(at + 4, at + 8));
    if (at === 8 && type !== "IHDR")
      throw unreadable(file, "a header chunk first", `a chunk ${JSON.stringify(type)}`, `byte ${at}`);
    if (KEPT.has(type)) parts.push(bytes.subarray(at, end));
    if (type === "IEND") break;
    at = end;
  }
  return new Uint8Array(Buffer.concat(parts));
}
