import { readFile, stat } from "node:fs/promises";
import { basename, dirname, join, resolve } from "node:path";
import { folderFacts } from "#main/intake/ome-zarr/folder-store.ts";
import { zarrFolderOf } from "#main/intake/ome-zarr/ome-zarr-source.ts";
import { asUnreadable } from "#main/intake/read-file.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import type { InPlaceScan } from "#shared/api/specimen.ts";
import { TautlineError, unreadable } from "#shared/errors.ts";
import { parseOmeZarr, scanOfOmeZarr } from "#shared/volume/ome-zarr-header.ts";
import { changedInPlace, goneFromPlace } from "#shared/volume/store/store-bricks.ts";
import { layoutOfArray } from "#shared/volume/store/zarr-layout.ts";

/** Whether a scan's own store can be used where it lies, and if so, what a specimen keeps of it. */
export type PlaceVerdict = { readonly fits: true; readonly scan: InPlaceScan } | { readonly fits: false; readonly why: string };

/**
 * The verdict over an OME-Zarr; null for any other scan. Only metadata is read, and the names and sizes of files.
 * @throws unreadable-input when the metadata cannot be understood at all.
 */
export async function placeVerdict(path: string, choice: ScanChoice): Promise<PlaceVerdict | null> {
  const folder = await zarrFolder(path);
  if (folder === null) return null;
  const name = basename(folder);
  const isNewer = (await jsonIn(folder, "zarr.json")) !== null;
  const group = isNewer ? attributesOf(await jsonIn(folder, "zarr.json")) : await jsonIn(folder, ".zattrs");
  const image = parseOmeZarr(group, name);
  const metadata = image.version === "0.5" ? "zarr.json" : ".zarray";
  const array = await jsonIn(join(folder, image.path), metadata);
  const shape = (array as { shape?: unknown } | null)?.shape;
  if (!Array.isArray(shape)) throw unreadable(name, `the metadata of the array '${image.path}'`, "none");
  const { selection, header } = scanOfOmeZarr(image, shape as number[], "uint8", choice, name);
  const layout = layoutOfArray(array, selection);
  if ("why" in layout) return { fits: false, why: layout.why };
  const { files, bytes, changed } = await folderFacts(join(folder, image.path));
  const scan: InPlaceScan = {
    path: resolve(folder),
    array: image.path,
    metadata,
    selection: selection.map((kind) => (kind === "space" ? null : kind)),
    ...(header.readings ? { reading: readingOf(choice) } : {}),
    files,
    bytes,
    changed,
  };
  return { fits: true, scan };
}

/** Looks whether a scan that a specimen uses in place is what it was. @throws unreadable-input with what to do */
export async function checkInPlace(scan: InPlaceScan): Promise<void> {
  let now: Awaited<ReturnType<typeof folderFacts>>;
  try {
    if (!(await stat(join(scan.path, scan.array, scan.metadata))).isFile()) throw goneFromPlace(scan);
    now = await folderFacts(join(scan.path, scan.array));
  } catch (error) {
    const code = (error as { code?: unknown }).code;
    if (code === "ENOENT" || code === "ENOTDIR") throw goneFromPlace(scan);
    throw asUnreadable(scan.path, error);
  }
  if (now.files !== scan.files) throw changedInPlace(scan, `${now.files} files instead of ${scan.files}`);
  if (now.bytes !== scan.bytes) throw changedInPlace(scan, `${now.bytes} bytes instead of ${scan.bytes}`);
  if (now.changed !== scan.changed) throw changedInPlace(scan, `files of ${new Date(now.changed).toISOString()}`);
}

/** The Zarr folder that a path names, itself or by one of its metadata files; null when it names none. */
async function zarrFolder(path: string): Promise<string | null> {
  const isFile = await stat(path).then(
    (facts) => facts.isFile(),
    (error) => {
      throw asUnreadable(path, error);
    },
  );
  if (!isFile) return zarrFolderOf(path);
  return ["zarr.json", ".zattrs", ".zgroup"].includes(basename(path)) ? zarrFolderOf(dirname(path)) : null;
}

/** Metadata are kilobytes. */
const MOST_BYTES = 16 * 1024 * 1024;

async function jsonIn(folder: string, name: string): Promise<unknown> {
  const path = join(folder, name);
  try {
    if ((await stat(path)).size > MOST_BYTES) throw unreadable(name, `at most ${MOST_BYTES} bytes`, "more");
    return JSON.parse(await readFile(path, "utf8"));
  } catch (error) {
    if ((error as { code?: unknown }).code === "ENOENT") return null;
    if (error instanceof TautlineError) throw error;
    if (error instanceof SyntaxError) throw unreadable(join(basename(folder), name), "JSON", "another text");
    throw asUnreadable(path, error);
  }
}

function attributesOf(metadata: unknown): unknown {
  return (metadata as { attributes?: unknown } | null)?.attributes;
}

function readingOf({ channel = 0, time = 0 }: ScanChoice) {
  return { channel, time };
}
