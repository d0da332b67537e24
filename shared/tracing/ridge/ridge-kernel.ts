import type { GaussianKernels } from "#shared/tracing/ridge/gaussian-kernels.ts";
import { RIDGE_WASM_BASE64 } from "#shared/tracing/ridge/wasm/ridge-wasm.generated.ts";
import { type WasmMemory, wasmInstance } from "#shared/tracing/wasm-module.ts";

/** What one scale needs on one level's grid. */
export interface BlockScale {
  /** Kernels along x, y, z. */
  readonly kernels: readonly [GaussianKernels, GaussianKernels, GaussianKernels];
  /** sigma^2 / (spacing_a spacing_b) for the pairs xx, yy, zz, xy, xz, yz: turns voxel derivatives into scale-normalised ones. */
  readonly normalise: readonly [number, number, number, number, number, number];
  /** sigma / spacing along x, y, z: turns voxel slopes into scale-normalised ones. */
  readonly slope: readonly [number, number, number];
  /**
   * How much a voxel away from the crest is damped: the measure is multiplied by m^2 / (m^2 + damping * slope^2). 0 = not at all
   * (the published measure); 1 = to a half at one sigma from the crest.
   */
  readonly damping: number;
}

/** The ridge measure's compiled form and the memory that it works in; for one thread, one call at a time. */
export interface RidgeKernel {
  /** Room for a block of grey values, to be filled before {@link RidgeKernel.run}; what it held is kept when it is large enough. */
  block(voxels: number): Float32Array;
  /**
   * The ridge measure of one scale (see `ridgeBlockInto`) over the middle of the block, shape [nz, ny, nx]. The block's shape is
   * [nz + 2 pz, ny + 2 py, nx + 2 px] and stays as it is, so that several scales can be run on it. The answer is
   * overwritten by the next call.
   * @param size nx, ny, nz of the answer, voxels.
   * @param pad px, py, pz: voxels of the block on each side of the answer, at least the reach of the scale's kernels.
   * @param polarity +1 for bright strings, -1 for dark ones.
   */
  run(size: Triple, pad: Triple, scale: BlockScale, polarity: 1 | -1): Float32Array;
}

type Triple = readonly [number, number, number];

/** What `wasm/ridge.wat` exports. */
interface RidgeExports {
  readonly memory: WasmMemory;
  along3(from: number, stride: number, w: number, wEnd: number, bytes: number, o0: number, o1: number, o2: number): void;
  along2(from: number, stride: number, w: number, wEnd: number, bytes: number, o0: number, o1: number): void;
  along1(from: number, stride: number, w: number, wEnd: number, bytes: number, o0: number): void;
  plane(
    band: number,
    bandBytes: number,
    wideBytes: number,
    w: number,
    wEnd: number,
    constants: number,
    rowBytes: number,
    rows: number,
    out: number,
  ): void;
}

const PAGE_BYTES = 65536;
/** Buffers begin at multiples of this, and have at least this much to spare behind them. */
const ALIGN_BYTES = 64;
/** Smooth, first, second: three float32 weights a tap. */
const TAP_BYTES = 12;

/** A kernel with a memory of its own; it grows with the largest block. */
export function createRidgeKernel(): RidgeKernel {
  const wasm = wasmInstance<RidgeExports>(RIDGE_WASM_BASE64);
  let used = 0;
  let blockVoxels = 0;
  let values = new Float32Array(wasm.memory.buffer);

  /** Address of a new buffer behind those in use. */
  const take = (floats: number): number => {
    const from = used;
    used = (Math.ceil((used + 4 * floats) / ALIGN_BYTES) + 1) * ALIGN_BYTES;
    const missing = used - wasm.memory.buffer.byteLength;
    if (missing > 0) wasm.memory.grow(Math.ceil(missing / PAGE_BYTES));
    if (values.buffer !== wasm.memory.buffer) values = new Float32Array(wasm.memory.buffer);
    return from;
  };

  /** Where the taps of a kernel begin and end. */
  const takeKernel = ({ reach, smooth, first, second }: GaussianKernels): [number, number] => {
    const from = take(3 * (reach + 1));
    for (let k = 0; k <= reach; k++) values.set([smooth[k]!, first[k]!, second[k]!], from / 4 + 3 * k);
    return [from, from + TAP_BYTES * (reach + 1)];
  };

  return {
    block(voxels) {
      used = 0;
      const from = take(voxels);
      blockVoxels = Math.max(voxels, 0);
      return values.subarray(from / 4, from / 4 + voxels);
    },
    run(size, pad, { kernels, normalise, slope, damping }, polarity) {
      const [nx, ny, nz] = size;
      const [kx, ky, kz] = kernels;
      const wide = nx + 2 * pad[0];
      const planeBytes = 4 * wide * (ny + 2 * pad[1]);
      // Of each plane only the rows within reach are needed.
      const rowsLength = wide * (ny + 2 * ky.reach);
      const bandLength = wide * ny;
      used = 0;
      const block = take(blockVoxels);
      const [wx, xEnd] = takeKernel(kx);
      const [wy, yEnd] = takeKernel(ky);
      const [wz, zEnd] = takeKernel(kz);
      const constants = take(10);
      values.set([...normalise.map((n) => -polarity * n), ...slope, damping], constants / 4);
      const z0 = take(rowsLength);
      const z1 = take(rowsLength);
      const z2 = take(rowsLength);
      const [z0y0, z0y1, z0y2] = [take(bandLength), take(bandLength), take(bandLength)];
      const [z1y0, z1y1, z2y0] = [take(bandLength), take(bandLength), take(bandLength)];
      const out = take(nx * ny * nz);
      const inRows = 4 * wide * ky.reach;
      for (let z = 0; z < nz; z++) {
        const from = block + (z + pad[2]) * planeBytes + 4 * wide * (pad[1] - ky.reach);
        wasm.along3(from, planeBytes, wz, zEnd, 4 * rowsLength, z0, z1, z2);
        wasm.along3(z0 + inRows, 4 * wide, wy, yEnd, 4 * bandLength, z0y0, z0y1, z0y2);
        wasm.along2(z1 + inRows, 4 * wide, wy, yEnd, 4 * bandLength, z1y0, z1y1);
        wasm.along1(z2 + inRows, 4 * wide, wy, yEnd, 4 * bandLength, z2y0);
        wasm.plane(z0y0 + 4 * pad[0], z0y1 - z0y0, 4 * wide, wx, xEnd, constants, 4 * nx, ny, out + 4 * nx * ny * z);
      }
      return values.subarray(out / 4, out / 4 + nx * ny * nz);
    },
  };
}
