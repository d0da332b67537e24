import type { FilePort } from "#main/node/file-port.ts";
import { readJsonFile } from "#main/node/whole-file.ts";
import type { SpecimenPatch } from "#shared/api/routes.ts";
import type { SpecimenRecord } from "#shared/api/specimen.ts";
import { unreadable } from "#shared/errors.ts";

/** The specimen record at `path`; undefined when there is none. @throws unreadable-input */
export async function readSpecimenFile(files: FilePort, path: string, id: string): Promise<SpecimenRecord | undefined> {
  const value = await readJsonFile(files, path, `specimen.json of ${id}`);
  if (value === undefined) return undefined;
  const file = `specimen.json of ${id}`;
  const record = (value ?? {}) as Partial<SpecimenRecord>;
  if (record.format !== "tautline-specimen") {
    throw unreadable(file, "format tautline-specimen", `format ${String(record.format)}`);
  }
  if (record.version !== 1) {
    const next = "It was written by a newer version of the program.";
    throw unreadable(file, "version 1", `version ${String(record.version)}`, undefined, next);
  }
  if (record.id !== id) throw unreadable(file, `id ${id}, as its folder is named`, `id ${String(record.id)}`);
  const { size, spacing, origin, direction, sha256 } = record.volume ?? {};
  const numbers = [...(size ?? []), ...(spacing ?? []), ...(origin ?? []), ...(direction ?? [])];
  if (numbers.length !== 18 || !numbers.every(Number.isFinite) || typeof sha256 !== "string") {
    throw unreadable(file, "a volume with size, spacing, origin, direction and sha256", "something else", "volume");
  }
  return value as SpecimenRecord;
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
