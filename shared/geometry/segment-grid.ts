import type { Vec3 } from "#shared/geometry/types.ts";

/** The nearest place on a set of polylines: its distance, the segment's number, and the share along the segment. */
export interface NearestSegment {
  distance: number;
  segment: number;
  share: number;
}

/**
 * Polylines cut into segments and sorted into cubic cells, for nearest-place questions.
 * Coordinates in one unit (millimetres here); lines of one point count as a segment without length.
 */
export class SegmentGrid {
  /** Number of the line each segment belongs to; shape [segments]. */
  readonly lineOf: Int32Array;
  /** Number of each segment's first point within its line; shape [segments]. */
  readonly pointOf: Int32Array;
  /** shape [segments, 6]: x, y, z of both ends. */
  private readonly ends: Float64Array;
  private readonly cells = new Map<number, number[]>();
  private readonly low: [number, number, number] = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
  private readonly count: [number, number, number] = [1, 1, 1];

  /** @param cell side of a cell, > 0; about the distance that questions are asked for. */
  constructor(
    lines: readonly (readonly Vec3[])[],
    private readonly cell: number,
  ) {
    const total = lines.reduce((sum, line) => sum + (line.length === 0 ? 0 : Math.max(1, line.length - 1)), 0);
    this.lineOf = new Int32Array(total);
    this.pointOf = new Int32Array(total);
    this.ends = new Float64Array(6 * total);
    const high: [number, number, number] = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
    let at = 0;
    lines.forEach((line, number) => {
      for (let k = 0; k < line.length && (k < line.length - 1 || line.length === 1); k++) {
        const [a, b] = [line[k]!, line[Math.min(k + 1, line.length - 1)]!];
        this.lineOf[at] = number;
        this.pointOf[at] = k;
        this.ends.set(a, 6 * at);
        this.ends.set(b, 6 * at + 3);
        for (const axis of [0, 1, 2] as const) {
          this.low[axis] = Math.min(this.low[axis], a[axis], b[axis]);
          high[axis] = Math.max(high[axis], a[axis], b[axis]);
        }
        at += 1;
      }
    });
    for (const axis of [0, 1, 2] as const)
      this.count[axis] = total === 0 ? 1 : Math.floor((high[axis] - this.low[axis]) / cell) + 1;
    for (let s = 0; s < total; s++) this.sortIn(s);
  }

  get segments(): number {
    return this.lineOf.length;
  }

  /** The nearest place to `p` among the lines that `accepts` lets pass; distance Infinity when there is none. Ties go to the lower segment. */
  nearest(p: Vec3, accepts?: (line: number) => boolean): NearestSegment {
    const best: NearestSegment = { distance: Number.POSITIVE_INFINITY, segment: -1, share: 0 };
    if (this.segments === 0) return best;
    const home = [this.cellOf(p[0], 0), this.cellOf(p[1], 1), this.cellOf(p[2], 2)] as const;
    const rings = Math.max(...home.map((c, axis) => Math.max(Math.abs(c), Math.abs(this.count[axis]! - 1 - c))));
    const outside = Math.max(0, ...home.map((c, axis) => Math.max(-c, c - this.count[axis]! + 1)));
    for (let ring = outside; ring <= rings && (ring - 1) * this.cell <= best.distance; ring++) {
      if ((2 * ring + 1) ** 3 > 8 * this.segments) return this.nearestOfAll(p, accepts);
      this.eachCellOfRing(home, ring, (list) => this.offer(p, list, accepts, best));
    }
    return best;
  }

