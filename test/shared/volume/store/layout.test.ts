import { describe, expect, it } from "vitest";
import { crc32c } from "#shared/volume/store/crc32c.ts";
import {
  ABSENT,
  chunkBytes,
  chunkNumber,
  encodeShardIndex,
  INDEX_BYTES,
  locateChunk,
  parseShardIndex,
  plainShardIndex,
  shardGrid,
  shardPath,
} from "#shared/volume/store/layout.ts";

describe("crc32c", () => {
  // RFC 3720, appendix B.4 (bytes in its order of transmission), and the usual check value of the CRC catalogue (memory).
  it.each([
    ["32 bytes of 0", new Uint8Array(32), 0x8a9136aa],
    ["32 bytes of 255", new Uint8Array(32).fill(255), 0x62a8ab43],
    ["0 to 31", Uint8Array.from({ length: 32 }, (_, k) => k), 0x46dd794e],
    ["31 to 0", Uint8Array.from({ length: 32 }, (_, k) => 31 - k), 0x113fdb5c],
    ["123456789", new TextEncoder().encode("123456789"), 0xe3069283],
  ])("of %s is the published value", (_, bytes, expected) => {
    expect(crc32c(bytes)).toBe(expected);
  });
});

describe("the index of a shard", () => {
  it("comes back as it was encoded, absent chunks included", () => {
    const index = plainShardIndex([600, 70, 70], "uint16", [1, 0, 1]);
    const again = parseShardIndex(encodeShardIndex(index));
    expect(again).toEqual(index);
    expect(encodeShardIndex(index)).toHaveLength(INDEX_BYTES);
  });

  it("marks a missing chunk with two words of all ones, as the Zarr v3 sharding codec asks", () => {
    const bytes = encodeShardIndex(plainShardIndex([1, 1, 1], "uint8", [0, 0, 0]));
    expect([...bytes.subarray(0, 16)]).toEqual([0, 0, 0, 0, 0, 0, 0, 0, 0, 128, 0, 0, 0, 0, 0, 0]);
    expect([...bytes.subarray(16, 32)]).toEqual(new Array(16).fill(255));
  });

  it("holds exactly the chunks that touch the array, one after the other", () => {
    // 600 x 70 x 70 voxels: shard 1 along x covers x 512-599 (3 chunks), shard 1 along z covers z 64-69 (1 chunk), y 0-69 (3 chunks).
    const index = plainShardIndex([600, 70, 70], "float32", [1, 0, 1]);
    const there = [...index.offsets].flatMap((offset, n) => (offset === ABSENT ? [] : [n]));
    expect(there).toEqual([0, 1, 2, 16, 17, 18, 32, 33, 34]);
    expect(there.map((n) => index.offsets[n])).toEqual(there.map((_, k) => k * 131072));
    expect(chunkBytes("float32")).toBe(131072);
  });

  it("is refused when a byte of it is wrong or missing", () => {
    const bytes = encodeShardIndex(plainShardIndex([40, 40, 40], "uint8", [0, 0, 0]));
    bytes[100] = bytes[100]! ^ 1;
    expect(() => parseShardIndex(bytes, "c/0/0/0")).toThrow(/c\/0\/0\/0.*checksum/);
    expect(() => parseShardIndex(bytes.subarray(1))).toThrow(/8196 bytes/);
  });
});

describe("places in the store", () => {
  it("number shards and chunks in C order", () => {
    expect(shardPath(2, 1, 0, 3)).toBe("2/c/1/0/3");
    expect(shardGrid([2000, 2000, 1000])).toEqual([16, 4, 4]);
    expect(chunkNumber(1, 2, 3)).toBe(256 + 32 + 3);
    expect(locateChunk(3, 17, 40)).toEqual({ shard: [1, 1, 2], number: 256 + 16 + 8 });
  });
});
