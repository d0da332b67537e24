import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

/** Smallest distance between the surfaces of any two trees, millimetres, by trying all points against all; `skip` leaves out pairs of strands. */
export function smallestGap(file: ChordaeFile, skip: (a: string, b: string) => boolean): number {
  let least = Number.POSITIVE_INFINITY;
  file.trees.forEach((treeA, i) => {
    for (const treeB of file.trees.slice(i + 1))
      for (const a of treeA.strands)
        for (const b of treeB.strands) {
          if (skip(a.id, b.id)) continue;
          for (let k = 0; k < a.points!.length; k += 3)
            for (let m = 0; m < b.points!.length; m += 3) {
              const [p, q] = [a.points![k]!, b.points![m]!];
              const gap = Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]) - a.radii![k]! - b.radii![m]!;
              if (gap < least) least = gap;
            }
        }
  });
  return least;
}
