import { unreadable } from "#shared/errors.ts";
import type { SourceDtype, StoredArray, StoredDtype } from "#shared/volume/dtype.ts";
import type { SourceArray } from "#shared/volume/source-array.ts";
import type { ValueFacts } from "#shared/volume/value-survey.ts";

/** The type a scan is kept in, and the sentence that says what happened to its values (null: nothing). */
export interface StoredType {
  readonly dtype: StoredDtype;
  readonly sentence: string | null;
}

/** The stored type that follows from the source's type alone; null when the values must be seen first. */
export function storedTypeOf(dtype: SourceDtype): StoredType | null {
  switch (dtype) {
    case "uint8":
    case "uint16":
    case "int16":
    case "float32":
      return { dtype, sentence: null };
    case "int8":
      return { dtype: "int16", sentence: "Voxels of type int8 are kept as int16; no value changes." };
    default:
      return null;
  }
}

/**
 * The first of int16, uint16, float32 that holds every value exactly, else float32 with the greatest rounding stated.
 * @param facts of all values of the scan.
 * @throws unreadable-input when a value lies beyond the range of float32.
 */
export function chooseStoredType(dtype: SourceDtype, facts: ValueFacts, file: string): StoredType {
  const known = storedTypeOf(dtype);
  if (known) return known;
  const kept = (to: StoredDtype) => ({ dtype: to, sentence: `Voxels of type ${dtype} are kept as ${to}; no value changes.` });
  if (facts.integral && facts.min >= -32768 && facts.max <= 32767) return kept("int16");
  if (facts.integral && facts.min >= 0 && facts.max <= 65535) return kept("uint16");
  if (facts.float32Rounding === 0) return kept("float32");
  if (!Number.isFinite(facts.float32Rounding)) {
    throw unreadable(
      file,
      "values that float32 can hold",
      `values from ${facts.min} to ${facts.max}`,
      "voxels",
      "Rescale the scan.",
    );
  }
  const rounding = Number(facts.float32Rounding.toPrecision(3));
  return { dtype: "float32", sentence: `Voxels of type ${dtype} are kept as float32; values change by up to ${rounding}.` };
}

/** The sentence for a type that only the values can settle, before they have been seen. */
export function undecidedSentence(dtype: SourceDtype): string {
  return `Voxels of type ${dtype} will be kept as int16, uint16 or float32, whichever comes first in holding every value; rounding is stated.`;
}

/** Copies values into the chosen type; `out` has their length. Values must fit it (see {@link chooseStoredType}). */
export function convertInto(values: SourceArray, out: StoredArray): void {
  if (values instanceof BigUint64Array || values instanceof BigInt64Array) {
    for (let i = 0; i < values.length; i++) out[i] = Number(values[i]!);
  } else out.set(values);
}
