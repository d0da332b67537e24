import { basename, dirname, resolve } from "node:path";
import { voxelFilesSource } from "#main/intake/raw/voxel-files.ts";
import { ReadFile } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { isTautlineError, unreadable } from "#shared/errors.ts";
import {
  isRawSidecar,
  parseRawSidecar,
  RAW_FORMAT,
  type RawScan,
  type RawSidecar,
  rawHeader,
} from "#shared/volume/raw/raw-layout.ts";

const MOST_SIDECAR_BYTES = 64 * 1024;

/** A slice source over voxels without a header, as `scan` describes them. @throws unreadable-input when the file has another length. */
export async function openRaw(path: string, scan: RawScan): Promise<SliceSource> {
  const file = await ReadFile.open(path);
  await file.close();
  const header = rawHeader(scan, file.size, basename(path));
  const { littleEndian, offset } = scan;
  return voxelFilesSource({ path, header, littleEndian, encoding: "raw", parts: [{ path, size: file.size, offset }] });
}

/**
 * The scan that a sidecar describes; null when the JSON file is none. Its voxels are in the file it names, else in the file
 * of its own name without `.json`. @throws unreadable-input
 */
export async function openSidecar(path: string): Promise<SliceSource | null> {
  const sidecar = await readSidecar(path);
  if (!sidecar) return null;
  const own = basename(path).replace(/\.json$/i, "");
  if (sidecar.file === null && own === basename(path))
    throw unreadable(basename(path), "a key 'file' that names the file of the voxels", "none");
  return openRaw(resolve(dirname(path), sidecar.file ?? own), sidecar);
}

/** The scan behind a file that has a sidecar of the same name with `.json` at its end; null when there is none. @throws unreadable-input */
export async function openBesideSidecar(path: string): Promise<SliceSource | null> {
  const beside = `${path}.json`;
  let sidecar: RawSidecar | null;
  try {
    sidecar = await readSidecar(beside);
  } catch (error) {
    if (isTautlineError(error, "unreadable-input") && error.fields.found === "nothing under this name") return null;
    throw error;
  }
  if (!sidecar) return null;
  if (sidecar.file !== null && resolve(dirname(path), sidecar.file) !== resolve(path))
    throw unreadable(basename(beside), `the name '${basename(path)}'`, `'${sidecar.file}'`, "file");
  return openRaw(path, sidecar);
}

async function readSidecar(path: string): Promise<RawSidecar | null> {
  const file = await ReadFile.open(path);
  let bytes: Uint8Array;
  try {
    if (file.size > MOST_SIDECAR_BYTES) return null;
    bytes = await file.readUpTo(0, MOST_SIDECAR_BYTES);
  } finally {
    await file.close();
  }
  const text = new TextDecoder().decode(bytes);
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch {
    // Meant as a sidecar, a slip in it must not pass for its absence.
    if (text.includes(RAW_FORMAT)) throw unreadable(basename(path), "a sidecar in JSON", "text that is no JSON");
    return null;
  }
  return isRawSidecar(value) ? parseRawSidecar(value, basename(path)) : null;
}
