import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { checkInPlace } from "#main/intake/in-place/in-place-scan.ts";
import { type SpecimenResult, UNFINISHED } from "#main/intake/make-specimen.ts";
import { writeWhole } from "#main/intake/store/store-writer.ts";
import type { WriteFiles } from "#main/intake/store/write-files.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";

/**
 * A scan that was used in place and moved is taken in again from where it is now: the specimen that misses it is given the new
 * place, keeps its passes, and the one just made goes. Without such a specimen nothing changes.
 * @param made a specimen of this library, just made, that is used in place.
 * @throws write-failed, disk-full; the library then has both specimens.
 */
export async function renewPlace(library: string, made: SpecimenResult, files: WriteFiles): Promise<SpecimenResult> {
  const { record } = made;
  const missing = await specimenThatMisses(library, record);
  if (!missing) return made;
  const renewed: SpecimenRecord = { ...missing, volume: { ...missing.volume, inPlace: record.volume.inPlace! } };
  const folder = join(library, "specimens", missing.id);
  const passing = join(folder, "specimen.json.new");
  await files.remove(passing);
  await writeWhole(files, passing, JSON.stringify(renewed, null, 2));
  await files.rename(passing, join(folder, "specimen.json"));
  await files.syncFolder(folder);
  // Out of the way in one step, so that no half-removed specimen stands on the shelf.
  const away = join(library, UNFINISHED, record.id);
  await files.makeFolder(join(library, UNFINISHED));
  await files.rename(join(library, "specimens", record.id), away);
  await files.syncFolder(join(library, "specimens"));
  await files.remove(away);
  return { ...made, record: renewed };
}

/** The first specimen of the same voxels on the same grid whose scan is not where it was. */
async function specimenThatMisses(library: string, made: SpecimenRecord): Promise<SpecimenRecord | null> {
  const { sha256, size, spacing, origin, direction, frame, dtype } = made.volume;
  const grid = JSON.stringify([sha256, size, spacing, origin, direction, frame, dtype]);
  for (const id of (await readdir(join(library, "specimens"))).sort()) {
    if (id === made.id) continue;
    const record = await recordOf(join(library, "specimens", id));
    if (!record?.volume.inPlace || record.id !== id) continue;
    const { volume } = record;
    const own = [volume.sha256, volume.size, volume.spacing, volume.origin, volume.direction, volume.frame, volume.dtype];
    if (JSON.stringify(own) !== grid) continue;
    const isThere = await checkInPlace(record.volume.inPlace).then(
      () => true,
      () => false,
    );
    if (!isThere) return record;
  }
  return null;
}

async function recordOf(folder: string): Promise<SpecimenRecord | null> {
  try {
    return parseSpecimenRecord(JSON.parse(await readFile(join(folder, "specimen.json"), "utf8")), "specimen.json");
  } catch {
    return null; // the shelf tells of specimens that cannot be read
  }
}
