import { ShardWriter, type StoreSink } from "#main/intake/store/shard-writer.ts";
import type { HalvedAxes } from "#shared/volume/downsample.ts";
import { downsampleInto } from "#shared/volume/downsample.ts";
import { BYTES_OF_DTYPE, createStored, type StoredArray } from "#shared/volume/dtype.ts";
import type { PyramidLevel } from "#shared/volume/pyramid.ts";
import { CHUNK_SIDE, CHUNKS_ZYX, chunkNumber, SHARD_ZYX, shardGrid } from "#shared/volume/store/layout.ts";

/** Two buffers that bricks are gathered in, so that one is filled while the other is being written. */
export interface GatherBuffers {
  readonly arrays: readonly [StoredArray, StoredArray];
  /** The write under way from each. */
  readonly busy: [Promise<void>, Promise<void>];
  turn: 0 | 1;
}

/** Buffers for {@link LevelWriter}; shared by all levels of a store. */
export function gatherBuffers(dtype: StoreSink["dtype"]): GatherBuffers {
  const voxels = CHUNKS_ZYX[1] * CHUNKS_ZYX[2] * CHUNK_SIDE ** 3;
  return {
    arrays: [createStored(dtype, voxels), createStored(dtype, voxels)],
    busy: [Promise.resolve(), Promise.resolve()],
    turn: 0,
  };
}

/**
 * Writes one level of the pyramid from slices that come in order, and feeds the next coarser level. Holds `slab` slices at a
 * time (2 to 32, a divisor of 32), so memory does not grow with the scan.
 */
export class LevelWriter {
  readonly level: PyramidLevel;
  readonly #sink: StoreSink;
  readonly #gather: GatherBuffers;
  readonly #child: { writer: LevelWriter; halve: HalvedAxes } | null;
  readonly #slab: StoredArray;
  readonly #slabPlanes: number;
  readonly #planeVoxels: number;
  #held = 0;
  #written = 0;
  #shards: ShardWriter[] = [];
  #closing: Promise<void> = Promise.resolve();

  constructor(sink: StoreSink, levels: readonly PyramidLevel[], k: number, slabPlanes: number, gather: GatherBuffers) {
    this.level = levels[k]!;
    this.#sink = sink;
    this.#gather = gather;
    this.#slabPlanes = slabPlanes;
    this.#planeVoxels = this.level.size[0] * this.level.size[1];
    this.#slab = createStored(sink.dtype, this.#planeVoxels * Math.min(slabPlanes, this.level.size[2]));
    const next = levels[k + 1];
    this.#child = next
      ? {
          writer: new LevelWriter(sink, levels, k + 1, slabPlanes, gather),
          halve: next.factor.map((factor, axis) => factor !== this.level.factor[axis]) as [boolean, boolean, boolean],
        }
      : null;
  }

  /** Where the next slice's voxels go; call {@link planeReady} once they are there. */
  get nextPlane(): StoredArray {
    return this.#slab.subarray(this.#held * this.#planeVoxels, (this.#held + 1) * this.#planeVoxels);
  }

