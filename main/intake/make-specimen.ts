import { join } from "node:path";
import type { CrashPoint } from "#main/intake/crash-points.ts";
import { badCrop, fullDisk, sourceChanged } from "#main/intake/intake-faults.ts";
import { type IntakeProgress, ProgressMeter } from "#main/intake/progress.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { spooled } from "#main/intake/spool.ts";
import { slabPlanesFor, writeStore, writeWhole } from "#main/intake/store/store-writer.ts";
import { diskFiles, type WriteFiles } from "#main/intake/store/write-files.ts";
import { surveySource } from "#main/intake/survey-source.ts";
import type { Handedness, InPlaceScan, SpecimenFacts, SpecimenRecord } from "#shared/api/specimen.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import type { Landmarks } from "#shared/trees/document.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import {
  faultOfCrop,
  isWholeScan,
  type Region,
  regionGrid,
  regionInMirror,
  regionSentence,
} from "#shared/volume/region/region.ts";
import { gridOf } from "#shared/volume/scan-header.ts";
import { SHARD_ZYX, STORE_NAME } from "#shared/volume/store/layout.ts";
import { storeBytes } from "#shared/volume/store/store-bytes.ts";
import { chooseStoredType, type StoredType, storedTypeOf } from "#shared/volume/stored-type.ts";

export interface SpecimenOptions {
  /** The library's folder; it exists. */
  readonly library: string;
  /** Fresh, 16 to 26 characters of lower-case ASCII. */
  readonly id: string;
  readonly name: string;
  /** UTC milliseconds. */
  readonly created: number;
  /** Millimetres, settled by the header or by a person. */
  readonly spacing: Vec3;
  readonly handedness: Handedness;
  /** The slice order is reversed on the way in: the scan's file showed the specimen mirrored. */
  readonly mirror?: boolean;
  /** What of the scan is kept, in voxels as its file has them (before a mirror); absent: all of it. */
  readonly region?: Region;
  /** The bricks of the store are packed with gzip. */
  readonly isPacked?: boolean;
  /** Where the scan's own store lies, when its finest level is used there instead of being copied. */
  readonly inPlace?: InPlaceScan;
  /** Absent: as the values suggest. */
  readonly polarity?: Polarity;
  readonly facts: SpecimenFacts;
  /** Where they are known (generated data). */
  readonly landmarks?: Landmarks;
  readonly synthetic: boolean;
  /** Width of the scan's blur where it is known (generated data); absent = estimated from the scan's edges; null = left open. */
  readonly blurFwhmMm?: number | null;
  /** Slices held at once (2, 4 ... 32); absent: as many as suit the slices' size. */
  readonly slabPlanes?: number;
}

/** What the surroundings of an intake provide; all may be left out. */
export interface IntakeHooks {
  readonly files?: WriteFiles;
  readonly signal?: AbortSignal;
  /** Monotonic milliseconds. */
  readonly now?: () => number;
  onProgress?(progress: IntakeProgress): void;
  /** Reached at each named moment; tests stop here. */
  at?(point: CrashPoint): void | Promise<void>;
}

export interface SpecimenResult {
  readonly record: SpecimenRecord;
  readonly bytesRead: number;
  readonly bytesWritten: number;
  /** Bytes of the store's files, and what a plain copy would take. */
  readonly storeBytes: number;
  readonly plainBytes: number;
  readonly seconds: number;
}

/** Folder of a library that holds intakes under way; whatever is in it after a restart is debris. */
export const UNFINISHED = "unfinished";

/**
 * Makes a specimen of a scan: store, pyramid, hash and `specimen.json` grow in the library's `unfinished` folder, are synced, and
 * take their place under `specimens` by one rename, so that a half-made specimen never stands there. On failure or cancel
 * everything made is removed. The source is only read; that it did not change meanwhile is checked at the end.
 * @throws disk-full, write-failed, unreadable-input, cancelled.
 */
