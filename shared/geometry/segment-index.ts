import type { Vec3 } from "#shared/geometry/types.ts";

/** The nearest place on a set of polylines: its distance, the segment's number (-1 = none), and the share along the segment. */
export interface NearestSegment {
  readonly distance: number;
  readonly segment: number;
  readonly share: number;
}

const LEAF_SEGMENTS = 6;

/**
 * Polylines cut into segments and sorted into a tree of boxes, for nearest-place questions at any distance.
 * Coordinates in one unit (millimetres here); lines of one point count as a segment without length.
 */
export class SegmentIndex {
  /** Number of the line each segment belongs to; shape [segments]. */
  readonly lineOf: Int32Array;
  /** Number of each segment's first point within its line; shape [segments]. */
  readonly pointOf: Int32Array;
  /** shape [segments, 6]: x, y, z of both ends. */
  private readonly ends: Float64Array;
  /** Segment numbers in the order of the leaves. */
  private readonly order: Int32Array;
  /** Box of each node: low x, y, z, high x, y, z. Node k's children are 2k + 1 and 2k + 2. */
  private readonly boxes: Float64Array;
  /** First and one past the last place in `order` of each node. */
  private readonly from: Int32Array;
  private readonly to: Int32Array;
  /** The last answer's segment: neighbouring questions have neighbouring answers. */
  private hint = -1;

  constructor(lines: readonly (readonly Vec3[])[]) {
    const total = lines.reduce((sum, line) => sum + (line.length === 0 ? 0 : Math.max(1, line.length - 1)), 0);
    this.lineOf = new Int32Array(total);
    this.pointOf = new Int32Array(total);
    this.ends = new Float64Array(6 * total);
    let at = 0;
    lines.forEach((line, number) => {
      for (let k = 0; k < line.length && (k < line.length - 1 || line.length === 1); k++) {
        this.lineOf[at] = number;
        this.pointOf[at] = k;
        this.ends.set(line[k]!, 6 * at);
        this.ends.set(line[Math.min(k + 1, line.length - 1)]!, 6 * at + 3);
        at += 1;
      }
    });
    this.order = Int32Array.from({ length: total }, (_, s) => s);
    let depth = 0;
    while (total > LEAF_SEGMENTS * 2 ** depth) depth += 1;
    const nodes = 2 ** (depth + 1) - 1;
    this.boxes = new Float64Array(6 * nodes);
    this.from = new Int32Array(nodes);
    this.to = new Int32Array(nodes);
    if (total > 0) this.build(0, 0, total);
  }

  get segments(): number {
    return this.lineOf.length;
  }

  /** The nearest place to `p` among the lines that `accepts` lets pass; distance Infinity when there is none. Ties go to the lower segment. */
  nearest(p: Vec3, accepts?: (line: number) => boolean): NearestSegment {
    const best = { distance: Number.POSITIVE_INFINITY, segment: -1, share: 0 };
    if (this.hint >= 0) this.offer(this.hint, p, accepts, best);
    if (this.segments > 0) this.search(0, p, accepts, best);
    if (best.segment >= 0) this.hint = best.segment;
    return best;
  }

  /** Calls `found` once for every segment that comes within `reach` of `p`, in no order. */
  within(p: Vec3, reach: number, found: (line: number, distance: number) => void): void {
    if (this.segments > 0) this.collect(0, p, reach, found);
  }

  private search(
    node: number,
    p: Vec3,
    accepts: ((line: number) => boolean) | undefined,
    best: { distance: number; segment: number; share: number },
  ): void {
    if (this.isLeaf(node)) {
      for (let k = this.from[node]!; k < this.to[node]!; k++) this.offer(this.order[k]!, p, accepts, best);
      return;
    }
    const [left, right] = [2 * node + 1, 2 * node + 2];
    const [toLeft, toRight] = [this.distanceToBox(left, p), this.distanceToBox(right, p)];
    const [near, far] = toLeft <= toRight ? [left, right] : [right, left];
    if (Math.min(toLeft, toRight) <= best.distance) this.search(near, p, accepts, best);
    if (Math.max(toLeft, toRight) <= best.distance) this.search(far, p, accepts, best);
  }

