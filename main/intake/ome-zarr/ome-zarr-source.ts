import { basename, join } from "node:path";
import * as zarr from "zarrita";
import { FolderStore, firstFile, folderFacts } from "#main/intake/ome-zarr/folder-store.ts";
import { stopIfAborted } from "#main/intake/read-file.ts";
import type { PlaneRun, ScanChoice, SliceSource } from "#main/intake/slice-source.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { parseOmeZarr, scanOfOmeZarr } from "#shared/volume/ome-zarr-header.ts";
import { withOwnFrame } from "#shared/volume/own-frame.ts";
import { type SourceArray, viewAs } from "#shared/volume/source-array.ts";
import { STORE_NAME } from "#shared/volume/store/layout.ts";

type ZarrArray = zarr.Array<zarr.DataType, FolderStore>;

/** The Zarr folder that a folder is, or holds as a specimen of a library; null for any other folder. */
export async function zarrFolderOf(path: string): Promise<string | null> {
  if (await firstFile(path, ["zarr.json", ".zattrs", ".zgroup"])) return path;
  const specimen = await firstFile(path, ["specimen.json"]);
  const inner = join(path, STORE_NAME);
  return specimen && (await firstFile(inner, ["zarr.json"])) ? inner : null;
}

/** Bytes of decoded voxels held at once besides one chunk. */
const RUN_BYTES = 256 * 1024 * 1024;
const MOST_CHUNK_BYTES = 512 * 1024 * 1024;

/**
 * A slice source over the finest level of an OME-Zarr image (0.4 on Zarr v2, 0.5 on Zarr v3).
 * @throws unreadable-input when the metadata cannot be read, or has not one grey value per voxel.
 */
export async function openOmeZarr(folder: string, choice: ScanChoice): Promise<SliceSource> {
  const name = basename(folder);
  const store = new FolderStore(folder);
  const attributes = await readable(name, "the group's metadata", async () => (await zarr.open(store, { kind: "group" })).attrs);
  const image = parseOmeZarr(attributes, name);
  const array = await readable(name, `the array '${image.path}'`, () =>
    (image.version === "0.5" ? zarr.open.v3 : zarr.open.v2)(zarr.root(store).resolve(image.path), { kind: "array" }),
  );
  const dtype = array.dtype as SourceDtype;
  if (!Object.hasOwn(BYTES_OF_DTYPE, dtype)) throw unreadable(name, "an integer or float type", String(array.dtype), image.path);
  // The library takes sides from the metadata as they are.
  const [shape, chunks]: unknown[] = [array.shape, array.chunks];
  if (!isSides(shape) || !isSides(chunks) || chunks.length !== shape.length)
    throw unreadable(name, "an array and chunks with positive whole sides", "others", image.path);
  const scan = scanOfOmeZarr(image, array.shape, dtype, choice, name);
  const chunkVoxels = array.chunks.reduce((product, side) => product * side, 1);
  if (chunkVoxels * BYTES_OF_DTYPE[dtype] > MOST_CHUNK_BYTES)
    throw unreadable(name, `chunks of at most ${MOST_CHUNK_BYTES} bytes`, array.chunks.join(" x "), image.path);
  const [nx, ny] = scan.header.size;
  if (nx * ny * BYTES_OF_DTYPE[dtype] > 1024 ** 3)
    throw unreadable(name, "slices of at most 1073741824 bytes", `${nx} x ${ny} voxels`, image.path);
  // A whole compressed chunk is hardly larger than its voxels; anything far above is no chunk.
  store.mostBytes = Math.max(store.mostBytes, chunkVoxels * BYTES_OF_DTYPE[dtype] * 1.1 + 65536);
  const levelFolder = join(folder, image.path);
  const { bytes } = await folderFacts(levelFolder);
  return {
    name,
    path: folder,
    header: withOwnFrame(scan.header, attributes),
    bytes,
    seekable: true,
    bytesRead: () => store.bytesRead,
    readPlanes: (z0, z1, signal) => readPlanes(array, scan.selection, dtype, name, z0, z1, signal),
    fingerprint: async () => (await folderFacts(levelFolder)).print,
    close: async () => {},
  };
}

function isSides(value: unknown): value is number[] {
  return Array.isArray(value) && value.every((side) => Number.isSafeInteger(side) && side > 0);
}

