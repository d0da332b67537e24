import { createHash } from "node:crypto";
import { mkdir, open, rename, rm, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { TautlineError } from "#shared/errors.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";
import { writeChordaeFile } from "#shared/formats/chordae/write-chordae-file.ts";
import { humanPasses } from "#shared/phantom/human-passes.ts";
import { type PhantomSpecimen, withVolumeHash } from "#shared/phantom/phantom-specimen.ts";
import { pinsOf } from "#shared/phantom/pins.ts";
import { nrrdHeaderText } from "#shared/volume/nrrd/write-nrrd-header.ts";

/** Where everything of a phantom was written. */
export interface PhantomFiles {
  readonly volume: string;
  readonly true: string;
  readonly pins: string;
  readonly passes: readonly string[];
  readonly errors: string;
}

const UNFINISHED = ".unfinished";

/**
 * Writes a synthetic specimen into a folder: its scan, true trees, pins, three passes and their known errors. All files are
 * written under other names first; a failure or an interruption leaves none of them.
 * @throws cancelled
 */
export async function writePhantom(
  specimen: PhantomSpecimen,
  folder: string,
  seed: number,
  signal: AbortSignal,
  say: (line: string) => void,
): Promise<PhantomFiles> {
  const created = await mkdir(folder, { recursive: true });
  const { passes, errors } = humanPasses(specimen, seed);
  const files: PhantomFiles = {
    volume: join(folder, "volume.nrrd"),
    true: join(folder, "true.chordae.json"),
    pins: join(folder, "pins.chordae.json"),
    passes: passes.map((pass) => join(folder, pass.fileName)),
    errors: join(folder, "errors.json"),
  };
  const all = [files.volume, files.true, files.pins, ...files.passes, files.errors];
  try {
    const sha256 = await writeVolume(specimen, `${files.volume}${UNFINISHED}`, seed, signal, say);
    // Without a version: the same options give the same bytes from one version to the next.
    const software = { name: "Tautline" };
    const write = (path: string, file: ChordaeFile) =>
      writeFile(`${path}${UNFINISHED}`, writeChordaeFile({ ...withVolumeHash(file, sha256), software }));
    await write(files.true, { ...specimen.truth, annotator: "true", pass: 1 });
    await write(files.pins, pinsOf(specimen.truth, specimen.crossings, seed));
    for (const [k, pass] of passes.entries()) await write(files.passes[k]!, pass.file);
    await writeFile(`${files.errors}${UNFINISHED}`, `${JSON.stringify({ synthetic: true, seed, errors }, null, 2)}\n`);
    for (const path of all) await rename(`${path}${UNFINISHED}`, path);
  } catch (error) {
    for (const path of all) await rm(`${path}${UNFINISHED}`, { force: true });
    if (created !== undefined) await rm(created, { recursive: true, force: true });
    throw error;
  }
  return files;
}

/** Writes the scan slab by slab and gives the SHA-256 (hex) of its voxels: C order z, y, x, little-endian. */
async function writeVolume(
  { grid, dtype, renderSlab }: PhantomSpecimen,
  path: string,
  seed: number,
  signal: AbortSignal,
  say: (line: string) => void,
): Promise<string> {
  const [nx, ny, nz] = grid.size;
  const slab = Math.max(1, Math.floor((8 << 20) / (2 * nx * ny)));
  const values = new Uint16Array(nx * ny * slab);
  const hash = createHash("sha256");
  const file = await open(path, "w");
  try {
    await file.write(nrrdHeaderText(grid, dtype, "raw", [`Synthetic phantom by Tautline, seed ${seed}. Research use only.`]));
    let told = 0;
    for (let z = 0; z < nz; z += slab) {
      if (signal.aborted) throw new TautlineError("cancelled", "Interrupted.", { what: "phantom" });
      const planes = Math.min(slab, nz - z);
      const part = values.subarray(0, nx * ny * planes);
      renderSlab(z, z + planes, part);
      // Typed arrays are little-endian on every machine that Node runs on.
      const bytes = new Uint8Array(part.buffer, 0, part.byteLength);
      hash.update(bytes);
      for (let done = 0; done < bytes.length; ) done += (await file.write(bytes, done)).bytesWritten;
      const tenth = Math.floor((10 * (z + planes)) / nz);
      if (tenth > told) say(`scan: ${tenth * 10} %`);
      told = tenth;
    }
  } finally {
    await file.close();
  }
  return hash.digest("hex");
}
