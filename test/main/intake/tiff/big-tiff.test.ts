// A BigTIFF put together from the BigTIFF design: 64-bit offsets and counts, type 16 (LONG8). Nothing here is shared with the reader.
import { open } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, it } from "vitest";
import { openScan } from "#main/intake/open-scan.ts";
import { gatherVoxels } from "#test/main/intake/gather-voxels.ts";
import { bytesOf, scratchFolder } from "#test/main/intake/written-by-hand.ts";

const [W, H] = [4, 3];

function directory(strip: number, next: number): Buffer {
  const tags: [number, number, number][] = [
    [256, 4, W],
    [257, 4, H],
    [258, 3, 16],
    [259, 3, 1],
    [262, 3, 1],
    [273, 16, strip],
    [277, 3, 1],
    [278, 4, H],
    [279, 16, W * H * 2],
    [339, 3, 1],
  ];
  const out = Buffer.alloc(8 + tags.length * 20 + 8);
  out.writeBigUInt64LE(BigInt(tags.length), 0);
  tags.forEach(([tag, type, value], k) => {
    const at = 8 + k * 20;
    out.writeUInt16LE(tag, at);
    out.writeUInt16LE(type, at + 2);
    out.writeBigUInt64LE(1n, at + 4);
    out.writeBigUInt64LE(BigInt(value), at + 12);
  });
  out.writeBigUInt64LE(BigInt(next), 8 + tags.length * 20);
  return out;
}

describe("a BigTIFF", () => {
  it("whose pages and voxels lie beyond 4 GiB is read there (a sparse file)", async () => {
    const path = join(await scratchFolder(), "far.tif");
    const pages = [0, 1, 2].map((z) => Array.from({ length: W * H }, (_, k) => z * 1000 + k));
    const at = (z: number) => 2 ** 32 * (z + 1) + 16 * z + 8;
    const file = await open(path, "w");
    const head = Buffer.alloc(16);
    head.write("II+\0", 0, "latin1");
    head.writeUInt16LE(8, 4);
    head.writeBigUInt64LE(BigInt(at(0)), 8);
    await file.write(head, 0, 16, 0);
    for (const [z, values] of pages.entries()) {
      const place = directory(at(z) + 4096, z < 2 ? at(z + 1) : 0);
      await file.write(place, 0, place.length, at(z));
      await file.write(bytesOf(values, "uint16", true), 0, W * H * 2, at(z) + 4096);
    }
    await file.close();
    const source = await openScan(path);
    expect(source.header.size).toEqual([W, H, 3]);
    expect(await gatherVoxels(source)).toEqual(pages.flat());
    await source.close();
  });
});
