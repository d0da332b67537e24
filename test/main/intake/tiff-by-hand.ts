// TIFF files put together tag by tag from TIFF 6.0 and the BigTIFF design; nothing here is shared with the reader.
import { deflateSync } from "node:zlib";
import { bytesOf } from "#test/main/intake/written-by-hand.ts";

export interface HandTiff {
  readonly width: number;
  readonly height: number;
  /** Values of each page, rows from the top. */
  readonly pages: readonly (readonly number[])[];
  readonly dtype: string;
  readonly little?: boolean;
  readonly big?: boolean;
  readonly rowsPerStrip?: number;
  /** Side of square tiles, a multiple of 16. */
  readonly tile?: number;
  readonly compression?: 1 | 5 | 8 | 32773;
  readonly predictor?: 1 | 2 | 3;
  /** Pixels per unit and unit code (1 none, 2 inch, 3 cm). */
  readonly resolution?: readonly [number, number, number];
  /** Tags to add to a page: [tag, type 3 or 4, values]. */
  readonly more?: (page: number) => readonly (readonly [number, 3 | 4, readonly number[]])[];
}

const FORMAT: Record<string, number> = { u: 1, i: 2, f: 3 };

/** Differences along each row, modulo the type (predictor 2), or byte planes (predictor 3). */
function predicted(values: readonly number[], width: number, tiff: HandTiff): Uint8Array {
  const little = tiff.little ?? true;
  const bytes = bytesOf(values, tiff.dtype, little);
  const per = bytes.length / values.length;
  if (tiff.predictor === 2) {
    const bits = BigInt(per * 8);
    const view = new DataView(bytes.buffer);
    const get = (k: number) =>
      per === 1
        ? BigInt(view.getUint8(k))
        : per === 2
          ? BigInt(view.getUint16(k * 2, little))
          : BigInt(view.getUint32(k * 4, little));
    const set = (k: number, v: bigint) => {
      if (per === 1) view.setUint8(k, Number(v));
      else if (per === 2) view.setUint16(k * 2, Number(v), little);
      else view.setUint32(k * 4, Number(v), little);
    };
    for (let row = 0; row < values.length; row += width)
      for (let x = width - 1; x > 0; x--) set(row + x, BigInt.asUintN(Number(bits), get(row + x) - get(row + x - 1)));
  }
  if (tiff.predictor === 3) {
    const ordered = bytesOf(values, tiff.dtype, false);
    for (let row = 0; row < values.length; row += width) {
      const planes: number[] = [];
      for (let b = 0; b < per; b++) for (let x = 0; x < width; x++) planes.push(ordered[(row + x) * per + b]!);
      for (let k = planes.length - 1; k > 0; k--) planes[k] = (planes[k]! - planes[k - 1]! + 256) % 256;
      bytes.set(planes, row * per);
    }
  }
  return bytes;
}

/** LZW as TIFF 6.0, section 13 describes it: codes most significant bit first, wider once entries 511, 1023, 2047 are added. */
function lzw(bytes: Uint8Array): Uint8Array {
  const out: number[] = [];
  let [held, bits, width] = [0, 0, 9];
  const emit = (code: number) => {
    held = held * 2 ** width + code;
    bits += width;
    while (bits >= 8) {
      bits -= 8;
      out.push(Math.floor(held / 2 ** bits));
      held %= 2 ** bits;
    }
  };
  let table = new Map<string, number>();
  const reset = () => {
    table = new Map(Array.from({ length: 256 }, (_, k) => [String.fromCharCode(k), k]));
    table.set("clear", 256).set("end", 257);
  };
  reset();
  emit(256);
  let run = "";
  for (const byte of bytes) {
    const longer = run + String.fromCharCode(byte);
    if (table.has(longer)) {
      run = longer;
      continue;
    }
    emit(table.get(run)!);
    const entry = table.size;
    table.set(longer, entry);
    if (entry === 511 || entry === 1023 || entry === 2047) width++;
    if (entry === 4094) {
      emit(256);
      reset();
      width = 9;
    }
    run = String.fromCharCode(byte);
  }
  if (run !== "") emit(table.get(run)!);
  emit(257);
  if (bits > 0) out.push((held * 2 ** (8 - bits)) & 255);
  return Uint8Array.from(out);
}

function packed(bytes: Uint8Array, compression: number): Uint8Array {
  if (compression === 5) return lzw(bytes);
  if (compression === 8) return deflateSync(bytes);
  if (compression === 32773) {
    // PackBits with literal runs of one to 128 bytes only: valid, and all a decoder must know besides repeats.
    const out: number[] = [];
    for (let at = 0; at < bytes.length; at += 100) {
      const run = bytes.subarray(at, Math.min(at + 100, bytes.length));
      out.push(run.length - 1, ...run);
    }
    return Uint8Array.from(out);
  }
  return bytes;
}

