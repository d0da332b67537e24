/**
 * The shortest decimal number that a 32-bit float stands for: what was typed when it was written (0.04, not 0.03999999910593033).
 * Values that are no finite number come back as they are.
 */
export function float32AsWritten(value: number): number {
  if (!Number.isFinite(value)) return value;
  for (let digits = 6; digits < 9; digits++) {
    const short = Number(value.toPrecision(digits));
    if (Math.fround(short) === value) return short;
  }
  return Number(value.toPrecision(9));
}
