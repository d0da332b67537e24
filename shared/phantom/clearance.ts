import type { Vec3 } from "#shared/geometry/types.ts";

/** A ball that something occupies; `owner` names whose it is. */
interface Ball {
  readonly centre: Vec3;
  readonly radius: number;
  readonly owner: string;
}

const CELL_MM = 1.5;
/** Cells along an axis; places beyond half of them from the middle share cells, which costs time only. */
const SIDE = 4096;
const HALF = SIDE / 2;

/** Balls that the solids of a phantom occupy, sorted into cells, for asking how far a place is from others' solids. */
export class Clearance {
  private readonly cells = new Map<number, Ball[]>();
  private readonly reach: number;

  /** @param reach how far apart things must be to be of no interest, surface to surface, millimetres. */
  constructor(reach: number) {
    this.reach = reach;
  }

  /** Occupies balls along a line; points should be closer together than the radii. */
  occupy(owner: string, points: readonly Vec3[], radii: readonly number[]): void {
    points.forEach((centre, i) => {
      const ball: Ball = { centre, radius: radii[i]!, owner };
      const span = ball.radius + this.reach;
      this.eachCell(centre, span, (key) => {
        const list = this.cells.get(key);
        if (list) list.push(ball);
        else this.cells.set(key, [ball]);
      });
    });
  }

  /**
   * The least distance from the surface of a ball at `place` to any other owner's surface, at most `reach`, millimetres;
   * negative where they overlap.
   * @param skip owners that do not count.
   */
  around(place: Vec3, radius: number, skip: (owner: string) => boolean): number {
    let least = this.reach;
    // Balls are listed in every cell they reach, grown by `reach`; the asking ball's own radius is walked here.
    const seen = new Set<Ball>();
    this.eachCell(place, radius, (key) => {
      for (const ball of this.cells.get(key) ?? []) {
        if (seen.has(ball) || skip(ball.owner)) continue;
        seen.add(ball);
        const gap =
          Math.hypot(ball.centre[0] - place[0], ball.centre[1] - place[1], ball.centre[2] - place[2]) - ball.radius - radius;
        if (gap < least) least = gap;
      }
    });
    return least;
  }

  private eachCell(centre: Vec3, span: number, visit: (key: number) => void): void {
    const from = centre.map((c) => Math.floor((c - span) / CELL_MM)) as unknown as Vec3;
    const to = centre.map((c) => Math.floor((c + span) / CELL_MM)) as unknown as Vec3;
    for (let i = from[0]; i <= to[0]; i++)
      for (let j = from[1]; j <= to[1]; j++)
        for (let k = from[2]; k <= to[2]; k++) visit(((i + HALF) * SIDE + j + HALF) * SIDE + k + HALF);
  }
}
