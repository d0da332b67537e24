const TABLE = Uint32Array.from({ length: 256 }, (_, n) => {
  let c = n;
  for (let k = 0; k < 8; k++) c = c & 1 ? 0xedb88320 ^ (c >>> 1) : c >>> 1;
  return c;
});

/**
 * CRC-32 of bytes as PNG chunks and zip files carry it.
 * @param before CRC-32 of the bytes that stand before these; 0 = none.
 * @source PNG specification (W3C), annex D
 */
export function crc32(bytes: Uint8Array, before = 0): number {
  let c = ~before;
  for (const byte of bytes) c = TABLE[(c ^ byte) & 255]! ^ (c >>> 8);
  return (c ^ 0xffffffff) >>> 0;
}
