/**
 * True when two records say the same: deep equality of JSON values, where a key that is `undefined` counts as absent (as it
 * does once written). Quick for records that share structure. Complexity: size of the smaller record.
 */
export function sameRecord(a: unknown, b: unknown): boolean {
  if (a === b) return true;
  if (typeof a !== "object" || typeof b !== "object" || a === null || b === null) return false;
  if (Array.isArray(a) !== Array.isArray(b)) return false;
  if (Array.isArray(a) && Array.isArray(b)) return a.length === b.length && a.every((value, i) => sameRecord(value, b[i]));
  const left = definedKeys(a);
  const right = definedKeys(b);
  if (left.length !== right.length) return false;
  return left.every(
    (key) => Object.hasOwn(b, key) && sameRecord((a as Record<string, unknown>)[key], (b as Record<string, unknown>)[key]),
  );
}

function definedKeys(record: object): string[] {
  return Object.keys(record).filter((key) => (record as Record<string, unknown>)[key] !== undefined);
}
