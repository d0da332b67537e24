/**
 * Undoes horizontal differencing (predictor 2) in place: each voxel becomes the sum of the differences before it in its row,
 * modulo the type.
 * @param rows integers of 8, 16 or 32 bits (floats as the unsigned integers of their bits), shape [n, width], native order.
 * @source TIFF 6.0, section 14
 */
export function undoDifferencing(rows: Uint8Array | Uint16Array | Uint32Array | BigUint64Array, width: number): void {
  for (let row = 0; row + width <= rows.length; row += width) {
    if (rows instanceof BigUint64Array) for (let x = row + 1; x < row + width; x++) rows[x] = rows[x]! + rows[x - 1]!;
    else for (let x = row + 1; x < row + width; x++) rows[x] = rows[x]! + rows[x - 1]!;
  }
}

/**
 * Undoes the floating point predictor (predictor 3) of one block: in each row the bytes stand most significant first in planes,
 * as differences. Gives little-endian voxels.
 * @param bytes shape [n, width * bytesPerVoxel]; overwritten.
 * @source Adobe Photoshop TIFF Technical Note 3 (from memory)
 */
export function undoFloatPredictor(bytes: Uint8Array, width: number, bytesPerVoxel: number): Uint8Array<ArrayBuffer> {
  const pitch = width * bytesPerVoxel;
  const out = new Uint8Array(bytes.length);
  for (let row = 0; row + pitch <= bytes.length; row += pitch) {
    for (let k = row + 1; k < row + pitch; k++) bytes[k] = bytes[k]! + bytes[k - 1]!;
    for (let x = 0; x < width; x++)
      for (let b = 0; b < bytesPerVoxel; b++)
        out[row + x * bytesPerVoxel + (bytesPerVoxel - 1 - b)] = bytes[row + b * width + x]!;
  }
  return out;
}
