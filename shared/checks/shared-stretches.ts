import { resample } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import type { PlainSet } from "#shared/trees/plain-trees.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

/** A stretch that two strands both run along. */
export interface SharedStretch {
  readonly treeA: string;
  readonly strandA: string;
  readonly treeB: string;
  readonly strandB: string;
  /** Its middle and its length, millimetres. */
  readonly at: Vec3;
  readonly length: number;
}

// Common practice, no source: two strings cannot share an axis, so centrelines inside each other's smaller radius for two
// diameters are one string traced twice; around a common node all strands are close and nothing can be said.
const UNMEASURED_RADIUS_MM = 0.15;
const LEAST_LENGTH_MM = 0.5;
const NODE_CLEARANCE_DIAMETERS = 3;
const STEP_MM = 0.1;

/** Stretches along which a strand's centreline lies inside another strand, each pair of strands once (the longest stretch). */
export function sharedStretches(set: PlainSet): SharedStretch[] {
  const strands = set.trees.flatMap((tree) =>
    rootedStrands(tree).map((rooted) => ({ tree: tree.id, rooted, radius: typicalRadius(rooted) })),
  );
  const index = new SegmentIndex(strands.map((strand) => strand.rooted.line));
  const best = new Map<string, SharedStretch>();
  strands.forEach((one, i) => {
    const running = new Map<number, Vec3[]>();
    const close = (j: number) => {
      const run = running.get(j);
      running.delete(j);
      if (!run) return;
      const other = strands[j]!;
      const length = STEP_MM * run.length;
      if (length < Math.max(LEAST_LENGTH_MM, 4 * Math.min(one.radius, other.radius))) return;
      const [first, second] = i < j ? [one, other] : [other, one];
      const key = `${first.tree} ${first.rooted.strand.id} ${second.tree} ${second.rooted.strand.id}`;
      if ((best.get(key)?.length ?? 0) >= length) return;
      const at = run[Math.floor(run.length / 2)]!;
      best.set(key, {
        treeA: first.tree,
        strandA: first.rooted.strand.id,
        treeB: second.tree,
        strandB: second.rooted.strand.id,
        at,
        length,
      });
    };
    for (const p of resample(one.rooted.line, STEP_MM)) {
      const near = new Set<number>();
      index.within(p, one.radius, (j, d) => {
        if (
          j !== i &&
          d < Math.min(one.radius, strands[j]!.radius) &&
          isClearOfCommonNode(one.rooted, strands[j]!.rooted, p, one.radius)
        )
          near.add(j);
      });
      for (const j of [...running.keys()]) if (!near.has(j)) close(j);
      for (const j of near) running.set(j, [...(running.get(j) ?? []), p]);
    }
    for (const j of [...running.keys()]) close(j);
  });
  return [...best.values()];
}

function isClearOfCommonNode(a: RootedStrand, b: RootedStrand, p: Vec3, radius: number): boolean {
  const ends = (strand: RootedStrand) =>
    [
      [strand.from, strand.line[0]!],
      [strand.to, strand.line[strand.line.length - 1]!],
    ] as const;
  return ends(a).every(
    ([id, place]) => (id !== b.from && id !== b.to) || distance(place, p) > 2 * radius * NODE_CLEARANCE_DIAMETERS,
  );
}

/** Median measured radius, or the smallest that is usual where none was measured. */
function typicalRadius(strand: RootedStrand): number {
  const known = strand.radii.filter((r): r is number => r !== null).sort((x, y) => x - y);
  return known.length === 0 ? UNMEASURED_RADIUS_MM : known[Math.floor(known.length / 2)]!;
}
