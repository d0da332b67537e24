import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import type { StoredArray, StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { pyramidLevels } from "#shared/volume/pyramid.ts";

// A writer of stores that shares no code with the program's: the layout written down once more from the Zarr v3 sharding
// codec (shards of 64 x 512 x 512, inner chunks of 32^3, raw little-endian, index at the end with crc32c).

/** CRC-32C bit by bit. Source: RFC 3720, Castagnoli polynomial, reflected. */
function crc32c(bytes: Uint8Array): number {
  let crc = ~0;
  for (const byte of bytes) {
    crc ^= byte;
    for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ 0x82f63b78 : crc >>> 1;
  }
  return ~crc >>> 0;
}

function writeLevel(folder: string, voxels: StoredArray, [nx, ny, nz]: readonly [number, number, number]): void {
  const width = voxels.BYTES_PER_ELEMENT;
  for (let sz = 0; sz * 64 < nz; sz++)
    for (let sy = 0; sy * 512 < ny; sy++)
      for (let sx = 0; sx * 512 < nx; sx++) {
        const chunks: Uint8Array[] = [];
        const index = new DataView(new ArrayBuffer(512 * 16 + 4));
        let offset = 0;
        for (let n = 0; n < 512; n++) {
          const cz = sz * 64 + (n >> 8) * 32;
          const cy = sy * 512 + ((n >> 4) & 15) * 32;
          const cx = sx * 512 + (n & 15) * 32;
          if (cz >= nz || cy >= ny || cx >= nx) {
            index.setBigUint64(n * 16, 2n ** 64n - 1n, true);
            index.setBigUint64(n * 16 + 8, 2n ** 64n - 1n, true);
            continue;
          }
          const chunk = new (voxels.constructor as Uint16ArrayConstructor)(32 ** 3);
          for (let z = 0; z < 32 && cz + z < nz; z++)
            for (let y = 0; y < 32 && cy + y < ny; y++)
              for (let x = 0; x < 32 && cx + x < nx; x++) {
                chunk[(z * 32 + y) * 32 + x] = voxels[((cz + z) * ny + cy + y) * nx + cx + x]!;
              }
          index.setBigUint64(n * 16, BigInt(offset), true);
          index.setBigUint64(n * 16 + 8, BigInt(32 ** 3 * width), true);
          chunks.push(new Uint8Array(chunk.buffer));
          offset += 32 ** 3 * width;
        }
        index.setUint32(512 * 16, crc32c(new Uint8Array(index.buffer, 0, 512 * 16)), true);
        const file = join(folder, "c", String(sz), String(sy), String(sx));
        mkdirSync(dirname(file), { recursive: true });
        writeFileSync(file, Buffer.concat([...chunks, new Uint8Array(index.buffer)]));
      }
}

export interface TestSpecimen {
  readonly folder: string;
  readonly record: SpecimenRecord;
}

/** Writes a specimen's folder under `parent`: the store with its pyramid and `specimen.json`. */
export function writeSpecimen(parent: string, id: string, grid: VolumeGrid, voxels: StoredArray): TestSpecimen {
  const pyramid = memoryPyramid(grid, voxels);
  const folder = join(parent, id);
  pyramid.levels.forEach((level, n) => {
    writeLevel(join(folder, "scan.ome.zarr", String(n)), pyramid.arrays[n]!, level.size);
  });
  let min = Number.POSITIVE_INFINITY;
  let max = Number.NEGATIVE_INFINITY;
  for (const value of voxels) {
    min = Math.min(min, value);
    max = Math.max(max, value);
  }
  return { folder, record: writeRecord(folder, id, grid, pyramid.dtype, { min, max }) };
}

function writeRecord(
  folder: string,
  id: string,
  grid: VolumeGrid,
  dtype: StoredDtype,
  range: { min: number; max: number },
): SpecimenRecord {
  const record: SpecimenRecord = {
    format: "tautline-specimen",
    version: 1,
    id,
    name: "HB-07",
    created: 0,
    synthetic: true,
    source: { name: "made by a test", family: "generated", bytes: 0, dtype },
    volume: { ...grid, sha256: "00", dtype, handedness: "unknown", blurFwhmMm: null, range },
    conversions: [],
    polarity: "bright",
    display: { low: range.min, high: range.max },
    facts: {},
    landmarks: {} as SpecimenRecord["landmarks"],
  };
  writeFileSync(join(folder, "specimen.json"), JSON.stringify(record));
  return record;
}

/**
 * Writes a specimen far larger than its files: every chunk of a shard is the same bytes in the file, which the index may say
 * (the sharding codec does not forbid that chunks share bytes). For tests of memory, not of values.
 */
export function writeVastSpecimen(parent: string, id: string, grid: VolumeGrid): TestSpecimen {
  const folder = join(parent, id);
  const chunk = new Uint16Array(32 ** 3);
  for (let n = 0; n < chunk.length; n++) chunk[n] = n % 1000;
  const index = new DataView(new ArrayBuffer(512 * 16 + 4));
  for (let n = 0; n < 512; n++) index.setBigUint64(n * 16 + 8, BigInt(chunk.byteLength), true);
  index.setUint32(512 * 16, crc32c(new Uint8Array(index.buffer, 0, 512 * 16)), true);
  const shard = Buffer.concat([new Uint8Array(chunk.buffer), new Uint8Array(index.buffer)]);
  for (const { level, size } of pyramidLevels(grid))
    for (let z = 0; z * 64 < size[2]; z++)
      for (let y = 0; y * 512 < size[1]; y++)
        for (let x = 0; x * 512 < size[0]; x++) {
          const file = join(folder, "scan.ome.zarr", String(level), "c", String(z), String(y), String(x));
          mkdirSync(dirname(file), { recursive: true });
          writeFileSync(file, shard);
        }
  return { folder, record: writeRecord(folder, id, grid, "uint16", { min: 0, max: 999 }) };
}

/** A folder that is gone after the test. */
export function scratchFolder(): { path: string; remove(): void } {
  const path = mkdtempSync(join(tmpdir(), "engine-test-"));
  return { path, remove: () => rmSync(path, { recursive: true, force: true }) };
}

/** Numbers in [0, 1), the same for the same seed. Source: mulberry32 (public domain). */
export function seeded(seed: number): () => number {
  let a = seed | 0;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), a | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}
