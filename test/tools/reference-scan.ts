import { open } from "node:fs/promises";
import { sourceFromSlabs } from "#main/intake/generated-source.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import { valvePhantom, valveSize } from "#shared/phantom/demo-valve.ts";
import type { PhantomSpecimen } from "#shared/phantom/phantom-specimen.ts";
import { nrrdHeaderText } from "#shared/volume/nrrd/write-nrrd-header.ts";

/** Bytes of the whole reference scan: 2000 x 2000 x 1000 voxels of uint16. */
export const REFERENCE_BYTES = 8e9;
/** Slices made at once are kept below this. */
const SLAB_BYTES = 16 * 2 ** 20;
/** Height of the synthetic valve, millimetres: the slices of every size span it. */
const VALVE_MM = 34;

/**
 * The reference scan of about so many bytes: a synthetic valve with its strings in a box of 2 : 2 : 1, uint16. The same bytes
 * and seed give the same voxels.
 */
export function referenceScan(bytes = REFERENCE_BYTES, seed = 7): PhantomSpecimen {
  const slices = Math.round(Math.cbrt(bytes / 8));
  const spacingMm = Math.round((1000 * VALVE_MM) / slices) / 1000;
  const size = [2 * slices, 2 * slices, Math.max(slices, valveSize(spacingMm)[2])] as const;
  return valvePhantom({ name: `reference-${seed}`, seed, spacingMm, noise: 0.05, size, oneGrain: true });
}

/** The same as a source for intake, made slab by slab instead of being read. */
export function referenceSource(bytes: number, seed = 7): SliceSource {
  const { name, grid, dtype, renderSlab } = referenceScan(bytes, seed);
  return sourceFromSlabs(name, grid, dtype, renderSlab);
}

/** Writes the reference scan as an NRRD, slab by slab, and syncs it; memory does not grow with its size. @returns voxel bytes. */
export async function writeReferenceScan(path: string, bytes = REFERENCE_BYTES, seed = 7): Promise<number> {
  const { grid, dtype, renderSlab } = referenceScan(bytes, seed);
  const [nx, ny, nz] = grid.size;
  const slab = Math.max(1, Math.floor(SLAB_BYTES / (2 * nx * ny)));
  const voxels = new Uint16Array(nx * ny * slab);
  const file = await open(path, "wx");
  try {
    await file.write(nrrdHeaderText(grid, dtype, "raw", [`Synthetic reference scan by Tautline, seed ${seed}.`]));
    for (let z = 0; z < nz; z += slab) {
      const part = voxels.subarray(0, nx * ny * Math.min(slab, nz - z));
      renderSlab(z, Math.min(z + slab, nz), part);
      const bytesOfPart = new Uint8Array(part.buffer, 0, part.byteLength);
      for (let done = 0; done < bytesOfPart.length; ) done += (await file.write(bytesOfPart, done)).bytesWritten;
    }
    await file.sync();
  } finally {
    await file.close();
  }
  return 2 * nx * ny * nz;
}
