// Bricks out of chunks of any size against a list of voxels cut here; files are kept in memory, and damaged at random.
import { deflateSync, gunzipSync, gzipSync, inflateSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import { isTautlineError } from "#shared/errors.ts";
import { BrickReader } from "#shared/volume/store/brick-reader.ts";
import { type ChunkFile, ChunkFiles, type ChunkSource } from "#shared/volume/store/chunk-files.ts";
import type { ChunkedArray, Packing } from "#shared/volume/store/chunked-array.ts";
import { UnpackedChunks } from "#shared/volume/store/unpacked-chunks.ts";
import { seeded } from "#test/shared/tracing/tube-phantom.ts";

type Zyx = readonly [number, number, number];
const SHAPE: Zyx = [45, 50, 70];

/** Voxels of uint16 whose values tell their place. */
const valueAt = (z: number, y: number, x: number) => (z * 7919 + y * 104_729 + x * 31) & 0xffff;

/** Chunk files of the array, by path: chunks alone, or all of an array in one shard whose index comes first or last. */
function written(
  chunk: Zyx,
  packing: Packing,
  shardAt: "start" | "end" | null,
): { array: ChunkedArray; files: Map<string, Uint8Array> } {
  const counts = SHAPE.map((side, k) => Math.ceil(side / chunk[k]!)) as unknown as Zyx;
  const files = new Map<string, Uint8Array>();
  const index = new DataView(new ArrayBuffer(counts[0] * counts[1] * counts[2] * 16));
  const body: Uint8Array[] = [];
  let end = shardAt === "start" ? index.byteLength : 0;
  let n = 0;
  for (let kz = 0; kz < counts[0]; kz++)
    for (let ky = 0; ky < counts[1]; ky++)
      for (let kx = 0; kx < counts[2]; kx++, n++) {
        const bytes = new DataView(new ArrayBuffer(chunk[0] * chunk[1] * chunk[2] * 2));
        let at = 0;
        for (let z = 0; z < chunk[0]; z++)
          for (let y = 0; y < chunk[1]; y++)
            for (let x = 0; x < chunk[2]; x++, at += 2) {
              const [vz, vy, vx] = [kz * chunk[0] + z, ky * chunk[1] + y, kx * chunk[2] + x];
              if (vz < SHAPE[0] && vy < SHAPE[1] && vx < SHAPE[2]) bytes.setUint16(at, valueAt(vz, vy, vx), true);
            }
        const plain = new Uint8Array(bytes.buffer);
        const stored = packing === "plain" ? plain : packing === "gzip" ? gzipSync(plain) : deflateSync(plain);
        if (shardAt === null) files.set(`${kz}/${ky}/${kx}`, stored);
        index.setBigUint64(n * 16, BigInt(end), true);
        index.setBigUint64(n * 16 + 8, BigInt(stored.length), true);
        body.push(stored);
        end += stored.length;
      }
  const indexBytes = new Uint8Array(index.buffer);
  if (shardAt !== null) files.set("0/0/0", Buffer.concat(shardAt === "start" ? [indexBytes, ...body] : [...body, indexBytes]));
  const array: ChunkedArray = {
    dtype: "uint16",
    shape: SHAPE,
    chunk,
    packing,
    shard: shardAt === null ? null : { chunks: counts, indexAt: shardAt, isChecked: false },
    fill: 7,
    path: (z, y, x) => `${z}/${y}/${x}`,
  };
  return { array, files };
}

function sourceOf(files: Map<string, Uint8Array>, opened: string[] = []): ChunkSource {
  return {
    advice: "Mend it.",
    open(path): ChunkFile | null {
      const bytes = files.get(path);
      if (!bytes) return null;
      opened.push(path);
      return {
        name: path,
        bytes: bytes.length,
        readInto(into, at) {
          if (at < 0 || at + into.length > bytes.length) throw new RangeError(`${into.length} bytes at ${at} of ${bytes.length}`);
          into.set(bytes.subarray(at, at + into.length));
        },
        close: () => opened.push(`closed ${path}`),
      };
    },
    unpack: (packing, bytes, most) =>
      packing === "gzip" ? gunzipSync(bytes, { maxOutputLength: most }) : inflateSync(bytes, { maxOutputLength: most }),
  };
}

/** Every brick of the array, held against the voxels it should have. */
function wrongVoxels(
  reader: BrickReader,
  depth: number,
  missing: (z: number, y: number, x: number) => boolean = () => false,
): number {
  let wrong = 0;
  const brick = new Uint8Array(depth * 32 * 32 * 2);
  const view = new DataView(brick.buffer);
  for (let z0 = 0; z0 < SHAPE[0]; z0 += depth)
    for (let y0 = 0; y0 < SHAPE[1]; y0 += 32)
      for (let x0 = 0; x0 < SHAPE[2]; x0 += 32) {
        reader.readBrick(z0, y0, x0, depth, brick);
        for (let z = z0; z < Math.min(z0 + depth, SHAPE[0]); z++)
          for (let y = y0; y < Math.min(y0 + 32, SHAPE[1]); y++)
            for (let x = x0; x < Math.min(x0 + 32, SHAPE[2]); x++) {
              const value = missing(z, y, x) ? 7 : valueAt(z, y, x);
              if (view.getUint16((((z - z0) * 32 + y - y0) * 32 + x - x0) * 2, true) !== value) wrong++;
            }
      }
  return wrong;
}

const CHUNKS: Zyx[] = [
  [32, 32, 32],
  [16, 32, 32],
  [64, 32, 32],
  [45, 50, 70],
  [8, 9, 100],
  [33, 16, 31],
];

describe("bricks", () => {
  for (const packing of ["plain", "gzip", "zlib"] as const)
    test.each(CHUNKS.map((chunk) => [chunk]))(`come out of ${packing} chunks of %j, single or in a shard`, (chunk) => {
      for (const [shardAt, depth] of [
        [null, 16],
        [null, 32],
        ["start", 32],
        ["end", 16],
      ] as const) {
        const { array, files } = written(chunk, packing, shardAt);
        expect(wrongVoxels(new BrickReader(array, "a", new ChunkFiles(3), sourceOf(files), new UnpackedChunks()), depth)).toBe(0);
      }
    });

  test("are the fill value where chunks are left out", () => {
    const { array, files } = written([16, 25, 35], "gzip", null);
    files.delete("1/0/1");
    const isOut = (z: number, y: number, x: number) => z >= 16 && z < 32 && y < 25 && x >= 35;
    expect(wrongVoxels(new BrickReader(array, "a", new ChunkFiles(3), sourceOf(files), new UnpackedChunks()), 32, isOut)).toBe(0);
    const strict = new BrickReader({ ...array, fill: null }, "a", new ChunkFiles(3), sourceOf(files), new UnpackedChunks());
    expect(() => wrongVoxels(strict, 32)).toThrow(/1\/0\/1.*Mend it/);
  });

  test("keep few files open, and close those that are left", () => {
    const { array, files } = written([8, 50, 70], "plain", null);
    const opened: string[] = [];
    const open = new ChunkFiles(2);
    wrongVoxels(new BrickReader(array, "a", open, sourceOf(files, opened), new UnpackedChunks()), 32);
    expect(opened.filter((entry) => !entry.startsWith("closed")).length).toBe(
      opened.filter((entry) => entry.startsWith("closed")).length + 2,
    );
    open.close();
    expect(opened.filter((entry) => entry.startsWith("closed")).length * 2).toBe(opened.length);
  });

  test("of damaged files are a typed error or voxels, never anything else", () => {
    const random = seeded(8);
    const path = "0/0/0";
    const all = (["plain", "gzip", "zlib"] as const).flatMap((packing) =>
      ([null, "end"] as const).map((shardAt) => {
        const { array, files } = written([45, 50, 70], packing, shardAt);
        return { array, whole: files.get(path)! };
      }),
    );
    for (let round = 0; round < 400; round++) {
      const { array, whole } = all[round % all.length]!;
      const bytes = whole.slice(0, random() < 0.3 ? Math.floor(random() * whole.length) : undefined);
      for (let k = 0; k < 3 && bytes.length > 0; k++) {
        // Half of the changes hit the index, where there is one.
        const at =
          random() < 0.5
            ? bytes.length - 1 - Math.floor(random() * Math.min(16, bytes.length))
            : Math.floor(random() * bytes.length);
        bytes[at] = Math.floor(random() * 256);
      }
      const files = new Map([[path, bytes]]);
      try {
        new BrickReader(array, "a", new ChunkFiles(3), sourceOf(files), new UnpackedChunks()).readBrick(
          0,
          0,
          0,
          32,
          new Uint8Array(65536),
        );
      } catch (error) {
        expect(isTautlineError(error, "unreadable-input")).toBe(true);
      }
    }
  });
});
