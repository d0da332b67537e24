import { createHash } from "node:crypto";
import { stopIfAborted } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { surveySource } from "#main/intake/survey-source.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import type { Polarity } from "#shared/tracing/strand-request.ts";
import { createStored } from "#shared/volume/dtype.ts";
import { type MemoryPyramid, memoryPyramid } from "#shared/volume/memory-pyramid.ts";
import { gridOf } from "#shared/volume/scan-header.ts";
import { chooseStoredType, convertInto, storedTypeOf } from "#shared/volume/stored-type.ts";
import { suggestPolarity, ValueSurvey } from "#shared/volume/value-survey.ts";

/** A whole scan in memory, with what its store on disk would say of it. */
export interface ScanInMemory {
  readonly pyramid: MemoryPyramid;
  /** SHA-256 (hex) of the stored array, as intake computes it. */
  readonly sha256: string;
  readonly suggestedPolarity: Polarity;
}

/**
 * Reads a scan whole, in the type that the library would keep it in. Memory: all voxels and a seventh more.
 * @param spacing millimetres, settled. @throws unreadable-input, cancelled
 */
export async function readScanIntoMemory(source: SliceSource, spacing: Vec3, signal?: AbortSignal): Promise<ScanInMemory> {
  const { header } = source;
  const grid = gridOf(header, spacing);
  const [nx, ny, nz] = header.size;
  const stored =
    storedTypeOf(header.dtype) ?? chooseStoredType(header.dtype, (await surveySource(source, { signal })).facts(), source.name);
  const voxels = createStored(stored.dtype, nx * ny * nz);
  const survey = new ValueSurvey(voxels.length);
  const hash = createHash("sha256");
  for await (const run of source.readPlanes(0, nz, signal)) {
    stopIfAborted(signal, "reading the scan");
    const part = voxels.subarray(run.z * nx * ny, (run.z + run.count) * nx * ny);
    convertInto(run.data, part);
    survey.add(part);
    hash.update(new Uint8Array(part.buffer, part.byteOffset, part.byteLength));
  }
  return {
    pyramid: memoryPyramid(grid, voxels),
    sha256: hash.digest("hex"),
    suggestedPolarity: suggestPolarity(survey.sortedSample()),
  };
}
