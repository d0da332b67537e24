import { createHash } from "node:crypto";
import type { CrashPoint } from "#main/intake/crash-points.ts";
import { stopIfAborted } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { gatherBuffers, LevelWriter } from "#main/intake/store/level-writer.ts";
import type { StoreSink } from "#main/intake/store/shard-writer.ts";
import type { WriteFiles } from "#main/intake/store/write-files.ts";
import { roundMm } from "#shared/geometry/types.ts";
import { EdgeBlurSurvey } from "#shared/volume/blur/edge-blur.ts";
import { BYTES_OF_DTYPE, createStored, type StoredArray, type StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { type PyramidLevel, pyramidLevels } from "#shared/volume/pyramid.ts";
import { RegionKeeper } from "#shared/volume/region/keep-region.ts";
import { type Derivation, derivedTwice, type Region } from "#shared/volume/region/region.ts";
import { CHUNK_SIDE, levelFolder } from "#shared/volume/store/layout.ts";
import { arrayMetadata, groupMetadata } from "#shared/volume/store/store-metadata.ts";
import { convertInto } from "#shared/volume/stored-type.ts";
import { displayWindow, suggestPolarity, ValueSurvey } from "#shared/volume/value-survey.ts";

export interface StoreOrder {
  readonly source: SliceSource;
  /** Of what is stored: the source's own grid, or the region's. */
  readonly grid: VolumeGrid;
  /** What of the source is stored, counted in the order of slices in which it is stored; absent: all of it. */
  readonly region?: Region;
  readonly dtype: StoredDtype;
  /** True: the last slice of the source becomes the first. The source must be seekable. */
  readonly mirror: boolean;
  readonly name: string;
  /** Folder to make; its parent exists. */
  readonly folder: string;
  /** Slices held at once, see {@link slabPlanesFor}. */
  readonly slabPlanes: number;
  /** Estimate the scan's blur on the way. */
  readonly estimateBlur: boolean;
  /** Absent: plain. */
  readonly packing?: "plain" | "gzip";
  /** The finest level is left out: it is read where the scan lies. */
  readonly isInPlace?: boolean;
  readonly files: WriteFiles;
  readonly signal?: AbortSignal;
  at(point: CrashPoint): void | Promise<void>;
  /** After each slice: slices done so far. */
  onSlices(done: number): void;
}

export interface StoreResult {
  /** SHA-256 (hex) of the stored level 0: C order z, y, x, little-endian. */
  readonly sha256: string;
  /** The whole scan that this is a part of; null when it is whole. */
  readonly derivedFrom: Derivation | null;
  readonly range: { readonly min: number; readonly max: number };
  readonly display: { readonly low: number; readonly high: number };
  readonly suggestedPolarity: "bright" | "dark";
  /** Full width at half maximum, millimetres; null when not asked for or the edges do not tell. */
  readonly blurFwhmMm: number | null;
  readonly bytesWritten: number;
  /** Bytes of the store's shards. */
  readonly storeBytes: number;
}

/** Slices of level 0 held at once are kept below this; thinner slabs mean more, smaller writes. */
const SLAB_BYTES = 256 * 1024 * 1024;

/** Slices held at once: a divisor of 32, at least 2 so that a coarser slice always has both its parents. */
export function slabPlanesFor(planeBytes: number): number {
  let planes = CHUNK_SIDE;
  while (planes > 2 && planes * planeBytes > SLAB_BYTES) planes /= 2;
  return planes;
}

/** Writes the whole store of a scan in one pass over its slices; every file is synced. Nothing is removed on failure. */
export async function writeStore(order: StoreOrder): Promise<StoreResult> {
  const { files, folder, grid, dtype } = order;
  let bytesWritten = 0;
  const folders = new Set<string>([folder]);
  const count = (bytes: number) => {
    bytesWritten += bytes;
  };
  let storeBytes = 0;
  const keep = (bytes: number) => {
    storeBytes += bytes;
  };
  const packing = order.packing ?? "plain";
  const firstLevel = order.isInPlace ? 1 : 0;
  const sink: StoreSink = { files, folder, dtype, packing, firstLevel, folders, at: order.at, count, keep };
  await files.makeFolder(folder);
  const levels = pyramidLevels(grid);
  const writer = new LevelWriter(sink, levels, 0, order.slabPlanes, gatherBuffers(dtype));
  const survey = new ValueSurvey(grid.size[0] * grid.size[1] * grid.size[2]);
  const edges = order.estimateBlur ? new EdgeBlurSurvey(grid.size, grid.spacing) : null;
  const hash = createHash("sha256");
  // Of a region the whole scan is hashed as well, so that trees find their way between the two.
  const whole = order.region ? createHash("sha256") : null;
  const [width, height] = order.source.header.size;
  const slice = order.region ? createStored(dtype, width * height) : null;
  const keeper = order.region ? new RegionKeeper(width, order.region, dtype) : null;
  try {
    let done = 0;
    let kept = 0;
    for await (const { plane } of slicesInOrder(order)) {
      stopIfAborted(order.signal, "taking in the scan");
      const out = writer.nextPlane;
      convertInto(plane, slice ?? out);
      if (slice) whole?.update(bytesIn(slice));
      if (!slice || keeper?.take(done, slice, out)) {
        survey.add(out);
        edges?.add(kept++, out);
        hash.update(bytesIn(out));
        await writer.planeReady();
      }
      order.onSlices(++done);
    }
    await writer.finish();
  } catch (error) {
    await writer.abandon();
    throw error;
  }
  await order.at("levels-written");
  const sha256 = hash.digest("hex");
  const derivedFrom = derivationOf(order, whole?.digest("hex") ?? null);
  await writeMetadata(order, levels.slice(firstLevel), packing, sha256, derivedFrom);
  await order.at("metadata-written");
  for (const made of folders) await files.syncFolder(made);
  const facts = survey.facts();
  const sample = survey.sortedSample();
  const blur = edges?.estimate() ?? null;
  return {
    sha256,
    derivedFrom,
    range: { min: facts.min, max: facts.max },
    display: displayWindow(sample),
    suggestedPolarity: suggestPolarity(sample),
    blurFwhmMm: blur === null ? null : roundMm(blur),
    bytesWritten,
    storeBytes,
  };
}

function bytesIn(array: StoredArray): Uint8Array {
  return new Uint8Array(array.buffer, array.byteOffset, array.byteLength);
}

/** A part of a part counts in the same whole; mirrored, or with voxels of another size, it lies elsewhere. */
function derivationOf({ source, grid, region, mirror }: StoreOrder, wholeSha256: string | null): Derivation | null {
  const { headerSpacing, derivedFrom } = source.header;
  const bin = region?.bin ?? 1;
  const staysInPlace = !mirror && headerSpacing?.every((side, k) => Math.abs((side * bin) / grid.spacing[k]! - 1) < 1e-6);
  const before = staysInPlace ? derivedFrom : undefined;
  if (!region || wholeSha256 === null) return before ?? null;
  return (before && derivedTwice(before, region)) ?? { sha256: wholeSha256, crop: region.crop, bin: region.bin };
}

async function writeMetadata(
  order: StoreOrder,
  levels: readonly PyramidLevel[],
  packing: "plain" | "gzip",
  sha256: string,
  derivedFrom: Derivation | null,
): Promise<void> {
  if (levels.length === 0) return; // a small scan in place: all of it lies there
  for (const level of levels) {
    const text = JSON.stringify(arrayMetadata(level, order.dtype, packing), null, 2);
    await writeWhole(order.files, `${order.folder}/${levelFolder(level.level)}/zarr.json`, text);
  }
  const group = groupMetadata(order.name, order.grid, levels, sha256, derivedFrom);
  await writeWhole(order.files, `${order.folder}/zarr.json`, JSON.stringify(group, null, 2));
}

/** Writes a small new file and syncs it. */
export async function writeWhole(files: WriteFiles, path: string, text: string): Promise<void> {
  const handle = await files.create(path);
  try {
    await handle.write(new TextEncoder().encode(`${text}\n`), 0);
    await handle.sync();
  } finally {
    await handle.close();
  }
}

/** Slices one by one as they will be stored: forwards, or backwards in runs where the order is reversed. */
async function* slicesInOrder(order: StoreOrder): AsyncGenerator<{ plane: Parameters<typeof convertInto>[0] }> {
  const { source, mirror, signal } = order;
  const [nx, ny, nz] = source.header.size;
  const voxels = nx * ny;
  if (!mirror) {
    for await (const run of source.readPlanes(0, nz, signal))
      for (let k = 0; k < run.count; k++) yield { plane: run.data.subarray(k * voxels, (k + 1) * voxels) };
    return;
  }
  const step = Math.max(1, Math.floor((8 * 1024 * 1024) / (voxels * BYTES_OF_DTYPE[source.header.dtype])));
  for (let end = nz; end > 0; end -= step) {
    // Runs of one call are valid one at a time, so slices of a block are kept until the block can be given backwards.
    const block: Parameters<typeof convertInto>[0][] = [];
    for await (const run of source.readPlanes(Math.max(0, end - step), end, signal))
      for (let k = 0; k < run.count; k++) block.push(run.data.slice(k * voxels, (k + 1) * voxels));
    while (block.length > 0) yield { plane: block.pop()! };
  }
}