  /** The slice in {@link nextPlane} is complete. */
  async planeReady(): Promise<void> {
    this.#held++;
    if (this.#held === this.#slabPlanes || this.#written + this.#held === this.level.size[2]) await this.#flush();
  }

  /** After the last slice: everything of this and all coarser levels is written and synced. */
  async finish(): Promise<void> {
    await Promise.all(this.#gather.busy);
    await this.#closing;
    await this.#child?.writer.finish();
  }

  /** Closes all files as they are. */
  async abandon(): Promise<void> {
    await Promise.allSettled(this.#gather.busy);
    await this.#closing.catch(() => {});
    for (const shard of this.#shards) await shard.abandon();
    await this.#child?.writer.abandon();
  }

  async #flush(): Promise<void> {
    await this.#feedChild();
    const first = this.#written;
    if (this.level.level < this.#sink.firstLevel) {
      this.#written += this.#held;
      this.#held = 0;
      return;
    }
    if (first % SHARD_ZYX[0] === 0) await this.#openShards(first / SHARD_ZYX[0]);
    const [, rows, columns] = shardGrid(this.level.size);
    for (let y = 0; y < rows; y++)
      for (let x = 0; x < columns; x++) await this.#writeBricks(this.#shards[y * columns + x]!, y, x, first, this.#held);
    this.#written += this.#held;
    this.#held = 0;
    if (this.#written % SHARD_ZYX[0] === 0 || this.#written === this.level.size[2]) await this.#closeShards();
  }

  /** Slabs begin at even slices, so pairs never straddle two of them. */
  async #feedChild(): Promise<void> {
    if (!this.#child) return;
    const { writer, halve } = this.#child;
    const [nx, ny] = this.level.size;
    const step = halve[2] ? 2 : 1;
    for (let z = 0; z < this.#held; z += step) {
      const planes = Math.min(step, this.#held - z);
      const from = this.#slab.subarray(z * this.#planeVoxels, (z + planes) * this.#planeVoxels);
      downsampleInto(from, [nx, ny, planes], halve, writer.nextPlane);
      await writer.planeReady();
    }
  }

  async #openShards(z: number): Promise<void> {
    const [, rows, columns] = shardGrid(this.level.size);
    for (let y = 0; y < rows; y++)
      for (let x = 0; x < columns; x++)
        this.#shards.push(await ShardWriter.open(this.#sink, this.level.level, this.level.size, [z, y, x]));
  }

  /** Syncing goes on behind the next slabs; the one before must be through first, so that few files are open. */
  async #closeShards(): Promise<void> {
    await Promise.all(this.#gather.busy);
    await this.#closing;
    const done = this.#shards;
    this.#shards = [];
    this.#closing = (async () => {
      try {
        while (done.length > 0) {
          await done[0]!.finish();
          done.shift();
        }
      } catch (error) {
        for (const shard of done) await shard.abandon();
        throw error;
      }
    })();
    this.#closing.catch(() => {}); // awaited at the next shard or in finish(); never an unhandled rejection in between
  }

  /** Slices [first, first + count) of one shard: whole bricks in one write, or parts of bricks where the slab is thinner. */
  async #writeBricks(shard: ShardWriter, sy: number, sx: number, first: number, count: number): Promise<void> {
    const [nx, ny] = this.level.size;
    const y0 = sy * SHARD_ZYX[1];
    const x0 = sx * SHARD_ZYX[2];
    const rows = Math.min(CHUNKS_ZYX[1], Math.ceil((ny - y0) / CHUNK_SIDE));
    const columns = Math.min(CHUNKS_ZYX[2], Math.ceil((nx - x0) / CHUNK_SIDE));
    const chunkZ = Math.floor((first % SHARD_ZYX[0]) / CHUNK_SIDE);
    const inZ = first % CHUNK_SIDE;
    const bytesPerVoxel = BYTES_OF_DTYPE[this.#sink.dtype];
    const gather = this.#gather;
    const turn = gather.turn;
    gather.turn = turn === 0 ? 1 : 0;
    await gather.busy[turn];
    const out = gather.arrays[turn]!;
    const whole = this.#slabPlanes === CHUNK_SIDE;
    const depth = whole ? CHUNK_SIDE : count;
    const brick = depth * CHUNK_SIDE * CHUNK_SIDE;
    const used = out.subarray(0, rows * columns * brick);
    const exact = count === depth && nx - x0 >= columns * CHUNK_SIDE && ny - y0 >= rows * CHUNK_SIDE;
    if (!exact) used.fill(0);
    for (let y = 0; y < rows; y++) {
      const wide = Math.min(columns * CHUNK_SIDE, nx - x0);
      const high = Math.min(CHUNK_SIDE, ny - y0 - y * CHUNK_SIDE);
      const corner = (y0 + y * CHUNK_SIDE) * nx + x0;
      gatherRow(this.#slab, corner, this.#planeVoxels, nx, [wide, high, count], used, y * columns * brick, brick);
    }
    const bytes = new Uint8Array(used.buffer, used.byteOffset, used.byteLength);
    const at = (y: number, x: number) => shard.index.offsets[chunkNumber(chunkZ, y, x)]! + inZ * CHUNK_SIDE ** 2 * bytesPerVoxel;
    const writing = whole ? shard.write(bytes, at(0, 0)) : writeParts(shard, bytes, brick * bytesPerVoxel, rows, columns, at);
    const noted = writing.then(() => this.#sink.at("bricks-written"));
    noted.catch(() => {}); // awaited before the buffer is used again and in finish()
    gather.busy[turn] = noted;
  }
}

async function writeParts(
  shard: ShardWriter,
  bytes: Uint8Array,
  partBytes: number,
  rows: number,
  columns: number,
  at: (y: number, x: number) => number,
): Promise<void> {
  for (let y = 0; y < rows; y++)
    for (let x = 0; x < columns; x++) {
      const from = (y * columns + x) * partBytes;
      await shard.write(bytes.subarray(from, from + partBytes), at(y, x));
    }
}

/**
 * Copies a row of bricks side by side out of slices: brick after brick in `out` from `to` on, each [depth, 32, 32], x fastest.
 * @param slab slices of `plane` voxels with rows of `pitch` voxels; `corner` is the first voxel within the first slice.
 * @param box voxels to copy, order xyz: along the row of bricks, within the bricks' height, slices.
 * @param brick voxels from one brick's start to the next.
 */
function gatherRow(
  slab: StoredArray,
  corner: number,
  plane: number,
  pitch: number,
  box: readonly [number, number, number],
  out: StoredArray,
  to: number,
  brick: number,
): void {
  const perWord = 4 / slab.BYTES_PER_ELEMENT;
  const lies = (voxels: number) => voxels % perWord === 0;
  if (lies(corner) && lies(plane) && lies(pitch) && lies(box[0]) && slab.byteOffset % 4 === 0) {
    // Rows that begin and end at whole words are copied four bytes at a time, whatever the type.
    const words = (voxels: number) => voxels / perWord;
    const from = new Int32Array(slab.buffer, slab.byteOffset, Math.floor(slab.byteLength / 4));
    const into = new Int32Array(out.buffer, out.byteOffset, out.byteLength / 4);
    const wordBox = [words(box[0]), box[1], box[2]] as const;
    copyRows(from, words(corner), words(plane), words(pitch), wordBox, into, words(to), words(brick), words(CHUNK_SIDE));
  } else copyRows(slab, corner, plane, pitch, box, out, to, brick, CHUNK_SIDE);
}

/** {@link gatherRow} over any elements, of which `across` make a brick's row. */
function copyRows(
  slab: StoredArray | Int32Array,
  corner: number,
  plane: number,
  pitch: number,
  box: readonly [number, number, number],
  out: StoredArray | Int32Array,
  to: number,
  brick: number,
  across: number,
): void {
  const [wide, high, deep] = box;
  for (let z = 0; z < deep; z++)
    for (let y = 0; y < high; y++) {
      let from = corner + z * plane + y * pitch;
      let at = to + (z * CHUNK_SIDE + y) * across;
      for (let left = wide; left > 0; left -= across) {
        const n = Math.min(left, across);
        for (let x = 0; x < n; x++) out[at + x] = slab[from + x]!;
        from += n;
        at += brick;
      }
    }
}
