// NIfTI-1 files put together field by field from the format's definition, nifti1.h (from memory); nothing here is shared with the reader.
import { bytesOf } from "#test/main/intake/written-by-hand.ts";

export interface HandNifti {
  /** dim[1] and on. */
  readonly sizes: readonly number[];
  readonly dtype: string;
  readonly values: readonly number[];
  readonly little?: boolean;
  /** pixdim[0] (qfac), pixdim[1..3]. */
  readonly pixdim?: readonly [number, number, number, number];
  readonly xyzt?: number;
  /** Code, then b, c, d and the offset. */
  readonly qform?: readonly [number, number, number, number, number, number, number];
  /** Code, then twelve numbers row by row. */
  readonly sform?: readonly [number, readonly number[]];
  readonly scale?: readonly [number, number];
  readonly voxOffset?: number;
  /** Header alone, magic `ni1`. */
  readonly pair?: boolean;
}

const CODES: Record<string, [number, number]> = {
  uint8: [2, 8],
  int16: [4, 16],
  int32: [8, 32],
  float32: [16, 32],
  float64: [64, 64],
  int8: [256, 8],
  uint16: [512, 16],
  uint32: [768, 32],
  int64: [1024, 64],
  uint64: [1280, 64],
};

export function niftiBytes(order: HandNifti): Buffer {
  const little = order.little ?? true;
  const offset = order.voxOffset ?? (order.pair ? 0 : 352);
  const head = Buffer.alloc(order.pair ? 348 : Math.max(352, offset));
  const short = (at: number, v: number) => (little ? head.writeInt16LE(v, at) : head.writeInt16BE(v, at));
  const float = (at: number, v: number) => (little ? head.writeFloatLE(v, at) : head.writeFloatBE(v, at));
  if (little) head.writeInt32LE(348, 0);
  else head.writeInt32BE(348, 0);
  short(40, order.sizes.length);
  for (let k = 0; k < 7; k++) short(42 + 2 * k, order.sizes[k] ?? 1);
  const [code, bits] = CODES[order.dtype]!;
  short(70, code);
  short(72, bits);
  (order.pixdim ?? [1, 0.04, 0.04, 0.04]).forEach((v, k) => {
    float(76 + 4 * k, v);
  });
  float(108, offset);
  float(112, order.scale?.[0] ?? 0);
  float(116, order.scale?.[1] ?? 0);
  head[123] = order.xyzt ?? 2;
  short(252, order.qform?.[0] ?? 0);
  for (let k = 0; k < 6; k++) float(256 + 4 * k, order.qform?.[k + 1] ?? 0);
  short(254, order.sform?.[0] ?? 0);
  for (let k = 0; k < 12; k++) float(280 + 4 * k, order.sform?.[1][k] ?? 0);
  head.write(order.pair ? "ni1\0" : "n+1\0", 344, "latin1");
  return order.pair ? head : Buffer.concat([head, bytesOf(order.values, order.dtype, little)]);
}
