import type { SourceArray } from "#shared/volume/source-array.ts";

/**
 * Voxels with only their stored bits kept, in place: higher bits are cleared, or follow the sign in signed types. Older files keep
 * overlays there. @source DICOM PS3.5 section 8.1.1
 */
export function keepStoredBits(data: SourceArray, bitsStored: number): void {
  if (data instanceof Float32Array || data instanceof Float64Array) return;
  if (data instanceof BigUint64Array || data instanceof BigInt64Array) return;
  const spare = 32 - bitsStored;
  if (bitsStored >= data.BYTES_PER_ELEMENT * 8) return;
  const signed = data instanceof Int8Array || data instanceof Int16Array || data instanceof Int32Array;
  for (let k = 0; k < data.length; k++) data[k] = signed ? (data[k]! << spare) >> spare : (data[k]! << spare) >>> spare;
}
