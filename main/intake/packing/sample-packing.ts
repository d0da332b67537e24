import { openScan } from "#main/intake/open-scan.ts";
import { PackingSampler } from "#main/intake/packing/packing-sampler.ts";
import type { ScanChoice } from "#main/intake/slice-source.ts";
import { slicesOf } from "#main/intake/slices-of.ts";
import type { PackingSample } from "#shared/api/projections.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import { CHUNK_SIDE } from "#shared/volume/store/layout.ts";
import { storedTypeOf } from "#shared/volume/stored-type.ts";

/** Slabs read at most this much together. */
const SLAB_BYTES = 256 * 1024 * 1024;
const MOST_SLABS = 3;

/** Slabs of 32 slices that a sample of a scan takes. @param planeBytes of one slice */
export function slabsFor(planeBytes: number): number {
  return Math.max(1, Math.min(MOST_SLABS, Math.floor(SLAB_BYTES / (planeBytes * CHUNK_SIDE))));
}

/**
 * What packing a scan would gain and cost, on bricks of up to three slabs; null for packed streams, which would have to be read
 * through, and where only the values decide the stored type. @throws unreadable-input, cancelled
 */
export async function samplePacking(path: string, choice: ScanChoice, signal?: AbortSignal): Promise<PackingSample | null> {
  const source = await openScan(path, choice);
  try {
    const { size, dtype } = source.header;
    const stored = storedTypeOf(dtype);
    if (!source.seekable || !stored) return null;
    const sampler = new PackingSampler(size, stored.dtype, slabsFor(size[0] * size[1] * BYTES_OF_DTYPE[dtype]));
    for (const [z0, z1] of sampler.ranges())
      for await (const [z, slice] of slicesOf(source, z0, z1, signal)) sampler.add(z, slice);
    return sampler.measure(() => performance.now());
  } finally {
    await source.close();
  }
}
