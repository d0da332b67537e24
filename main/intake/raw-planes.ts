import { ReadFile, stopIfAborted } from "#main/intake/read-file.ts";
import { type PlaneRun, planesPerRun, swapBytes } from "#main/intake/slice-source.ts";
import { BYTES_OF_DTYPE, type SourceDtype } from "#shared/volume/dtype.ts";
import { viewAs } from "#shared/volume/source-array.ts";

/** Voxels that lie uncompressed, slice after slice, in one file or in several equal shares. */
export interface RawLayout {
  /** In slice order; each holds `slicesPerPart` slices from `offset` on. */
  readonly parts: readonly { readonly path: string; readonly offset: number }[];
  readonly slicesPerPart: number;
  readonly dtype: SourceDtype;
  readonly littleEndian: boolean;
  readonly sliceVoxels: number;
}

/** Reads slices of a {@link RawLayout} in order, the next run being fetched while the last one is worked on. */
export class RawPlanes {
  readonly layout: RawLayout;
  #file: ReadFile | undefined;
  #earlier = 0;

  constructor(layout: RawLayout) {
    this.layout = layout;
  }

  bytesRead(): number {
    return this.#earlier + (this.#file?.bytesRead ?? 0);
  }

  async *read(z0: number, z1: number, signal?: AbortSignal): AsyncGenerator<PlaneRun, void, void> {
    const { dtype, sliceVoxels, slicesPerPart, littleEndian } = this.layout;
    const voxelBytes = BYTES_OF_DTYPE[dtype];
    const planeBytes = sliceVoxels * voxelBytes;
    const most = Math.max(1, Math.min(planesPerRun(planeBytes), z1 - z0));
    const buffers = [new ArrayBuffer(most * planeBytes), new ArrayBuffer(z1 - z0 > most ? most * planeBytes : 0)];
    const runAt = (z: number) => Math.min(most, z1 - z, slicesPerPart - (z % slicesPerPart));
    const fetchRun = async (z: number, turn: number) => {
      const bytes = Buffer.from(buffers[turn]!, 0, runAt(z) * planeBytes);
      await this.#fill(bytes, z, planeBytes);
      if (!littleEndian) swapBytes(bytes, voxelBytes);
    };
    let turn = 0;
    let coming: Promise<void> | undefined = z0 < z1 ? fetchRun(z0, 0) : undefined;
    try {
      for (let z = z0; z < z1; ) {
        stopIfAborted(signal, "reading the scan");
        await coming;
        coming = undefined;
        const count = runAt(z);
        const data = viewAs(dtype, buffers[turn]!, 0, count * sliceVoxels);
        const here = z;
        z += count;
        if (buffers[1 - turn]!.byteLength > 0 && z < z1) {
          turn = 1 - turn;
          coming = fetchRun(z, turn);
          coming.catch(() => {}); // awaited below or in the finally; never an unhandled rejection in between
        }
        yield { z: here, count, data };
        if (!coming && z < z1) coming = fetchRun(z, turn);
      }
    } finally {
      await coming?.catch(() => {});
    }
  }

  async close(): Promise<void> {
    await this.#leave();
  }

  async #fill(bytes: Uint8Array, z: number, planeBytes: number): Promise<void> {
    const { parts, slicesPerPart } = this.layout;
    const part = parts[Math.floor(z / slicesPerPart)]!;
    if (this.#file?.path !== part.path) {
      await this.#leave();
      this.#file = await ReadFile.open(part.path);
    }
    await this.#file!.readInto(bytes, part.offset + (z % slicesPerPart) * planeBytes, `slice ${z + 1}`);
  }

  async #leave(): Promise<void> {
    this.#earlier += this.#file?.bytesRead ?? 0;
    await this.#file?.close();
    this.#file = undefined;
  }
}
