import type { PlaneAxes } from "#renderer/section/view-plane.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** Letters at the pane's four edges in an LPS frame (+x left, +y posterior, +z superior), one or two each. */
export interface EdgeLetters {
  readonly left: string;
  readonly right: string;
  readonly top: string;
  readonly bottom: string;
}

const POSITIVE = ["L", "P", "S"] as const;
const NEGATIVE = ["R", "A", "I"] as const;
/** A second letter stands when the direction leans to it by more than about 22 degrees. */
const SECOND = Math.sin((22.5 * Math.PI) / 180);

export function edgeLetters(axes: PlaneAxes): EdgeLetters {
  const opposite = (v: Vec3): Vec3 => [-v[0], -v[1], -v[2]];
  return {
    right: lettersOf(axes.right),
    left: lettersOf(opposite(axes.right)),
    bottom: lettersOf(axes.down),
    top: lettersOf(opposite(axes.down)),
  };
}

function lettersOf(direction: Vec3): string {
  return [0, 1, 2]
    .map((axis) => ({
      size: Math.abs(direction[axis]!),
      letter: direction[axis]! >= 0 ? POSITIVE[axis]! : NEGATIVE[axis]!,
    }))
    .sort((a, b) => b.size - a.size)
    .filter(({ size }, rank) => rank === 0 || (rank === 1 && size > SECOND))
    .map(({ letter }) => letter)
    .join("");
}
