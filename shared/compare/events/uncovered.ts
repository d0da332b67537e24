import { resample } from "#shared/geometry/polyline.ts";
import type { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { RootedStrand } from "#shared/trees/rooted-strands.ts";

/** A connected part of one tree that the other side's matching tree does not follow. */
export interface UncoveredPart {
  /** Number of the tree in its set. */
  readonly tree: number;
  /** The strand it begins on, and whether it takes that strand from its beginning. */
  readonly firstStrand: string;
  readonly start: Vec3;
  readonly length: number;
  /** Strands that lie in it up to their far end. */
  readonly strands: readonly string[];
  /** Nodes at those far ends. */
  readonly nodes: readonly string[];
  /** Nodes at the far ends of all strands it touches. */
  readonly leadsTo: readonly string[];
  /** Another tree of the other set that follows most of it; -1 = none. */
  readonly followedBy: number;
}

/** Share of a part that one other tree must follow to be named as its follower. */
const FOLLOWED_SHARE = 0.6;
const STEP_MM = 0.1;

/**
 * The parts of a tree farther than `tolerance` from its matching tree, longer than `tolerance`, each as one.
 * @param index all lines of the other set; @param treeOfLine tree number of each of its lines; @param match number of the matching tree.
 */
export function uncoveredParts(
  tree: number,
  strands: readonly RootedStrand[],
  index: SegmentIndex,
  treeOfLine: readonly number[],
  match: number,
  tolerance: number,
): UncoveredPart[] {
  interface Run {
    strand: number;
    samples: Vec3[];
    fromStart: boolean;
    toEnd: boolean;
  }
  const runs: Run[] = [];
  strands.forEach((strand, k) => {
    const samples = resample(strand.line, STEP_MM);
    let run: Run | null = null;
    samples.forEach((p, i) => {
      const own = index.nearest(p, (line) => treeOfLine[line] === match).distance;
      if (own <= tolerance) {
        run = null;
        return;
      }
      if (!run) {
        run = { strand: k, samples: [], fromStart: i === 0, toEnd: false };
        runs.push(run);
      }
      run.samples.push(p);
      run.toEnd = i === samples.length - 1;
    });
  });
  const group = runs.map((_, i) => i);
  const find = (i: number): number => (group[i] === i ? i : find(group[i]!));
  runs.forEach((run, i) => {
    runs.forEach((other, j) => {
      const touches = run.toEnd && other.fromStart && strands[run.strand]!.to === strands[other.strand]!.from;
      const siblings = run.fromStart && other.fromStart && strands[run.strand]!.from === strands[other.strand]!.from;
      if (i !== j && (touches || siblings)) group[Math.max(find(i), find(j))] = Math.min(find(i), find(j));
    });
  });
  return runs.flatMap((_, head) => {
    if (find(head) !== head) return [];
    const members = runs.filter((_, i) => find(i) === head).sort((x, y) => x.strand - y.strand);
    const length = members.reduce((sum, run) => sum + STEP_MM * run.samples.length, 0);
    if (length <= tolerance) return [];
    const whole = members.filter((run) => run.toEnd);
    const first = members[0]!;
    const samples = members.flatMap((run) => run.samples);
    return [
      {
        tree,
        firstStrand: strands[first.strand]!.strand.id,
        start: first.samples[0]!,
        length,
        strands: whole.map((run) => strands[run.strand]!.strand.id),
        nodes: whole.map((run) => strands[run.strand]!.to),
        leadsTo: [...new Set(members.map((run) => strands[run.strand]!.to))],
        followedBy: follower(samples, index, treeOfLine, match, tolerance),
      },
    ];
  });
}

function follower(
  samples: readonly Vec3[],
  index: SegmentIndex,
  treeOfLine: readonly number[],
  match: number,
  tolerance: number,
): number {
  const near = new Map<number, number>();
  for (const p of samples) {
    const seen = new Set<number>();
    index.within(p, tolerance, (line) => seen.add(treeOfLine[line]!));
    for (const other of seen) if (other !== match) near.set(other, (near.get(other) ?? 0) + 1);
  }
  const best = [...near].sort((x, y) => y[1] - x[1] || x[0] - y[0])[0];
  return best && best[1] >= FOLLOWED_SHARE * samples.length ? best[0] : -1;
}

/** The node among `nodes` nearest to a place, within `reach`; undefined when none is. */
export function nearestNode<T extends { readonly position: readonly number[] }>(
  nodes: readonly T[],
  p: Vec3,
  reach: number,
): T | undefined {
  let best: T | undefined;
  let least = reach;
  for (const node of nodes) {
    const d = distance([node.position[0]!, node.position[1]!, node.position[2]!], p);
    if (d <= least) {
      least = d;
      best = node;
    }
  }
  return best;
}
