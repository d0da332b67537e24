import { TautlineError, unreadable } from "#shared/errors.ts";
import { BRICK_SIDE } from "#shared/volume/bricks.ts";
import { BYTES_OF_DTYPE } from "#shared/volume/dtype.ts";
import type { ChunkFile, ChunkFiles, ChunkSource } from "#shared/volume/store/chunk-files.ts";
import { type ChunkedArray, indexBytes } from "#shared/volume/store/chunked-array.ts";
import { ABSENT } from "#shared/volume/store/layout.ts";
import type { UnpackedChunks } from "#shared/volume/store/unpacked-chunks.ts";

/** A packed chunk is hardly ever larger than its voxels; anything far above is no chunk. */
const MOST_GROWTH = 1.1;

/** Where a chunk's bytes lie; null when it is not there and stands for the fill value. */
interface Place {
  readonly file: ChunkFile;
  readonly offset: number;
  readonly length: number;
}

/**
 * Reads bricks out of a chunked array, whatever the size of its chunks. Calls block. Of plain chunks only rows are read, of
 * packed ones whole chunks, the last few of which are kept unpacked where several bricks come out of one.
 */
export class BrickReader {
  readonly #array: ChunkedArray;
  readonly #files: ChunkFiles;
  readonly #source: ChunkSource;
  readonly #folder: string;
  readonly #voxel: number;
  readonly #chunkBytes: number;
  readonly #unpacked: UnpackedChunks;
  #rows = new Uint8Array(0);

  /** @param folder tells this array's files and chunks apart from those of others in `files` and `unpacked`. */
  constructor(array: ChunkedArray, folder: string, files: ChunkFiles, source: ChunkSource, unpacked: UnpackedChunks) {
    this.#array = array;
    this.#unpacked = unpacked;
    this.#folder = folder;
    this.#files = files;
    this.#source = source;
    this.#voxel = BYTES_OF_DTYPE[array.dtype];
    this.#chunkBytes = array.chunk[0] * array.chunk[1] * array.chunk[2] * this.#voxel;
  }

