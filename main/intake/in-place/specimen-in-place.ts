import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { checkInPlace } from "#main/intake/in-place/in-place-scan.ts";
import { openOmeZarr } from "#main/intake/ome-zarr/ome-zarr-source.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import type { SpecimenVolume } from "#shared/api/specimen.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";

/**
 * A slice source over the scan that a specimen's folder uses in place, in the specimen's own frame; null for any other folder.
 * @throws unreadable-input when the scan is not what it was.
 */
export async function openSpecimenInPlace(folder: string): Promise<SliceSource | null> {
  const volume = await volumeOf(folder);
  if (!volume?.inPlace) return null;
  await checkInPlace(volume.inPlace);
  const source = await openOmeZarr(volume.inPlace.path, volume.inPlace.reading ?? {});
  const { spacing, origin, direction, frame } = volume;
  const settled = { headerSpacing: spacing, unit: "mm", mmPerUnit: [1, 1, 1], origin, originMmPerUnit: [1, 1, 1] } as const;
  return { ...source, header: { ...source.header, ...settled, direction, frame } };
}

async function volumeOf(folder: string): Promise<SpecimenVolume | null> {
  let text: string;
  try {
    text = await readFile(join(folder, "specimen.json"), "utf8");
  } catch {
    return null;
  }
  try {
    return parseSpecimenRecord(JSON.parse(text), "specimen.json").volume;
  } catch {
    return null; // no specimen of this program: what else the folder holds decides
  }
}
