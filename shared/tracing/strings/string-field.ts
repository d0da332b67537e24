import type { Vec3 } from "#shared/geometry/types.ts";
import { indexToLocal } from "#shared/tracing/local-frame.ts";
import { RIDGE_TILE_SIDE } from "#shared/tracing/ridge/ridge-tiles.ts";
import { brightShare, isRimOrMuscle, STRING_SHARE } from "#shared/tracing/strings/bright-share.ts";
import { ridgePointsOfTile } from "#shared/tracing/strings/ridge-points.ts";
import type { TraceContext } from "#shared/tracing/trace-context.ts";

/** A point on the crest of a string. */
export interface StringPoint {
  /** In the order in which points were found; says nothing else. */
  readonly id: number;
  /** Voxel of the level. */
  readonly voxel: readonly [number, number, number];
  /** Millimetres along the voxel axes. */
  readonly at: Vec3;
  readonly strength: number;
  readonly radiusMm: number;
  /** See `brightShare`. */
  readonly share: number;
}

/** The string points of one level, found tile by tile as they are asked for. */
export interface StringField {
  readonly context: TraceContext;
  readonly level: number;
  readonly spacing: Vec3;
  readonly points: readonly StringPoint[];
  /** String points of the tiles that touch the box from `low` to `high` (voxels, both included); finds them where needed. */
  load(low: Vec3, high: Vec3): void;
  /** Loaded points within `reach` voxels on each axis of a voxel. */
  around(voxel: readonly [number, number, number], reach: readonly [number, number, number]): StringPoint[];
  /** Tiles looked at so far. */
  readonly tiles: number;
}

const N = RIDGE_TILE_SIDE;
/** Points are kept in boxes of this many voxels a side. */
const BOX_SHIFT = 2;

/**
 * An empty field. Points that answer below `least`, and those in sheets and muscle (`brightShare` above that of strings), are no
 * string points. What a tile holds depends on the scan alone, whatever was loaded before.
 * @param least the weakest answer that counts for a radius, grey values.
 */
export function createStringField(context: TraceContext, level: number, least: (radiusMm: number) => number): StringField {
  const grid = context.pyramid.levels[level]!;
  const points: StringPoint[] = [];
  const boxes = new Map<number, StringPoint[]>();
  const loaded = new Set<number>();
  const keyOf = (x: number, y: number, z: number) => (z * 65536 + y) * 65536 + x;

  const loadTile = (i: number, j: number, k: number): void => {
    const key = keyOf(i, j, k);
    if (loaded.has(key)) return;
    loaded.add(key);
    const found = ridgePointsOfTile(context, level, i, j, k, least);
    for (let n = 0; n < found.strengths.length; n++) {
      const voxel = [found.voxels[3 * n]!, found.voxels[3 * n + 1]!, found.voxels[3 * n + 2]!] as const;
      const at = indexToLocal(grid, voxel);
      const radiusMm = found.radii[n]!;
      const share = brightShare(context, at, radiusMm);
      if (share > STRING_SHARE || isRimOrMuscle(context, at, radiusMm, share)) continue;
      const point = { id: points.length, voxel, at, strength: found.strengths[n]!, radiusMm, share };
      points.push(point);
      const box = keyOf(voxel[0] >> BOX_SHIFT, voxel[1] >> BOX_SHIFT, voxel[2] >> BOX_SHIFT);
      const list = boxes.get(box);
      if (list) list.push(point);
      else boxes.set(box, [point]);
    }
  };

  return {
    context,
    level,
    spacing: grid.spacing,
    points,
    load(low, high) {
      const first = [0, 1, 2].map((axis) => Math.max(0, Math.floor(low[axis]! / N)));
      const last = [0, 1, 2].map((axis) => Math.min(Math.ceil(grid.size[axis]! / N) - 1, Math.floor(high[axis]! / N)));
      for (let k = first[2]!; k <= last[2]!; k++)
        for (let j = first[1]!; j <= last[1]!; j++) for (let i = first[0]!; i <= last[0]!; i++) loadTile(i, j, k);
    },
    around([x, y, z], [rx, ry, rz]) {
      const out: StringPoint[] = [];
      for (let c = Math.max(0, z - rz) >> BOX_SHIFT; c <= (z + rz) >> BOX_SHIFT; c++)
        for (let b = Math.max(0, y - ry) >> BOX_SHIFT; b <= (y + ry) >> BOX_SHIFT; b++)
          for (let a = Math.max(0, x - rx) >> BOX_SHIFT; a <= (x + rx) >> BOX_SHIFT; a++)
            for (const point of boxes.get(keyOf(a, b, c)) ?? []) {
              const [px, py, pz] = point.voxel;
              if (Math.abs(px - x) <= rx && Math.abs(py - y) <= ry && Math.abs(pz - z) <= rz) out.push(point);
            }
      return out;
    },
    get tiles() {
      return loaded.size;
    },
  };
}