  private collect(node: number, p: Vec3, reach: number, found: (line: number, distance: number) => void): void {
    if (this.distanceToBox(node, p) > reach) return;
    if (!this.isLeaf(node)) {
      this.collect(2 * node + 1, p, reach, found);
      this.collect(2 * node + 2, p, reach, found);
      return;
    }
    for (let k = this.from[node]!; k < this.to[node]!; k++) {
      const s = this.order[k]!;
      const d = this.distanceTo(s, p, this.shareOn(s, p));
      if (d <= reach) found(this.lineOf[s]!, d);
    }
  }

  private offer(
    s: number,
    p: Vec3,
    accepts: ((line: number) => boolean) | undefined,
    best: { distance: number; segment: number; share: number },
  ): void {
    if (accepts && !accepts(this.lineOf[s]!)) return;
    const share = this.shareOn(s, p);
    const d = this.distanceTo(s, p, share);
    if (d > best.distance || (d === best.distance && s >= best.segment)) return;
    best.distance = d;
    best.segment = s;
    best.share = share;
  }

  private shareOn(s: number, p: Vec3): number {
    const e = this.ends;
    const at = 6 * s;
    const x = e[at + 3]! - e[at]!;
    const y = e[at + 4]! - e[at + 1]!;
    const z = e[at + 5]! - e[at + 2]!;
    const squared = x * x + y * y + z * z;
    if (squared === 0) return 0;
    return Math.max(0, Math.min(1, ((p[0] - e[at]!) * x + (p[1] - e[at + 1]!) * y + (p[2] - e[at + 2]!) * z) / squared));
  }

  private distanceTo(s: number, p: Vec3, share: number): number {
    const e = this.ends;
    const at = 6 * s;
    const x = p[0] - e[at]! - (e[at + 3]! - e[at]!) * share;
    const y = p[1] - e[at + 1]! - (e[at + 4]! - e[at + 1]!) * share;
    const z = p[2] - e[at + 2]! - (e[at + 5]! - e[at + 2]!) * share;
    return Math.sqrt(x * x + y * y + z * z);
  }

  private distanceToBox(node: number, p: Vec3): number {
    const at = 6 * node;
    const x = Math.max(this.boxes[at]! - p[0], 0, p[0] - this.boxes[at + 3]!);
    const y = Math.max(this.boxes[at + 1]! - p[1], 0, p[1] - this.boxes[at + 4]!);
    const z = Math.max(this.boxes[at + 2]! - p[2], 0, p[2] - this.boxes[at + 5]!);
    return Math.sqrt(x * x + y * y + z * z);
  }

  private isLeaf(node: number): boolean {
    return 2 * node + 2 >= this.from.length;
  }

  private build(node: number, from: number, to: number): void {
    this.from[node] = from;
    this.to[node] = to;
    const box = this.boxes.subarray(6 * node, 6 * node + 6);
    box.fill(Number.POSITIVE_INFINITY, 0, 3);
    box.fill(Number.NEGATIVE_INFINITY, 3, 6);
    for (let k = from; k < to; k++) {
      for (let c = 0; c < 6; c++) {
        const value = this.ends[6 * this.order[k]! + c]!;
        box[c % 3] = Math.min(box[c % 3]!, value);
        box[3 + (c % 3)] = Math.max(box[3 + (c % 3)]!, value);
      }
    }
    if (this.isLeaf(node)) return;
    const spans = [0, 1, 2].map((axis) => box[3 + axis]! - box[axis]!);
    const axis = spans.indexOf(Math.max(...spans));
    const middle = (s: number) => this.ends[6 * s + axis]! + this.ends[6 * s + 3 + axis]!;
    this.order.subarray(from, to).sort((a, b) => middle(a) - middle(b) || a - b);
    const half = (from + to) >> 1;
    this.build(2 * node + 1, from, half);
    this.build(2 * node + 2, half, to);
  }
}
