const TABLE = makeTable();

function makeTable(): Uint32Array {
  const table = new Uint32Array(256);
  for (let n = 0; n < 256; n++) {
    let c = n;
    for (let bit = 0; bit < 8; bit++) c = c & 1 ? (c >>> 1) ^ 0x82f63b78 : c >>> 1;
    table[n] = c >>> 0;
  }
  return table;
}

/**
 * CRC-32C of `bytes` as an unsigned 32-bit number. O(n); meant for the few kilobytes of a shard index, not for voxels.
 * @source RFC 3720 (iSCSI), section 12.1 and appendix B.4: Castagnoli polynomial 0x1EDC6F41, reflected, initial value and final xor all ones.
 */
export function crc32c(bytes: Uint8Array): number {
  let c = 0xffffffff;
  for (let i = 0; i < bytes.length; i++) c = TABLE[(c ^ bytes[i]!) & 0xff]! ^ (c >>> 8);
  return (c ^ 0xffffffff) >>> 0;
}
