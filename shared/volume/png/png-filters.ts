/**
 * Undoes the row filters of a PNG picture.
 * @param packed rows of one filter byte and `pitch` bytes. @param out rows of `pitch` bytes, in order; 16-bit values stay big-endian.
 * @returns the number of the first row whose filter is unknown, or -1.
 * @source PNG specification (W3C), section 9.
 */
export function undoPngFilters(packed: Uint8Array, pitch: number, bytesPerPixel: number, out: Uint8Array): number {
  const rows = out.length / pitch;
  const none = new Uint8Array(pitch);
  for (let y = 0; y < rows; y++) {
    const from = y * (pitch + 1);
    const line = packed.subarray(from + 1, from + 1 + pitch);
    const row = out.subarray(y * pitch, (y + 1) * pitch);
    const above = y === 0 ? none : out.subarray((y - 1) * pitch, y * pitch);
    if (!undoRow(packed[from]!, line, above, bytesPerPixel, row)) return y;
  }
  return -1;
}

function undoRow(filter: number, line: Uint8Array, above: Uint8Array, step: number, row: Uint8Array): boolean {
  const n = row.length;
  switch (filter) {
    case 0:
      row.set(line);
      return true;
    case 1:
      for (let k = 0; k < n; k++) row[k] = line[k]! + (k < step ? 0 : row[k - step]!);
      return true;
    case 2:
      for (let k = 0; k < n; k++) row[k] = line[k]! + above[k]!;
      return true;
    case 3:
      for (let k = 0; k < n; k++) row[k] = line[k]! + (((k < step ? 0 : row[k - step]!) + above[k]!) >> 1);
      return true;
    case 4:
      for (let k = 0; k < n; k++) {
        const left = k < step ? 0 : row[k - step]!;
        const corner = k < step ? 0 : above[k - step]!;
        row[k] = line[k]! + nearest(left, above[k]!, corner);
      }
      return true;
    default:
      return false;
  }
}

/** Whichever of left, above and corner is nearest to left + above - corner; ties in that order (Paeth). */
function nearest(left: number, above: number, corner: number): number {
  const guess = left + above - corner;
  const [a, b, c] = [Math.abs(guess - left), Math.abs(guess - above), Math.abs(guess - corner)];
  return a <= b && a <= c ? left : b <= c ? above : corner;
}
