import { stopIfAborted } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import type { SourceArray } from "#shared/volume/source-array.ts";

/** Slices [z0, z1) of a scan one by one with their numbers; each is borrowed until the next. @throws as the source, cancelled */
export async function* slicesOf(
  source: SliceSource,
  z0: number,
  z1: number,
  signal?: AbortSignal,
): AsyncGenerator<readonly [number, SourceArray], void, void> {
  const voxels = source.header.size[0] * source.header.size[1];
  for await (const run of source.readPlanes(z0, z1, signal))
    for (let k = 0; k < run.count; k++) {
      stopIfAborted(signal, "looking through the scan");
      yield [run.z + k, run.data.subarray(k * voxels, (k + 1) * voxels)];
    }
}
