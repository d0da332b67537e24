import {
  IDENTITY3,
  type Matrix3,
  type PointMm,
  pointMm,
  type SizeXyz,
  type SpacingMm,
  sizeXyz,
  spacingMm,
  type Vec3,
} from "#shared/geometry/types.ts";
import { indexToMm, invert3, type VolumeGrid } from "#shared/volume/grid.ts";

/**
 * How a specimen is shown turned: axis k of the shown array runs along axis `axes[k]` of the stored one, backwards where
 * `flips[k]`. Voxels are moved, never mixed.
 */
export interface Turn {
  /** A permutation of 0, 1, 2. */
  readonly axes: readonly [number, number, number];
  readonly flips: readonly [boolean, boolean, boolean];
}

const PERMUTATIONS = [
  [0, 1, 2],
  [0, 2, 1],
  [1, 0, 2],
  [1, 2, 0],
  [2, 0, 1],
  [2, 1, 0],
] as const;

/** All 48 ways to lay an array along its own axes, in a fixed order; half of them are mirrors. */
export const ARRAY_TURNS: readonly Turn[] = PERMUTATIONS.flatMap((axes) =>
  Array.from({ length: 8 }, (_, bits): Turn => ({ axes, flips: [(bits & 1) > 0, (bits & 2) > 0, (bits & 4) > 0] })),
);

/**
 * The way from places in the shown frame to the specimen's own: true = linear * shown + shift. The shown frame has its first
 * voxel at 0 and its axes along the array, so it says nothing of the scan's own place and direction.
 */
export interface TurnedFrame {
  /** The grid as shown: origin 0, direction identity, frame `scan`. */
  readonly grid: VolumeGrid;
  /** Row-major. A proper rotation where the scan's direction is orthogonal. */
  readonly linear: Matrix3;
  /** Millimetres, on the grid of 1e-6 mm. */
  readonly shift: Vec3;
}

/** The frame of a scan shown by `turn`. */
export function turnedFrame(grid: VolumeGrid, turn: Turn): TurnedFrame {
  const { axes, flips } = turn;
  const { direction: d, size, spacing } = grid;
  const sign = (k: number) => (flips[k] ? -1 : 1);
  const corner: [number, number, number] = [0, 0, 0];
  for (const k of [0, 1, 2]) if (flips[k]) corner[axes[k]!] = size[axes[k]!]! - 1;
  const first = indexToMm(grid, corner);
  const row = (r: number) => [0, 1, 2].map((k) => sign(k) * d[3 * r + axes[k]!]! + 0);
  return {
    grid: {
      size: sizeXyz(size[axes[0]]!, size[axes[1]]!, size[axes[2]]!) as SizeXyz,
      spacing: spacingMm(spacing[axes[0]]!, spacing[axes[1]]!, spacing[axes[2]]!) as SpacingMm,
      origin: pointMm(0, 0, 0),
      direction: IDENTITY3,
      frame: "scan",
    },
    linear: [...row(0), ...row(1), ...row(2)] as unknown as Matrix3,
    shift: first.map((value) => Math.round(value * 1e6) / 1e6 + 0) as unknown as Vec3,
  };
}

/** +1 when the shown specimen is a turned one, -1 when it would be a mirrored one. */
export function chirality({ linear: m }: TurnedFrame): 1 | -1 {
  const determinant =
    m[0] * (m[4] * m[8] - m[5] * m[7]) - m[1] * (m[3] * m[8] - m[5] * m[6]) + m[2] * (m[3] * m[7] - m[4] * m[6]);
  return determinant > 0 ? 1 : -1;
}

/**
 * The turns a blinded presentation may use: never a mirror, never the stored array itself (its hash would tell), never one
 * whose coordinates are the true ones but for a shift. 22 or 23 of the 24 proper rotations. A scan whose own direction is
 * left-handed is laid along its axes in a left-handed way too, so that what is seen is never mirrored.
 */
export function blindTurns(grid: VolumeGrid): Turn[] {
  return ARRAY_TURNS.filter((turn) => {
    const frame = turnedFrame(grid, turn);
    const asStored = turn.axes.every((axis, k) => axis === k) && !turn.flips.includes(true);
    const asTrue = frame.linear.every((value, i) => Math.abs(value - IDENTITY3[i]!) < 1e-6);
    return chirality(frame) === 1 && !asStored && !asTrue;
  });
}

/**
 * The true place of a shown one, rounded to 1e-6 mm. Where the scan's axes lie along the frame's, whole numbers of 1e-6 mm are
 * exchanged and added: the result is exact. Else it is the nearest point of that grid.
 */
export function trueFromShown({ linear: m, shift }: TurnedFrame, p: Vec3): PointMm {
  const [x, y, z] = [p[0] * 1e6, p[1] * 1e6, p[2] * 1e6];
  const along = (r: number) =>
    Math.round(m[3 * r]! * x + m[3 * r + 1]! * y + m[3 * r + 2]! * z + Math.round(shift[r]! * 1e6)) / 1e6 + 0;
  return pointMm(along(0), along(1), along(2));
}

/**
 * The shown place of a true one. Not rounded, so that {@link trueFromShown} gives every place of the 1e-6 mm grid back bit by
 * bit, whatever the scan's direction.
 */
export function shownFromTrue({ linear, shift }: TurnedFrame, p: Vec3): PointMm {
  const m = invert3(linear);
  const [x, y, z] = [0, 1, 2].map((r) => p[r]! * 1e6 - Math.round(shift[r]! * 1e6)) as [number, number, number];
  const along = (r: number) => (m[3 * r]! * x + m[3 * r + 1]! * y + m[3 * r + 2]! * z) / 1e6 + 0;
  return pointMm(along(0), along(1), along(2));
}

/** The stored index of a shown one, whole numbers for whole numbers. @param size of the stored array, order xyz. */
export function storedIndex({ axes, flips }: Turn, size: SizeXyz, shown: Vec3): Vec3 {
  const stored: [number, number, number] = [0, 0, 0];
  for (const k of [0, 1, 2]) {
    const axis = axes[k]!;
    stored[axis] = flips[k] ? size[axis]! - 1 - shown[k]! : shown[k]!;
  }
  return stored;
}