  /** Calls `found` for every segment that comes within `reach` of `p`, in no order, some perhaps more than once. */
  within(p: Vec3, reach: number, found: (line: number, distance: number) => void): void {
    const from = [0, 1, 2].map((axis) => Math.max(0, Math.floor((p[axis]! - reach - this.low[axis]!) / this.cell)));
    const to = [0, 1, 2].map((axis) =>
      Math.min(this.count[axis]! - 1, Math.floor((p[axis]! + reach - this.low[axis]!) / this.cell)),
    );
    for (let z = from[2]!; z <= to[2]!; z++) {
      for (let y = from[1]!; y <= to[1]!; y++) {
        for (let x = from[0]!; x <= to[0]!; x++) {
          for (const s of this.cells.get(this.key(x, y, z)) ?? []) {
            const d = this.measure(s, p).distance;
            if (d <= reach) found(this.lineOf[s]!, d);
          }
        }
      }
    }
  }

  private nearestOfAll(p: Vec3, accepts: ((line: number) => boolean) | undefined): NearestSegment {
    const best: NearestSegment = { distance: Number.POSITIVE_INFINITY, segment: -1, share: 0 };
    this.offer(p, Array.from(this.lineOf.keys()), accepts, best);
    return best;
  }

  private offer(p: Vec3, list: readonly number[], accepts: ((line: number) => boolean) | undefined, best: NearestSegment): void {
    for (const s of list) {
      if (accepts && !accepts(this.lineOf[s]!)) continue;
      const { distance, share } = this.measure(s, p);
      if (distance < best.distance || (distance === best.distance && s < best.segment)) {
        best.distance = distance;
        best.segment = s;
        best.share = share;
      }
    }
  }

  private measure(s: number, p: Vec3): { distance: number; share: number } {
    const e = this.ends;
    const at = 6 * s;
    const [ax, ay, az] = [e[at]!, e[at + 1]!, e[at + 2]!];
    const [x, y, z] = [e[at + 3]! - ax, e[at + 4]! - ay, e[at + 5]! - az];
    const squared = x * x + y * y + z * z;
    const raw = squared === 0 ? 0 : ((p[0] - ax) * x + (p[1] - ay) * y + (p[2] - az) * z) / squared;
    const share = Math.max(0, Math.min(1, raw));
    const [dx, dy, dz] = [p[0] - ax - x * share, p[1] - ay - y * share, p[2] - az - z * share];
    return { distance: Math.sqrt(dx * dx + dy * dy + dz * dz), share };
  }

  private eachCellOfRing(home: readonly [number, number, number], ring: number, visit: (list: readonly number[]) => void): void {
    for (let dz = -ring; dz <= ring; dz++) {
      for (let dy = -ring; dy <= ring; dy++) {
        const onShell = Math.abs(dz) === ring || Math.abs(dy) === ring;
        for (let dx = -ring; dx <= ring; dx += onShell || ring === 0 ? 1 : 2 * ring) {
          const [x, y, z] = [home[0] + dx, home[1] + dy, home[2] + dz];
          if (x < 0 || y < 0 || z < 0 || x >= this.count[0] || y >= this.count[1] || z >= this.count[2]) continue;
          const list = this.cells.get(this.key(x, y, z));
          if (list) visit(list);
        }
      }
    }
  }

  private sortIn(s: number): void {
    const box = [0, 1, 2].map((axis) => {
      const [a, b] = [this.ends[6 * s + axis]!, this.ends[6 * s + 3 + axis]!];
      return [this.cellOf(Math.min(a, b), axis), this.cellOf(Math.max(a, b), axis)] as const;
    });
    for (let z = box[2]![0]; z <= box[2]![1]; z++) {
      for (let y = box[1]![0]; y <= box[1]![1]; y++) {
        for (let x = box[0]![0]; x <= box[0]![1]; x++) {
          const key = this.key(x, y, z);
          const list = this.cells.get(key);
          if (list) list.push(s);
          else this.cells.set(key, [s]);
        }
      }
    }
  }

  private cellOf(value: number, axis: number): number {
    return Math.floor((value - this.low[axis]!) / this.cell);
  }

  private key(x: number, y: number, z: number): number {
    return (z * this.count[1] + y) * this.count[0] + x;
  }
}
