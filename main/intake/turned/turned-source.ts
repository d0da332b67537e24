import { stopIfAborted } from "#main/intake/read-file.ts";
import type { PlaneRun, SliceSource } from "#main/intake/slice-source.ts";
import { StoredChunks } from "#main/intake/turned/stored-chunks.ts";
import type { SpecimenVolume } from "#shared/api/specimen.ts";
import { type Turn, turnedFrame } from "#shared/study/turn.ts";
import { BYTES_OF_DTYPE, type StoredDtype } from "#shared/volume/dtype.ts";
import type { VolumeGrid } from "#shared/volume/grid.ts";
import { type SourceArray, viewAs } from "#shared/volume/source-array.ts";

/** Voxels held at once besides one chunk. */
const RUN_BYTES = 256 * 1024 * 1024;

export interface TurnedScan {
  /** The store of the scan as it is. */
  readonly store: string;
  readonly volume: SpecimenVolume;
  readonly turn: Turn;
  /** Name that the turned scan goes by; the scan's own stands nowhere. */
  readonly name: string;
}

/**
 * A stored scan as a stream of slices of the turned one, in the neutral frame of `turnedFrame`. Every chunk of the store is read
 * once where 32 slices fit into memory; voxels are moved, none is changed.
 */
export function turnedSource({ store, volume, turn, name }: TurnedScan): SliceSource {
  const { dtype } = volume;
  const grid: VolumeGrid = volume;
  const { grid: shown } = turnedFrame(grid, turn);
  const chunks = new StoredChunks(store, volume);
  const [nx, ny, nz] = shown.size;
  return {
    name,
    path: name,
    bytes: nx * ny * nz * BYTES_OF_DTYPE[dtype],
    seekable: true,
    header: {
      family: "generated",
      dtype,
      size: shown.size,
      headerSpacing: shown.spacing,
      unit: "mm",
      mmPerUnit: [1, 1, 1],
      origin: shown.origin,
      originMmPerUnit: [1, 1, 1],
      direction: shown.direction,
      frame: shown.frame,
      notes: [],
    },
    bytesRead: () => chunks.bytesRead,
    readPlanes: (z0, z1, signal) => turnedPlanes(chunks, { grid, turn, dtype, z0, z1, signal }),
    fingerprint: async () => "",
    close: async () => chunks.close(),
  };
}

interface Planes {
  readonly grid: VolumeGrid;
  readonly turn: Turn;
  readonly dtype: StoredDtype;
  readonly z0: number;
  readonly z1: number;
  readonly signal: AbortSignal | undefined;
}

async function* turnedPlanes(chunks: StoredChunks, planes: Planes): AsyncGenerator<PlaneRun, void, void> {
  const { grid, turn, dtype, z0, z1, signal } = planes;
  const { axes, flips } = turn;
  const [nx, ny] = [grid.size[axes[0]]!, grid.size[axes[1]]!];
  const planeBytes = nx * ny * BYTES_OF_DTYPE[dtype];
  const side = chunks.sides[axes[2]]!;
  const most = Math.max(1, Math.min(side, Math.floor(RUN_BYTES / planeBytes)));
  const buffer = new ArrayBuffer(Math.max(0, Math.min(most, z1 - z0)) * planeBytes);
  const deep = grid.size[axes[2]]!;
  for (let z = z0; z < z1; ) {
    // Stored indices along the turned z axis; a run stays within one layer of chunks.
    const at = (shownZ: number) => (flips[2] ? deep - 1 - shownZ : shownZ);
    const layer = Math.floor(at(z) / side);
    const left = flips[2] ? at(z) - layer * side + 1 : (layer + 1) * side - at(z);
    const count = Math.min(most, z1 - z, left);
    const data = viewAs(dtype, buffer, 0, count * nx * ny);
    const [low, high] = flips[2] ? [at(z) - count + 1, at(z) + 1] : [at(z), at(z) + count];
    const range: [number, number][] = grid.size.map((side) => [0, side]);
    range[axes[2]] = [low, high];
    fill(chunks, grid, turn, range, data, [1, nx, nx * ny], z, signal);
    yield { z, count, data };
    z += count;
  }
}

/** Moves the stored voxels of a box to their turned places. @param range stored indices per axis x, y, z, [from, to) */
function fill(
  chunks: StoredChunks,
  grid: VolumeGrid,
  { axes, flips }: Turn,
  range: readonly [number, number][],
  data: SourceArray,
  strides: readonly [number, number, number],
  firstPlane: number,
  signal: AbortSignal | undefined,
): void {
  // Per stored axis: where a voxel's shown index goes in `data`, as start + index * step.
  const step = [0, 0, 0];
  let start = -firstPlane * strides[2];
  for (const k of [0, 1, 2] as const) {
    const axis = axes[k];
    step[axis] = flips[k] ? -strides[k] : strides[k];
    if (flips[k]) start += (grid.size[axis]! - 1) * strides[k];
  }
  const [sx, sy, sz] = chunks.sides;
  const first = range.map(([from], axis) => Math.floor(from / chunks.sides[axis]!));
  const last = range.map(([, to], axis) => Math.ceil(to / chunks.sides[axis]!));
  for (let cz = first[2]!; cz < last[2]!; cz += 1)
    for (let cy = first[1]!; cy < last[1]!; cy += 1)
      for (let cx = first[0]!; cx < last[0]!; cx += 1) {
        stopIfAborted(signal, "turning the scan");
        const chunk = chunks.read(cz, cy, cx);
        const [x0, x1] = within(range[0]!, cx, sx);
        const [y0, y1] = within(range[1]!, cy, sy);
        const [z0, z1] = within(range[2]!, cz, sz);
        for (let z = z0; z < z1; z += 1)
          for (let y = y0; y < y1; y += 1) {
            let from = ((z % sz) * sy + (y % sy)) * sx + (x0 % sx);
            let to = start + x0 * step[0]! + y * step[1]! + z * step[2]!;
            for (let x = x0; x < x1; x += 1, from += 1, to += step[0]!) data[to] = chunk[from]!;
          }
      }
}

function within([from, to]: readonly [number, number], chunk: number, side: number): [number, number] {
  return [Math.max(from, chunk * side), Math.min(to, (chunk + 1) * side)];
}
