/** A packed chunk that is no whole Blosc frame of the kind read here; the caller says which file. */
export class BloscFault extends Error {}

const HEADER_BYTES = 16;
const SHUFFLED = 0x1;
const COPIED = 0x2;
const BIT_SHUFFLED = 0x4;
const NOT_SPLIT = 0x10;
/** Number of the LZ4 format in the upper three bits of the flags; LZ4HC writes it too. */
const LZ4 = 1;
/** Blocks are split into streams, one per byte of a voxel, only where each has as many bytes. */
const LEAST_STREAM = 128;

/**
 * The bytes of a Blosc 1 frame with LZ4 inside, shuffled by bytes or not.
 * @param most bytes that may come out; a header that says more is refused before anything is allocated.
 * @throws BloscFault
 * @source c-blosc 1: README_HEADER and the layout of blocks; LZ4 block format description.
 */
export function unpackBlosc(bytes: Uint8Array, most: number): Uint8Array {
  if (bytes.length < HEADER_BYTES) throw new BloscFault(`${bytes.length} bytes`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const flags = bytes[2]!;
  const voxel = bytes[3]!;
  const total = view.getUint32(4, true);
  const blockBytes = view.getUint32(8, true);
  if (total > most) throw new BloscFault(`a frame of ${total} bytes, at most ${most} expected`);
  if (view.getUint32(12, true) > bytes.length) throw new BloscFault("a frame that was cut short");
  const out = new Uint8Array(total);
  if (flags & COPIED) {
    if (bytes.length < HEADER_BYTES + total) throw new BloscFault("a frame that was cut short");
    out.set(bytes.subarray(HEADER_BYTES, HEADER_BYTES + total));
    return out;
  }
  if (flags >> 5 !== LZ4 || flags & BIT_SHUFFLED) throw new BloscFault("another codec than LZ4, or shuffled bits");
  if (voxel < 1 || (blockBytes < 1 && total > 0)) throw new BloscFault("a header without sizes");
  const blocks = total === 0 ? 0 : Math.ceil(total / blockBytes);
  if (HEADER_BYTES + 4 * blocks > bytes.length) throw new BloscFault("a frame that was cut short");
  const shuffled = flags & SHUFFLED && voxel > 1 ? new Uint8Array(Math.min(blockBytes, total)) : null;
  for (let n = 0; n < blocks; n++) {
    const from = n * blockBytes;
    const length = Math.min(blockBytes, total - from);
    const isSplit = !(flags & NOT_SPLIT) && length === blockBytes && Math.floor(blockBytes / voxel) >= LEAST_STREAM;
    const streams = isSplit ? voxel : 1;
    const target = out.subarray(from, from + length);
    unpackBlock(
      bytes,
      view,
      view.getUint32(HEADER_BYTES + 4 * n, true),
      streams,
      shuffled ? shuffled.subarray(0, length) : target,
    );
    if (shuffled) unshuffle(shuffled, length, voxel, target);
  }
  return out;
}

/** One block: its streams follow each other, each led by its packed length; one that did not shrink lies there as it is. */
function unpackBlock(bytes: Uint8Array, view: DataView, start: number, streams: number, out: Uint8Array): void {
  const length = Math.floor(out.length / streams);
  if (length * streams !== out.length) throw new BloscFault("a block that cannot be split");
  let at = start;
  for (let k = 0; k < streams; k++) {
    if (at + 4 > bytes.length) throw new BloscFault("a block that was cut short");
    const packed = view.getUint32(at, true);
    at += 4;
    if (at + packed > bytes.length) throw new BloscFault("a block that was cut short");
    const stream = bytes.subarray(at, at + packed);
    const target = out.subarray(k * length, (k + 1) * length);
    if (packed === length) target.set(stream);
    else unpackLz4(stream, target);
    at += packed;
  }
}

/** Fills `out` exactly from an LZ4 block. */
function unpackLz4(from: Uint8Array, out: Uint8Array): void {
  let i = 0;
  let o = 0;
  const end = from.length;
  while (i < end) {
    const token = from[i++]!;
    let literals = token >> 4;
    if (literals === 15) {
      let more = 255;
      while (more === 255) {
        if (i >= end) throw new BloscFault("a stream that was cut short");
        more = from[i++]!;
        literals += more;
      }
    }
    if (i + literals > end || o + literals > out.length) throw new BloscFault("a stream that does not fit");
    for (const stop = o + literals; o < stop; ) out[o++] = from[i++]!;
    if (i === end) break; // the last sequence has no match
    if (i + 2 > end) throw new BloscFault("a stream that was cut short");
    const distance = from[i]! | (from[i + 1]! << 8);
    i += 2;
    let match = (token & 15) + 4;
    if (match === 19) {
      let more = 255;
      while (more === 255) {
        if (i >= end) throw new BloscFault("a stream that was cut short");
        more = from[i++]!;
        match += more;
      }
    }
    if (distance === 0 || distance > o || o + match > out.length) throw new BloscFault("a stream that does not fit");
    // Byte by byte: a match may reach into what it writes.
    for (const stop = o + match; o < stop; o++) out[o] = out[o - distance]!;
  }
  if (o !== out.length) throw new BloscFault("a stream that ends early");
}

/** Puts the first bytes of all voxels, then the second ones ..., back together; bytes beyond whole voxels follow as they are. */
function unshuffle(from: Uint8Array, length: number, voxel: number, out: Uint8Array): void {
  const count = Math.floor(length / voxel);
  for (let b = 0; b < voxel; b++) {
    const stream = b * count;
    for (let n = 0, to = b; n < count; n++, to += voxel) out[to] = from[stream + n]!;
  }
  for (let n = count * voxel; n < length; n++) out[n] = from[n]!;
}
