import type { FilePort } from "#main/node/file-port.ts";
import { readJsonFile } from "#main/node/whole-file.ts";
import type { SpecimenPatch } from "#shared/api/routes.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { parseSpecimenRecord } from "#shared/api/specimen-record.ts";
import { unreadable } from "#shared/errors.ts";

/** The specimen record at `path`; undefined when there is none. @throws unreadable-input */
export async function readSpecimenFile(files: FilePort, path: string, id: string): Promise<SpecimenRecord | undefined> {
  const value = await readJsonFile(files, path, `specimen.json of ${id}`);
  if (value === undefined) return undefined;
  const file = `specimen.json of ${id}`;
  const record = parseSpecimenRecord(value, file);
  if (record.id !== id) throw unreadable(file, `id ${id}, as its folder is named`, `id ${record.id}`);
  return record;
}

/** The record with a patch applied; what belongs to the volume goes there. */
export function patchedSpecimen(record: SpecimenRecord, patch: SpecimenPatch): SpecimenRecord {
  const { blurFwhmMm, handedness, ...plain } = patch;
  const volume = {
    ...record.volume,
    ...(blurFwhmMm === undefined ? {} : { blurFwhmMm }),
    ...(handedness === undefined ? {} : { handedness }),
  };
  return { ...record, ...plain, volume };
}
