import * as zlib from "node:zlib";
import { crc32 } from "#shared/volume/png/crc32.ts";

/** Newer versions of Node have it in native code, some ten times as fast. */
const native = (zlib as { crc32?: (bytes: Uint8Array, before?: number) => number }).crc32;

/** CRC-32 of bytes that follow others whose CRC-32 is `before` (0 for none). */
export function crcAfter(before: number, bytes: Uint8Array): number {
  return native ? native(bytes, before) >>> 0 : crc32(bytes, before);
}
