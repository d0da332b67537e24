import type { SourceDtype } from "#shared/volume/dtype.ts";

/** Voxels as a source keeps them. */
export type SourceArray =
  | Uint8Array
  | Int8Array
  | Uint16Array
  | Int16Array
  | Uint32Array
  | Int32Array
  | BigUint64Array
  | BigInt64Array
  | Float32Array
  | Float64Array;

/** A typed array of a source type over a buffer, not copied. @throws RangeError when `byteOffset` does not suit the type. */
export function viewAs(dtype: SourceDtype, buffer: ArrayBuffer, byteOffset: number, length: number): SourceArray {
  switch (dtype) {
    case "uint8":
      return new Uint8Array(buffer, byteOffset, length);
    case "int8":
      return new Int8Array(buffer, byteOffset, length);
    case "uint16":
      return new Uint16Array(buffer, byteOffset, length);
    case "int16":
      return new Int16Array(buffer, byteOffset, length);
    case "uint32":
      return new Uint32Array(buffer, byteOffset, length);
    case "int32":
      return new Int32Array(buffer, byteOffset, length);
    case "uint64":
      return new BigUint64Array(buffer, byteOffset, length);
    case "int64":
      return new BigInt64Array(buffer, byteOffset, length);
    case "float32":
      return new Float32Array(buffer, byteOffset, length);
    case "float64":
      return new Float64Array(buffer, byteOffset, length);
  }
}
