import type { SliceSource } from "#main/intake/slice-source.ts";

/** All voxels of slices [z0, z1) as numbers, checking that slices come whole and in order. */
export async function gatherVoxels(source: SliceSource, z0 = 0, z1 = source.header.size[2]): Promise<number[]> {
  const values: number[] = [];
  let z = z0;
  for await (const run of source.readPlanes(z0, z1)) {
    if (run.z !== z || run.data.length !== run.count * source.header.size[0] * source.header.size[1])
      throw new Error(`run at ${run.z} of ${run.data.length} voxels`);
    for (const value of run.data) values.push(Number(value));
    z += run.count;
  }
  if (z !== z1) throw new Error(`ended at slice ${z} of ${z1}`);
  return values;
}