async function* readPlanes(
  array: ZarrArray,
  selection: readonly ("space" | number)[],
  dtype: SourceDtype,
  name: string,
  z0: number,
  z1: number,
  signal: AbortSignal | undefined,
): AsyncGenerator<PlaneRun, void, void> {
  const space = selection.flatMap((kind, k) => (kind === "space" ? [k] : [])) as [number, number, number];
  const [za, ya, xa] = space;
  const [ny, nx] = [array.shape[ya]!, array.shape[xa]!];
  const planeBytes = nx * ny * BYTES_OF_DTYPE[dtype];
  const depth = array.chunks[za]!;
  const most = Math.max(1, Math.min(depth, Math.floor(RUN_BYTES / planeBytes)));
  const buffer = new ArrayBuffer(Math.min(most, Math.max(0, z1 - z0)) * planeBytes);
  for (let z = z0; z < z1; ) {
    const count = Math.min(most, z1 - z, depth - (z % depth));
    const run = viewAs(dtype, buffer, 0, count * ny * nx);
    const coords = selection.map((kind, k) => (kind === "space" ? 0 : Math.floor(kind / array.chunks[k]!)));
    coords[za] = Math.floor(z / depth);
    for (let cy = 0; cy * array.chunks[ya]! < ny; cy++)
      for (let cx = 0; cx * array.chunks[xa]! < nx; cx++) {
        stopIfAborted(signal, "reading the scan");
        coords[ya] = cy;
        coords[xa] = cx;
        const chunk = await chunkAt(array, coords, dtype, name);
        const fixed = selection.reduce<number>(
          (sum, kind, k) => (kind === "space" ? sum : sum + (kind % array.chunks[k]!) * chunk.stride[k]!),
          (z % depth) * chunk.stride[za]!,
        );
        const y0 = cy * array.chunks[ya]!;
        const x0 = cx * array.chunks[xa]!;
        copyBox(
          chunk.data,
          fixed,
          [chunk.stride[za]!, chunk.stride[ya]!, chunk.stride[xa]!],
          run,
          y0 * nx + x0,
          [ny * nx, nx],
          [count, Math.min(array.chunks[ya]!, ny - y0), Math.min(array.chunks[xa]!, nx - x0)],
        );
      }
    yield { z, count, data: run };
    z += count;
  }
}

async function chunkAt(array: ZarrArray, coords: number[], dtype: SourceDtype, name: string) {
  const where = `${array.path} chunk ${coords.join(",")}`;
  const chunk = await readable(name, where, () => array.getChunk([...coords]));
  const voxels = array.chunks.reduce((product, side) => product * side, 1);
  const data = chunk.data as SourceArray;
  if (data.length < voxels || data.BYTES_PER_ELEMENT !== BYTES_OF_DTYPE[dtype])
    throw unreadable(name, `${voxels} voxels`, `${data.length}`, where, "The scan was cut short; copy it again.");
  return { data, stride: chunk.stride };
}

/** Copies [nz, ny, nx] voxels between strided places; `from` strides are z, y, x, `to` strides are z, y (x is 1). */
function copyBox(
  source: SourceArray,
  sourceAt: number,
  from: readonly [number, number, number],
  target: SourceArray,
  targetAt: number,
  to: readonly [number, number],
  box: readonly [number, number, number],
): void {
  for (let z = 0; z < box[0]; z++)
    for (let y = 0; y < box[1]; y++) {
      const a = sourceAt + z * from[0] + y * from[1];
      const b = targetAt + z * to[0] + y * to[1];
      if (from[2] === 1) (target as Float64Array).set((source as Float64Array).subarray(a, a + box[2]), b);
      else for (let x = 0; x < box[2]; x++) target[b + x] = source[a + x * from[2]]!;
    }
}

/** Runs a reading of the Zarr library; its failures, which come in many kinds, become one sentence. */
async function readable<T>(name: string, what: string, act: () => Promise<T>): Promise<T> {
  try {
    return await act();
  } catch (error) {
    if (error instanceof TautlineError) throw error;
    const text = error instanceof Error ? error.message : String(error);
    throw unreadable(name, `${what} to be readable Zarr`, text.split("\n")[0]!.slice(0, 120));
  }
}
