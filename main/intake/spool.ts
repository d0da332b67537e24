import { RawPlanes } from "#main/intake/raw-planes.ts";
import { stopIfAborted } from "#main/intake/read-file.ts";
import type { SliceSource } from "#main/intake/slice-source.ts";
import type { WriteFiles } from "#main/intake/store/write-files.ts";

/**
 * A seekable source with the same slices: the voxels are unpacked once into a passing file at `path`. Needed where a compressed
 * scan is to be read backwards. The caller removes the file.
 */
export async function spooled(source: SliceSource, path: string, files: WriteFiles, signal?: AbortSignal): Promise<SliceSource> {
  const [nx, ny, nz] = source.header.size;
  const handle = await files.create(path);
  try {
    let at = 0;
    for await (const run of source.readPlanes(0, nz, signal)) {
      stopIfAborted(signal, "unpacking the scan");
      const bytes = new Uint8Array(run.data.buffer, run.data.byteOffset, run.data.byteLength);
      await handle.write(bytes, at);
      at += bytes.byteLength;
    }
  } finally {
    await handle.close();
  }
  const planes = new RawPlanes({
    parts: [{ path, offset: 0 }],
    slicesPerPart: nz,
    dtype: source.header.dtype,
    littleEndian: true,
    sliceVoxels: nx * ny,
  });
  return {
    ...source,
    seekable: true,
    bytesRead: () => source.bytesRead(),
    readPlanes: (z0, z1, stop) => planes.read(z0, z1, stop),
    fingerprint: () => source.fingerprint(),
    close: () => planes.close(),
  };
}
