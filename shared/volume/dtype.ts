/** Voxel types a source may have. */
export type SourceDtype = "uint8" | "int8" | "uint16" | "int16" | "uint32" | "int32" | "uint64" | "int64" | "float32" | "float64";
/** Voxel types the library stores; the others are converted at intake (`records`: the first that holds every value). */
export type StoredDtype = "uint8" | "uint16" | "int16" | "float32";

export type StoredArray = Uint8Array | Uint16Array | Int16Array | Float32Array;

/** Bytes of one voxel. */
export const BYTES_OF_DTYPE: Readonly<Record<SourceDtype, number>> = {
  uint8: 1,
  int8: 1,
  uint16: 2,
  int16: 2,
  uint32: 4,
  int32: 4,
  uint64: 8,
  int64: 8,
  float32: 4,
  float64: 8,
};

/** A zeroed array of `length` voxels of a stored type. */
export function createStored(dtype: StoredDtype, length: number): StoredArray {
  switch (dtype) {
    case "uint8":
      return new Uint8Array(length);
    case "uint16":
      return new Uint16Array(length);
    case "int16":
      return new Int16Array(length);
    case "float32":
      return new Float32Array(length);
  }
}