export function tiffBytes(tiff: HandTiff): Buffer {
  const little = tiff.little ?? true;
  const big = tiff.big ?? false;
  const parts: Buffer[] = [];
  let length = 0;
  const put = (bytes: Uint8Array): number => {
    const at = length;
    parts.push(Buffer.from(bytes));
    length += bytes.length;
    if (length % 2) put(new Uint8Array(1));
    return at;
  };
  const number = (value: number, bytes: number): Buffer => {
    const out = Buffer.alloc(bytes);
    if (bytes === 8) little ? out.writeBigUInt64LE(BigInt(value)) : out.writeBigUInt64BE(BigInt(value));
    else little ? out.writeUIntLE(value, 0, bytes) : out.writeUIntBE(value, 0, bytes);
    return out;
  };
  const word = big ? 8 : 4;
  const header = Buffer.concat([
    Buffer.from(little ? "II" : "MM"),
    number(big ? 43 : 42, 2),
    ...(big ? [number(8, 2), number(0, 2)] : []),
    Buffer.alloc(word),
  ]);
  put(header);
  const links: { from: number; part: number; within: number }[] = [{ from: 0, part: 0, within: header.length - word }];
  const starts: number[] = [];
  const compression = tiff.compression ?? 1;
  for (const [n, values] of tiff.pages.entries()) {
    const blocks: Uint8Array[] = [];
    if (tiff.tile) {
      const side = tiff.tile;
      for (let y0 = 0; y0 < tiff.height; y0 += side)
        for (let x0 = 0; x0 < tiff.width; x0 += side) {
          const tile: number[] = [];
          for (let y = y0; y < y0 + side; y++)
            for (let x = x0; x < x0 + side; x++) tile.push(y < tiff.height && x < tiff.width ? values[y * tiff.width + x]! : 0);
          blocks.push(packed(predicted(tile, side, tiff), compression));
        }
    } else {
      const rows = tiff.rowsPerStrip ?? tiff.height;
      for (let y = 0; y < tiff.height; y += rows)
        blocks.push(packed(predicted(values.slice(y * tiff.width, (y + rows) * tiff.width), tiff.width, tiff), compression));
    }
    const offsets = blocks.map(put);
    const bits = bytesOf([0], tiff.dtype, true).length * 8;
    const tags: [number, number, readonly number[]][] = [
      [256, 4, [tiff.width]],
      [257, 4, [tiff.height]],
      [258, 3, [bits]],
      [259, 3, [compression]],
      [262, 3, [1]],
      ...(tiff.tile ? [] : ([[273, 4, offsets]] as [number, number, number[]][])),
      [277, 3, [1]],
      ...(tiff.tile
        ? []
        : ([
            [278, 4, [tiff.rowsPerStrip ?? tiff.height]],
            [279, 4, blocks.map((b) => b.length)],
          ] as [number, number, number[]][])),
      [339, 3, [FORMAT[tiff.dtype[0]!]!]],
    ];
    if (tiff.predictor) tags.push([317, 3, [tiff.predictor]]);
    if (tiff.tile) {
      tags.push([322, 3, [tiff.tile]], [323, 3, [tiff.tile]], [324, 4, offsets], [325, 4, blocks.map((b) => b.length)]);
    }
    if (tiff.resolution) {
      const [x, y, unit] = tiff.resolution;
      tags.push([282, 5, [Math.round(x * 1000), 1000]], [283, 5, [Math.round(y * 1000), 1000]], [296, 3, [unit]]);
    }
    for (const [tag, type, list] of tiff.more?.(n) ?? []) {
      const same = tags.findIndex(([t]) => t === tag);
      if (same >= 0) tags.splice(same, 1);
      tags.push([tag, type, list]);
    }
    tags.sort((a, b) => a[0] - b[0]);
    const entries = tags.map(([tag, type, list]) => {
      const bytes = Buffer.concat(list.map((v) => number(v, type === 3 ? 2 : 4)));
      const value = bytes.length <= word ? Buffer.concat([bytes, Buffer.alloc(word - bytes.length)]) : number(put(bytes), word);
      return Buffer.concat([number(tag, 2), number(type, 2), number(type === 5 ? 1 : list.length, word), value]);
    });
    const directory = Buffer.concat([number(entries.length, big ? 8 : 2), ...entries, Buffer.alloc(word)]);
    starts.push(put(directory));
    links.push({ from: n + 1, part: 0, within: starts[n]! + directory.length - word });
  }
  const all = Buffer.concat(parts);
  for (const link of links) {
    const next = starts[link.from];
    if (next !== undefined) number(next, word).copy(all, link.within);
  }
  return all;
}
