/** A box in one picture: left, top, right, bottom, in voxels; left and top in, right and bottom out. */
export type FlatBox = readonly [number, number, number, number];

/** What of a box a pointer holds: a side or corner (-1 the low one, 1 the high one, 0 neither), all of it, or a new box. */
export type Grip = { readonly across: -1 | 0 | 1; readonly down: -1 | 0 | 1 } | "all" | "new";

/**
 * What a pointer takes hold of at a place. Sides are held from `reach` around them, so that thin boxes can be held as well.
 * @param at and `reach` in voxels, per axis of the picture.
 */
export function gripAt(box: FlatBox, at: readonly [number, number], reach: readonly [number, number]): Grip {
  const near = (axis: 0 | 1): -1 | 0 | 1 => {
    const low = Math.abs(at[axis] - box[axis]);
    const high = Math.abs(at[axis] - box[axis + 2]!);
    return Math.min(low, high) > reach[axis] ? 0 : low < high ? -1 : 1;
  };
  const within = (axis: 0 | 1, more: number) => at[axis] >= box[axis] - more && at[axis] <= box[axis + 2]! + more;
  if (!within(0, reach[0]) || !within(1, reach[1])) return "new";
  const [across, down] = [near(0), near(1)];
  if (across !== 0 || down !== 0) return { across, down };
  return "all";
}

/**
 * The box once the pointer went from one place to another. Edges stay whole numbers inside the picture and at least one apart.
 * @param sides voxels across and down the picture.
 */
export function dragged(
  box: FlatBox,
  grip: Grip,
  from: readonly [number, number],
  to: readonly [number, number],
  sides: readonly [number, number],
): FlatBox {
  const along = (axis: 0 | 1): [number, number] => {
    const side = sides[axis];
    const inside = (edge: number) => Math.min(Math.max(Math.round(edge), 0), side);
    const [low, high] = [box[axis], box[axis + 2]!];
    if (grip === "all") {
      const step = Math.min(Math.max(Math.round(to[axis] - from[axis]), -low), side - high);
      return [low + step, high + step];
    }
    const held = grip === "new" ? null : axis === 0 ? grip.across : grip.down;
    if (held === 0) return [low, high];
    // The edge that stays, and the one that goes along; they may pass each other.
    const stays = held === null ? inside(from[axis]) : held === -1 ? high : low;
    const goes = inside(to[axis]);
    if (goes === stays) return stays < side ? [stays, stays + 1] : [stays - 1, stays];
    return [Math.min(stays, goes), Math.max(stays, goes)];
  };
  const [left, right] = along(0);
  const [top, bottom] = along(1);
  return [left, top, right, bottom];
}
