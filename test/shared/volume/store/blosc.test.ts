// Frames made by the codec that zarrita brings (c-blosc itself, compiled to WebAssembly) are unpacked here; damaged ones give a fault, never another error.
import { describe, expect, test } from "vitest";
import { registry } from "zarrita";
import { BloscFault, unpackBlosc } from "#shared/volume/store/blosc.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

/** Grey values with a noise of a few units, and a part that repeats, as bytes of a type of so many bytes. */
function scanBytes(voxels: number, width: number): Uint8Array {
  const random = seeded(voxels + width);
  const bytes = new Uint8Array(voxels * width);
  const view = new DataView(bytes.buffer);
  for (let n = 0; n < voxels; n++) {
    const value = n % 1000 < 300 ? 40 : 120 + Math.floor(random() * 12);
    if (width === 1) view.setUint8(n, value);
    else if (width === 2) view.setUint16(2 * n, value * 30, true);
    else view.setFloat32(4 * n, value / 7, true);
  }
  return bytes;
}

interface Codec {
  fromConfig(config: object): { encode(bytes: Uint8Array): Promise<Uint8Array> };
}
const Blosc = (await registry.get("blosc")!()) as unknown as Codec;

const pack = (bytes: Uint8Array, config: object) =>
  Blosc.fromConfig({ id: "blosc", clevel: 5, cname: "lz4", shuffle: 1, blocksize: 0, ...config }).encode(bytes);

describe("a blosc frame", () => {
  test.each([
    ["bytes shuffled", 2, {}],
    ["not shuffled", 2, { shuffle: 0 }],
    ["by LZ4HC", 2, { cname: "lz4hc", clevel: 9 }],
    ["of one-byte voxels", 1, {}],
    ["of float voxels", 4, {}],
    ["of small blocks", 2, { blocksize: 4096 }],
    ["of tiny blocks, which are not split", 4, { blocksize: 256 }],
    ["stored, not packed", 2, { clevel: 0 }],
  ])("%s gives what went in", async (_, width, config) => {
    for (const voxels of [0, 1, 7, 500, 32 ** 3, 50_003]) {
      const bytes = scanBytes(voxels, width);
      const packed = await pack(bytes, config);
      expect(Buffer.compare(unpackBlosc(packed, bytes.length), bytes)).toBe(0);
    }
  });

  test("that says more than is expected is refused before anything is allocated", async () => {
    const packed = await pack(scanBytes(5000, 2), {});
    expect(() => unpackBlosc(packed, 9999)).toThrow(BloscFault);
    const vast = packed.slice();
    new DataView(vast.buffer, vast.byteOffset).setUint32(4, 0xffff_fff0, true);
    expect(() => unpackBlosc(vast, 10_000)).toThrow(/at most 10000 expected/);
  });

  test("of another codec or with bits shuffled is refused", async () => {
    const bytes = scanBytes(5000, 2);
    for (const config of [{ cname: "zstd" }, { cname: "zlib" }, { cname: "blosclz" }, { shuffle: 2 }]) {
      const packed = await pack(bytes, config);
      expect(() => unpackBlosc(packed, bytes.length), JSON.stringify(config)).toThrow(/another codec/);
    }
  });

  test("cut short or changed anywhere gives bytes of the right number or a fault", async () => {
    const random = seeded(2);
    const whole = [
      await pack(scanBytes(3000, 2), {}),
      await pack(scanBytes(3000, 2), { blocksize: 1024 }),
      await pack(scanBytes(3000, 4), { shuffle: 0 }),
    ];
    for (let round = 0; round < 6000; round++) {
      const frame = whole[round % 3]!.slice();
      const cut = random() < 0.3 ? frame.subarray(0, Math.floor(random() * frame.length)) : frame;
      for (let k = 0; k < 2 && cut.length > 0; k++) {
        const at = random() < 0.4 ? Math.floor(random() * Math.min(40, cut.length)) : Math.floor(random() * cut.length);
        cut[at] = Math.floor(random() * 256);
      }
      try {
        expect(unpackBlosc(cut, 12_000).length).toBeLessThanOrEqual(12_000);
      } catch (error) {
        expect(error).toBeInstanceOf(BloscFault);
      }
    }
  });
});