  /**
   * Fills the start of `into` with the voxels [z0, z0 + depth) x [y0, y0 + 32) x [x0, x0 + 32), little-endian, x fastest.
   * Voxels beyond the array are left finite. `x0` and `y0` are multiples of 32, `z0` of `depth`, `depth` is 16 or 32.
   * @throws unreadable-input when a file is damaged, or missing where it has to be there.
   */
  readBrick(z0: number, y0: number, x0: number, depth: number, into: Uint8Array): void {
    const { chunk, shape, packing } = this.#array;
    const [cz, cy, cx] = chunk;
    const bytes = depth * BRICK_SIDE * BRICK_SIDE * this.#voxel;
    const out = into.subarray(0, bytes);
    const isBricks = cx === BRICK_SIDE && cy === BRICK_SIDE && cz % depth === 0;
    if (isBricks && (packing === "plain" || cz === depth)) {
      // A brick is a whole chunk, or some of its slices in one piece.
      const place = this.#place(Math.floor(z0 / cz), y0 / cy, x0 / cx);
      if (place === null) this.#fill(out);
      else if (packing !== "plain") out.set(this.#unpackHere(place));
      else {
        this.#refuseCut(place, this.#chunkBytes);
        place.file.readInto(out, place.offset + (z0 % cz) * BRICK_SIDE * BRICK_SIDE * this.#voxel);
      }
      return;
    }
    const z1 = Math.min(z0 + depth, shape[0]);
    const y1 = Math.min(y0 + BRICK_SIDE, shape[1]);
    const x1 = Math.min(x0 + BRICK_SIDE, shape[2]);
    if (z1 - z0 < depth || y1 - y0 < BRICK_SIDE || x1 - x0 < BRICK_SIDE) out.fill(0);
    for (let kz = Math.floor(z0 / cz); kz * cz < z1; kz++)
      for (let ky = Math.floor(y0 / cy); ky * cy < y1; ky++)
        for (let kx = Math.floor(x0 / cx); kx * cx < x1; kx++) {
          const from = [Math.max(z0, kz * cz), Math.max(y0, ky * cy), Math.max(x0, kx * cx)] as const;
          const to = [Math.min(z1, (kz + 1) * cz), Math.min(y1, (ky + 1) * cy), Math.min(x1, (kx + 1) * cx)] as const;
          this.#copyPart([kz, ky, kx], from, to, [z0, y0, x0], out);
        }
  }

  /** Moves the voxels [from, to) of one chunk to their places in a brick that begins at `corner`. All orders z, y, x. */
  #copyPart(
    k: readonly [number, number, number],
    from: readonly [number, number, number],
    to: readonly [number, number, number],
    corner: readonly [number, number, number],
    out: Uint8Array,
  ): void {
    const [cz, cy, cx] = this.#array.chunk;
    const voxel = this.#voxel;
    const wide = (to[2] - from[2]) * voxel;
    const place = this.#place(...k);
    const whole = place === null || this.#array.packing === "plain" ? null : this.#unpack(k, place);
    const rows = to[1] - from[1];
    if (place !== null && whole === null) {
      this.#refuseCut(place, this.#chunkBytes);
      if (this.#rows.length < rows * cx * voxel) this.#rows = new Uint8Array(rows * cx * voxel);
    }
    for (let z = from[0]; z < to[0]; z++) {
      const firstRow = ((z - k[0] * cz) * cy + from[1] - k[1] * cy) * cx * voxel;
      if (place !== null && whole === null)
        place.file.readInto(this.#rows.subarray(0, rows * cx * voxel), place.offset + firstRow);
      for (let y = 0; y < rows; y++) {
        const at = (((z - corner[0]) * BRICK_SIDE + from[1] + y - corner[1]) * BRICK_SIDE + from[2] - corner[2]) * voxel;
        const start = (y * cx + from[2] - k[2] * cx) * voxel;
        if (place === null) this.#fill(out.subarray(at, at + wide));
        else if (whole === null) out.set(this.#rows.subarray(start, start + wide), at);
        else out.set(whole.subarray(firstRow + start, firstRow + start + wide), at);
      }
    }
  }

  #unpack(k: readonly [number, number, number], place: Place): Uint8Array {
    const key = `${this.#folder} ${k[0]} ${k[1]} ${k[2]}`;
    const known = this.#unpacked.get(key);
    if (known) return known;
    const plain = this.#unpackHere(place);
    this.#unpacked.set(key, plain);
    return plain;
  }

  #unpackHere(place: Place): Uint8Array {
    const { packing } = this.#array;
    const most = Math.ceil(this.#chunkBytes * MOST_GROWTH) + 1024;
    if (place.length > most) throw this.#damaged(place, `at most ${most} packed bytes`, `${place.length}`);
    const bytes = new Uint8Array(place.length);
    place.file.readInto(bytes, place.offset);
    let plain: Uint8Array;
    try {
      plain = this.#source.unpack(packing as Exclude<typeof packing, "plain">, bytes, this.#chunkBytes);
    } catch (error) {
      if (error instanceof TautlineError) throw error;
      throw this.#damaged(place, `a chunk packed with ${packing}`, "bytes that cannot be unpacked");
    }
    if (plain.length !== this.#chunkBytes)
      throw this.#damaged(place, `a chunk of ${this.#chunkBytes} bytes`, `${plain.length} bytes`);
    return plain;
  }

  /** Where the z, y, x-th chunk lies. */
  #place(z: number, y: number, x: number): Place | null {
    const array = this.#array;
    const [sz, sy, sx] = array.shard?.chunks ?? [1, 1, 1];
    const path = array.path(Math.floor(z / sz), Math.floor(y / sy), Math.floor(x / sx));
    const opened = this.#files.get(this.#folder, path, array, this.#source);
    if (opened === null) {
      if (array.fill !== null) return null;
      throw unreadable(path, "a file of the stored scan", "none", undefined, this.#source.advice);
    }
    const { file, index } = opened;
    if (index === null || array.shard === null) return { file, offset: 0, length: file.bytes };
    const number = ((z % sz) * sy + (y % sy)) * sx + (x % sx);
    const [offset, length] = [index.offsets[number]!, index.lengths[number]!];
    if (offset === ABSENT) {
      if (array.fill !== null) return null;
      throw this.#damaged({ file, offset, length }, `chunk ${number}`, "none");
    }
    const end = array.shard.indexAt === "end" ? file.bytes - indexBytes(array.shard) : file.bytes;
    if (offset + length > end)
      throw this.#damaged({ file, offset, length }, `chunk ${number} within ${end} bytes`, `${length} bytes at ${offset}`);
    return { file, offset, length };
  }

  #refuseCut(place: Place, bytes: number): void {
    if (place.length !== bytes)
      throw this.#damaged(place, `a chunk of ${bytes} bytes`, `${place.length} bytes at ${place.offset}`);
  }

  #damaged(place: Place, expected: string, found: string): TautlineError<"unreadable-input"> {
    return unreadable(place.file.name, expected, found, undefined, this.#source.advice);
  }

  #fill(out: Uint8Array): void {
    const fill = this.#array.fill ?? 0;
    if (fill === 0) {
      out.fill(0);
      return;
    }
    const view = new DataView(out.buffer, out.byteOffset, out.byteLength);
    for (let at = 0; at < out.length; at += this.#voxel) {
      if (this.#array.dtype === "float32") view.setFloat32(at, fill, true);
      else if (this.#voxel === 2) view.setUint16(at, fill & 0xffff, true);
      else view.setUint8(at, fill & 0xff);
    }
  }
}
