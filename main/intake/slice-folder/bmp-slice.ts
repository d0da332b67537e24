import { basename } from "node:path";
import type { ReadFile } from "#main/intake/read-file.ts";
import { type PictureKind, perMetre } from "#main/intake/slice-folder/picture-slice.ts";
import { unreadable } from "#shared/errors.ts";
import { BMP_HEADER_BYTES, type BmpHeader, bmpHeader, isBmp } from "#shared/volume/bmp/bmp-header.ts";

/** BMP pictures of 8 bits with a palette of greys. */
export const BMP_SLICE: PictureKind = {
  name: "BMP",
  isOne: isBmp,
  async open(file) {
    const { width, height, resolution } = await headerOf(file);
    return { width, height, dtype: "uint8", resolution: perMetre(resolution), notes: [] };
  },
  async read(file, out) {
    const { width, height, pitch, offset, bottomUp, greys, colours } = await headerOf(file);
    const stored = new Uint8Array(pitch * height);
    await file.readInto(stored, offset, "voxels");
    for (let y = 0; y < height; y++) {
      const from = (bottomUp ? height - 1 - y : y) * pitch;
      for (let x = 0; x < width; x++) {
        const number = stored[from + x]!;
        if (number >= colours)
          throw unreadable(basename(file.path), `numbers below ${colours}, the size of the palette`, `${number}`, `row ${y + 1}`);
        out[y * width + x] = greys[number]!;
      }
    }
  },
};

async function headerOf(file: ReadFile): Promise<BmpHeader> {
  return bmpHeader(await file.readUpTo(0, BMP_HEADER_BYTES), file.size, basename(file.path));
}