export async function makeSpecimen(
  given: SliceSource,
  options: SpecimenOptions,
  hooks: IntakeHooks = {},
): Promise<SpecimenResult> {
  const files = hooks.files ?? diskFiles;
  const now = hooks.now ?? (() => performance.now());
  const at = async (point: CrashPoint) => hooks.at?.(point);
  const began = now();
  const { library, id } = options;
  const work = join(library, UNFINISHED, id);
  const { header } = given;
  const before = await given.fingerprint();
  const meter = new ProgressMeter(given, now, hooks.onProgress, storedTypeOf(header.dtype) === null);
  const region = settledRegion(given, options);
  const whole = gridOf(header, options.spacing);
  const grid = region ? regionGrid(whole, region) : whole;
  const mustSpool = options.mirror === true && !given.seekable;
  let source = given;
  await refuseFullDisk(files, header, grid, options, mustSpool);
  try {
    await files.makeFolder(join(library, UNFINISHED));
    await files.makeFolder(work);
    await at("folder-made");
    if (mustSpool) source = await spooled(given, join(work, "unpacked.raw"), files, hooks.signal);
    const stored = await settleType(source, meter, hooks.signal);
    meter.begin("Taking in the scan");
    const planeBytes = grid.size[0] * grid.size[1] * BYTES_OF_DTYPE[stored.dtype];
    const made = await writeStore({
      source,
      grid,
      ...(region ? { region } : {}),
      dtype: stored.dtype,
      mirror: options.mirror === true,
      name: options.name,
      folder: join(work, STORE_NAME),
      estimateBlur: options.blurFwhmMm === undefined,
      slabPlanes: options.slabPlanes ?? slabPlanesFor(planeBytes),
      packing: options.isPacked ? "gzip" : "plain",
      isInPlace: options.inPlace !== undefined,
      files,
      ...(hooks.signal ? { signal: hooks.signal } : {}),
      at,
      onSlices: (done) => meter.slices(done),
    });
    if ((await given.fingerprint()) !== before) throw sourceChanged(given.name);
    if (mustSpool) await files.remove(join(work, "unpacked.raw"));
    const record: SpecimenRecord = {
      format: "tautline-specimen",
      version: 1,
      id,
      name: options.name,
      created: options.created,
      synthetic: options.synthetic,
      source: { name: given.name, family: header.family, bytes: given.bytes, dtype: header.dtype },
      volume: {
        sha256: made.sha256,
        dtype: stored.dtype,
        ...grid,
        handedness: options.handedness,
        blurFwhmMm: options.blurFwhmMm === undefined ? made.blurFwhmMm : options.blurFwhmMm,
        range: made.range,
        ...(made.derivedFrom ? { derivedFrom: made.derivedFrom } : {}),
        ...(options.isPacked ? { packing: "gzip" } : {}),
        ...(options.inPlace ? { inPlace: options.inPlace } : {}),
      },
      conversions: conversionsOf(header.notes, stored, options, region),
      polarity: options.polarity ?? made.suggestedPolarity,
      display: made.display,
      facts: options.facts,
      landmarks: options.landmarks ?? {},
    };
    await writeWhole(files, join(work, "specimen.json"), JSON.stringify(record, null, 2));
    await at("record-written");
    for (const folder of [work, join(library, UNFINISHED)]) await files.syncFolder(folder);
    await at("folders-synced");
    await files.makeFolder(join(library, "specimens"));
    await files.rename(work, join(library, "specimens", id));
    await at("renamed");
    for (const folder of [join(library, "specimens"), join(library, UNFINISHED), library]) await files.syncFolder(folder);
    await at("name-synced");
    return {
      record,
      bytesRead: given.bytesRead(),
      bytesWritten: made.bytesWritten,
      storeBytes: made.storeBytes,
      plainBytes: storeBytes(grid, stored.dtype),
      seconds: (now() - began) / 1000,
    };
  } catch (error) {
    await files.remove(work).catch(() => {}); // the first error is the one to show; debris goes at the next start
    throw error;
  } finally {
    if (source !== given) await source.close();
  }
}

/**
 * The region counted in the scan as it will be stored; null when all of it is kept.
 * @throws misuse when the box does not lie in the scan.
 */
function settledRegion(source: SliceSource, options: SpecimenOptions): Region | null {
  const { region } = options;
  if (region === undefined) return null;
  const { size } = source.header;
  const fault = faultOfCrop(size, region.crop);
  if (fault) throw badCrop(source.name, size, fault);
  if (isWholeScan(size, region)) return null;
  return options.mirror === true ? regionInMirror(region, size[2]) : region;
}

/** Removes what interrupted intakes left. Call it once after the library's lease was taken, before any intake. */
export async function removeUnfinished(library: string, files: WriteFiles = diskFiles): Promise<void> {
  await files.remove(join(library, UNFINISHED));
}

async function settleType(source: SliceSource, meter: ProgressMeter, signal?: AbortSignal): Promise<StoredType> {
  const known = storedTypeOf(source.header.dtype);
  if (known) return known;
  meter.begin("Looking at every value");
  const survey = await surveySource(source, { signal, onSlices: (done) => meter.slices(done) });
  return chooseStoredType(source.header.dtype, survey.facts(), source.name);
}

function conversionsOf(notes: readonly string[], stored: StoredType, options: SpecimenOptions, region: Region | null): string[] {
  const sentences = [...notes];
  if (stored.sentence) sentences.push(stored.sentence);
  if (options.mirror)
    sentences.push("The order of slices was reversed on the way in, because the file showed the specimen mirrored.");
  if (region) sentences.push(regionSentence(region));
  if (options.isPacked) sentences.push("The bricks of the store are packed with gzip.");
  if (options.inPlace)
    sentences.push(
      "The finest level is read where the scan lies; only the coarser levels were written. The scan has to stay there unchanged.",
    );
  return sentences;
}

/** Room for what the file system itself needs besides. */
const MARGIN_BYTES = 64 * 1024 * 1024;

async function refuseFullDisk(
  files: WriteFiles,
  header: SliceSource["header"],
  grid: ReturnType<typeof gridOf>,
  options: SpecimenOptions,
  mustSpool: boolean,
): Promise<void> {
  const voxels = header.size[0] * header.size[1] * header.size[2];
  const widest = storedTypeOf(header.dtype)?.dtype ?? "float32";
  // Packed bricks may come out no smaller, and two layers of shards lie plain beside them for a while.
  const passing = options.isPacked ? 2 * SHARD_ZYX[0] * grid.size[0] * grid.size[1] * BYTES_OF_DTYPE[widest] : 0;
  const needed =
    storeBytes(grid, widest, options.inPlace ? 1 : 0) +
    passing +
    (mustSpool ? voxels * BYTES_OF_DTYPE[header.dtype] : 0) +
    MARGIN_BYTES;
  const free = await files.freeBytes(options.library);
  if (free < needed) throw fullDisk(options.library, needed, free);
}
