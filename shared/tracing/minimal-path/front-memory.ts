import { FRONT_WASM_BASE64 } from "#shared/tracing/minimal-path/wasm/front-wasm.generated.ts";
import { type WasmMemory, wasmInstance } from "#shared/tracing/wasm-module.ts";

/** What `wasm/front.wat` exports; addresses in bytes. */
interface FrontExports {
  readonly memory: WasmMemory;
  take(bytes: number): number;
  push(head: number, voxel: number): void;
  expand(front: number, budget: number, target: number, other: number, brief: number): void;
}

type Triple = readonly [number, number, number];

/** The voxels a front may enter, and how their costs come about. */
export interface BoxOfVoxels {
  /** nx, ny, nz. */
  readonly size: Triple;
  /** Millimetres between voxel centres, x, y, z. */
  readonly spacing: Triple;
  /**
   * Fills the costs of the 32-voxel tile of the box that holds `voxel`, all above 0. Left out: all costs are there from the start.
   * What it throws comes out of the front's growth, which can be asked for again.
   */
  readonly fill?: ((voxel: number) => void) | undefined;
}

/** A front's own places in the memory. Views are made anew at each look, since a memory that grows moves them. */
export interface FrontRoom {
  readonly distance: Float64Array;
  readonly mark: Uint8Array;
  /** Byte address of what the front's growth goes by. */
  readonly address: number;
}

/** The memory that the fronts of one box share with the compiled code: costs, and distances, marks and waiting labels of each. */
export interface FrontMemory {
  /** shape [nz, ny, nx]; a view on the memory of now: ask again after a front has grown. */
  readonly cost: Float32Array;
  /**
   * Room for a front with its source waiting. @param buckets in its ring, a power of two. @param width of a bucket.
   * @param goal source x, y, z, goal x, y, z (voxels of the box), half the foresight per millimetre, way between them; or null.
   */
  addFront(source: number, buckets: number, width: number, goal: Float64Array | null): FrontRoom;
  /** Settles voxels, see `expandFront`. @param other address of a front of this memory, or 0. */
  expand(room: FrontRoom, budget: number, target: number, other: number, brief: boolean): void;
  bucketOf(room: FrontRoom): number;
  waiting(room: FrontRoom): number;
  settled(room: FrontRoom): number;
  meeting(room: FrontRoom): { readonly best: number; readonly voxel: number };
  setMeeting(room: FrontRoom, best: number, voxel: number): void;
}

const ALIGN_BYTES = 256;
/** The compiled code reads a little beyond the last voxel. */
const SPARE_BYTES = 64;
/** Places in the memory, see the head of front.wat. */
const OFFSETS = 288;
const HALVES = 400;
const SIZE = 616;
const TOP = 640;
const SPACING = 648;
const FIRST_FREE = 1024;
const CONTROL_BYTES = 256;

const aligned = (bytes: number) => Math.ceil((bytes + SPARE_BYTES) / ALIGN_BYTES) * ALIGN_BYTES;

/** A memory for the fronts of a box; all costs 0. Pages that nothing visits are never resident. */
export function createFrontMemory({ size, spacing, fill }: BoxOfVoxels): FrontMemory {
  const [nx, ny, nz] = size;
  const voxels = nx * ny * nz;
  const wasm = wasmInstance<FrontExports>(FRONT_WASM_BASE64, { domain: { fill: (voxel: number) => fill?.(voxel) } });
  let view = new DataView(wasm.memory.buffer);
  const now = () => {
    if (view.buffer !== wasm.memory.buffer) view = new DataView(wasm.memory.buffer);
    return view;
  };
  const header = now();
  for (let place = 0; place < 27; place++) {
    const [x, y, z] = [(place % 3) - 1, (Math.floor(place / 3) % 3) - 1, Math.floor(place / 9) - 1];
    const half = Math.hypot(x * spacing[0], y * spacing[1], z * spacing[2]) / 2;
    const offset = x + nx * (y + ny * z);
    header.setInt32(OFFSETS + 4 * place, offset, true);
    header.setFloat64(HALVES + 8 * place, half, true);
    const row = 32 * Math.floor(place / 3);
    if (x === -1) header.setInt32(row + 16, offset, true);
    if (x < 1) header.setFloat64(row + 8 * (x + 1), half, true);
  }
  [nx, ny, nz, FIRST_FREE, fill ? 1 : 0].forEach((value, n) => {
    header.setInt32(SIZE + 4 * n, value, true);
  });
  spacing.forEach((mm, axis) => {
    header.setFloat64(SPACING + 8 * axis, mm, true);
  });
  header.setInt32(TOP, FIRST_FREE, true);
  const take = (bytes: number) => wasm.take(aligned(bytes));
  take(4 * voxels);

  return {
    get cost() {
      return new Float32Array(wasm.memory.buffer, FIRST_FREE, voxels);
    },
    addFront(source, buckets, width, goal) {
      const address = take(CONTROL_BYTES);
      const [distance, mark, heads] = [take(8 * voxels), take(voxels), take(4 * buckets)];
      const control = now();
      [distance, mark, heads, buckets - 1].forEach((value, n) => {
        control.setInt32(address + 4 * n, value, true);
      });
      control.setFloat64(address + 16, 1 / width, true);
      control.setInt32(address + 28, 1, true);
      control.setInt32(address + 36, goal ? 1 : 0, true);
      goal?.forEach((value, n) => {
        control.setFloat64(address + 40 + 8 * n, value, true);
      });
      // Not seen is 0; minus nought is as near, and seen.
      control.setFloat64(distance + 8 * source, -0, true);
      wasm.push(heads, source);
      return {
        address,
        get distance() {
          return new Float64Array(wasm.memory.buffer, distance, voxels);
        },
        get mark() {
          return new Uint8Array(wasm.memory.buffer, mark, voxels);
        },
      };
    },
    expand({ address }, budget, target, other, brief) {
      now().setInt32(address + 32, 0, true);
      wasm.expand(address, budget, target, other, brief ? 1 : 0);
    },
    bucketOf: ({ address }) => now().getInt32(address + 24, true),
    waiting: ({ address }) => now().getInt32(address + 28, true),
    settled: ({ address }) => now().getInt32(address + 32, true),
    meeting: ({ address }) => ({ best: now().getFloat64(address + 104, true), voxel: now().getInt32(address + 112, true) }),
    setMeeting({ address }, best, voxel) {
      now().setFloat64(address + 104, best, true);
      now().setInt32(address + 112, voxel, true);
    },
  };
}
