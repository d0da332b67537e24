import { readFileSync } from "node:fs";
import { basename, join } from "node:path";
import { BrickCache, createCacheMemory } from "#main/engine/brick-cache.ts";
import { type CachedPyramid, cachedPyramid } from "#main/engine/cached-pyramid.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { unreadable } from "#shared/errors.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";

const DEFAULT_BYTES = 256 * 2 ** 20;
const FORMAT = "tautline-specimen";

/** A specimen's voxels, read in this thread through a cache of its own; for the command line. Close it when done. */
export interface StorePyramid extends CachedPyramid {
  readonly record: SpecimenRecord;
}

/**
 * Opens a specimen's folder (the one that holds `specimen.json`).
 * @param cacheBytes most memory for bricks.
 * @throws unreadable-input when the folder holds no specimen of this version.
 */
export function openStorePyramid(folder: string, cacheBytes = DEFAULT_BYTES): StorePyramid {
  const record = readRecord(folder);
  const cache = new BrickCache(createCacheMemory(cacheBytes, 1, false), 0);
  return Object.assign(cachedPyramid(cache, folder, record.volume, 1), { record });
}

function readRecord(folder: string): SpecimenRecord {
  const file = join(folder, "specimen.json");
  let value: unknown;
  try {
    value = JSON.parse(readFileSync(file, "utf8"));
  } catch (error) {
    throw unreadable(file, "a specimen's record", (error as Error).message);
  }
  const record = (value ?? {}) as Partial<SpecimenRecord>;
  if (record.format !== FORMAT || record.version !== 1) {
    throw unreadable(file, `format ${FORMAT}, version 1`, `format ${record.format}, version ${record.version}`);
  }
  const { size, spacing, origin, direction, dtype } = record.volume ?? {};
  const whole = size?.length === 3 && size.every((side) => Number.isInteger(side) && side > 0);
  const placed = [...(spacing ?? []), ...(origin ?? []), ...(direction ?? [])];
  if (!whole || placed.length !== 15 || !placed.every(Number.isFinite) || !dtype || !Object.hasOwn(BYTES_OF_DTYPE, dtype)) {
    throw unreadable(file, "a volume with dtype, size, spacing, origin and direction", "something else", basename(folder));
  }
  return record as SpecimenRecord;
}
