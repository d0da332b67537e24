// Scan files put together byte by byte from the formats' own descriptions; nothing here is shared with the readers.
import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { afterAll } from "vitest";

const folders: string[] = [];
afterAll(async () => {
  for (const folder of folders.splice(0)) await rm(folder, { recursive: true, force: true });
});

/** A fresh folder that is removed after the file's tests. */
export async function scratchFolder(): Promise<string> {
  const folder = await mkdtemp(join(tmpdir(), "tautline-intake-"));
  folders.push(folder);
  return folder;
}

/** Small seeded generator (mulberry32). */
export function seeded(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

const WIDTH: Record<string, number> = {
  uint8: 1,
  int8: 1,
  uint16: 2,
  int16: 2,
  uint32: 4,
  int32: 4,
  uint64: 8,
  int64: 8,
  float32: 4,
  float64: 8,
};

/** Values as bytes of a type and byte order, one by one through a DataView. */
export function bytesOf(values: readonly number[], dtype: string, little: boolean): Uint8Array {
  const width = WIDTH[dtype]!;
  const bytes = new Uint8Array(values.length * width);
  const view = new DataView(bytes.buffer);
  values.forEach((v, k) => {
    const at = k * width;
    if (dtype === "uint8") view.setUint8(at, v);
    else if (dtype === "int8") view.setInt8(at, v);
    else if (dtype === "uint16") view.setUint16(at, v, little);
    else if (dtype === "int16") view.setInt16(at, v, little);
    else if (dtype === "uint32") view.setUint32(at, v, little);
    else if (dtype === "int32") view.setInt32(at, v, little);
    else if (dtype === "uint64") view.setBigUint64(at, BigInt(v), little);
    else if (dtype === "int64") view.setBigInt64(at, BigInt(v), little);
    else if (dtype === "float32") view.setFloat32(at, v, little);
    else view.setFloat64(at, v, little);
  });
  return bytes;
}

export interface HandNrrd {
  readonly sizes: readonly number[];
  readonly type: string;
  readonly values: readonly number[];
  readonly dtype: string;
  readonly little?: boolean;
  readonly gzip?: boolean;
  /** Lines besides type, dimension, sizes, endian, encoding. */
  readonly lines?: readonly string[];
  readonly newline?: string;
}

const HALF_SPACE = ["space: left-posterior-superior", "space origin: (0,0,0)"];
/** Lines of a header with everything settled: LPS, mm, cubes of 40 um. */
export const SETTLED = [...HALF_SPACE, "space directions: (0.04,0,0) (0,0.04,0) (0,0,0.04)", 'space units: "mm" "mm" "mm"'];

export function nrrdBytes(order: HandNrrd): Buffer {
  const newline = order.newline ?? "\n";
  const data = bytesOf(order.values, order.dtype, order.little ?? true);
  const header = [
    "NRRD0004",
    "# by hand",
    `type: ${order.type}`,
    `dimension: ${order.sizes.length}`,
    `sizes: ${order.sizes.join(" ")}`,
    `endian: ${(order.little ?? true) ? "little" : "big"}`,
    `encoding: ${order.gzip ? "gzip" : "raw"}`,
    ...(order.lines ?? SETTLED),
    "",
    "",
  ].join(newline);
  return Buffer.concat([Buffer.from(header, "utf8"), order.gzip ? gzipSync(data) : data]);
}

export async function writeNrrd(folder: string, name: string, order: HandNrrd): Promise<string> {
  const path = join(folder, name);
  await writeFile(path, nrrdBytes(order));
  return path;
}
