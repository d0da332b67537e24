import type { InPlaceScan, SpecimenVolume } from "#shared/api/specimen.ts";
import { type TautlineError, unreadable } from "#shared/errors.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";
import { BrickReader } from "#shared/volume/store/brick-reader.ts";
import { ChunkFiles } from "#shared/volume/store/chunk-files.ts";
import { type ChunkedArray, ownArray } from "#shared/volume/store/chunked-array.ts";
import { levelFolder } from "#shared/volume/store/layout.ts";
import { chunkFolder, readText, type SyncDisk } from "#shared/volume/store/sync-disk.ts";
import { UnpackedChunks } from "#shared/volume/store/unpacked-chunks.ts";
import { layoutOfArray } from "#shared/volume/store/zarr-layout.ts";

/** Files kept open by one store. */
const MOST_OPEN = 48;
const DAMAGED = "The stored scan is damaged; take the scan in again.";

/** What of a specimen's volume says how its voxels are kept. */
export type KeptVolume = Pick<SpecimenVolume, "dtype" | "size" | "packing" | "inPlace">;

/**
 * Reads bricks of all levels of a specimen's store, plain or packed; the finest level of a scan that is used in place comes out
 * of the scan's own store. Calls block; files are opened when first needed.
 */
export class StoreBricks {
  readonly #files = new ChunkFiles(MOST_OPEN);
  readonly #unpacked = new UnpackedChunks();
  readonly #readers: (BrickReader | undefined)[] = [];
  readonly #disk: SyncDisk;
  readonly #folder: string;
  readonly #volume: KeptVolume;
  readonly #levels: readonly Pick<PyramidLevel, "level" | "size">[];

  /** @param folder the store itself (`scan.ome.zarr`). */
  constructor(disk: SyncDisk, folder: string, volume: KeptVolume, levels: readonly Pick<PyramidLevel, "level" | "size">[]) {
    this.#disk = disk;
    this.#folder = folder;
    this.#volume = volume;
    this.#levels = levels;
  }

  /** See `BrickReader.readBrick`. @throws unreadable-input */
  read(level: number, z0: number, y0: number, x0: number, depth: number, into: Uint8Array): void {
    let reader = this.#readers[level];
    if (!reader) {
      reader = this.#open(level);
      this.#readers[level] = reader;
    }
    reader.readBrick(z0, y0, x0, depth, into);
  }

  close(): void {
    this.#files.close();
    this.#unpacked.clear();
    this.#readers.length = 0;
  }

  #open(level: number): BrickReader {
    const { dtype, packing, inPlace } = this.#volume;
    if (level === 0 && inPlace) return this.#openInPlace(inPlace);
    const folder = `${this.#folder}/${levelFolder(level)}`;
    const array = ownArray(level, this.#levels[level]!.size, dtype, packing ?? "plain");
    const source = chunkFolder(this.#disk, folder, { advice: DAMAGED });
    return new BrickReader(array, folder, this.#files, source, this.#unpacked);
  }

  #openInPlace(scan: InPlaceScan): BrickReader {
    const folder = arrayFolder(scan);
    const array = this.#layoutInPlace(scan);
    const source = chunkFolder(this.#disk, folder, {
      advice: inPlaceAdvice,
      // A chunk may be left out of a store, but not while all of it is gone.
      missing: () => void this.#layoutInPlace(scan),
      opened: (changed) => {
        if (Math.floor(changed) > scan.changed) throw changedInPlace(scan, "a chunk that was written since");
      },
    });
    return new BrickReader(array, folder, this.#files, source, this.#unpacked);
  }

  #layoutInPlace(scan: InPlaceScan): ChunkedArray {
    let text: string;
    try {
      text = readText(this.#disk, `${arrayFolder(scan)}/${scan.metadata}`);
    } catch {
      throw goneFromPlace(scan);
    }
    let metadata: unknown;
    try {
      metadata = JSON.parse(text);
    } catch {
      throw changedInPlace(scan, "metadata that is no JSON");
    }
    const verdict = layoutOfArray(
      metadata,
      scan.selection.map((index) => index ?? "space"),
    );
    if ("why" in verdict) throw changedInPlace(scan, `an array that cannot be read in place: ${verdict.why}`);
    const { size, dtype } = this.#volume;
    const { shape } = verdict.array;
    if (verdict.array.dtype !== dtype || shape.some((side, axis) => side !== size[2 - axis]))
      throw changedInPlace(scan, `${verdict.array.dtype} voxels, ${[...shape].reverse().join(" x ")}`);
    return verdict.array;
  }
}

/** Folder of a scan's finest array. */
export function arrayFolder(scan: InPlaceScan): string {
  return scan.array === "" ? scan.path : `${scan.path}/${scan.array}`;
}

/** Name of the store, for messages that may go to a page. */
function nameOf(scan: InPlaceScan): string {
  return scan.path.split(/[/\\]/).filter(Boolean).at(-1) ?? scan.path;
}

const inPlaceAdvice =
  "The scan is used where it lies, so it has to stay as it was when it was taken in. Put the earlier one back, or take this one in as a specimen of its own.";

/** The scan that a specimen uses in place is not where it was. */
export function goneFromPlace(scan: InPlaceScan): TautlineError<"unreadable-input"> {
  const next =
    "The specimen uses its scan where it lies. Put it back where it was (specimen.json says where), or take it in again, in place, from where it is now: when the voxels are the same, the specimen is given the new place and keeps its passes.";
  return unreadable(nameOf(scan), "the scan of this specimen in its place", "nothing there", undefined, next);
}

/** The scan that a specimen uses in place is not what it was. */
export function changedInPlace(scan: InPlaceScan, found: string): TautlineError<"unreadable-input"> {
  return unreadable(nameOf(scan), "the scan as it was when the specimen was made", found, undefined, inPlaceAdvice);
}
