import type { SpreadStrand } from "#shared/agreement/report/report-data.ts";
import type { SpecimenItems, StudyPass, StudySpecimen } from "#shared/agreement/study/study.ts";
import { comparedPasses } from "#shared/agreement/study/study-quantities.ts";
import { resample } from "#shared/geometry/polyline.ts";
import { SegmentIndex } from "#shared/geometry/segment-index.ts";
import type { Vec3 } from "#shared/geometry/types.ts";
import { type RootedStrand, rootedStrands } from "#shared/trees/rooted-strands.ts";

/** Step at which strands are held against each other, millimetres. */
const STEP_MM = 0.25;

/** Distances of strands at places along them: `share` 0 at the origin's side, 1 at the end's. */
export interface PlacedDistance {
  readonly share: number;
  readonly distanceMm: number;
}

/** Where annotators differ on one specimen. */
export interface SpecimenSpread {
  readonly strands: readonly SpreadStrand[];
  /** Of each annotator's strand from each other annotator's, both ways. */
  readonly distances: readonly PlacedDistance[];
}

/**
 * How far annotators' first passes run apart along each strand: at places 0.25 mm apart, the distance to the nearest place on
 * the trees of each other annotator who has the strand.
 */
export function spreadOf(specimen: StudySpecimen, items: SpecimenItems): SpecimenSpread {
  const compared = comparedPasses(specimen);
  const lineOf = compared.map((p) => linesFromRoot(specimen.passes[p]!));
  // Of all trees: a strand that another annotator drew as two, parted by one more fork, is not far from the two.
  const trees = compared.map(
    (p) => new SegmentIndex(specimen.passes[p]!.set.trees.flatMap(rootedStrands).map(({ line }) => line)),
  );
  const distances: PlacedDistance[] = [];
  const strands = items.strands.items.flatMap(({ members }): SpreadStrand[] => {
    const drawn = compared.flatMap((p, c) => (members[p]! >= 0 ? [{ c, ...lineOf[c]!(members[p]!) }] : []));
    if (drawn.length === 0 || drawn[0]!.line.length < 2) return [];
    const lines = drawn.map(({ line }) => resample(line, STEP_MM));
    const spreads = lines.map((line, i) =>
      line.map((place, k) => {
        const others = drawn.filter((_, j) => j !== i).map(({ c }) => trees[c]!.nearest(place).distance);
        for (const distanceMm of others) distances.push({ share: k / Math.max(1, line.length - 1), distanceMm });
        return Math.sqrt(others.reduce((sum, one) => sum + one ** 2, 0) / others.length);
      }),
    );
    return [
      {
        specimen: specimen.name,
        tree: drawn[0]!.tree,
        markedBy: drawn.length,
        of: compared.length,
        line: lines[0]!,
        spreadMm: drawn.length > 1 ? spreads[0]! : [],
      },
    ];
  });
  return { strands, distances };
}

/** A pass's strands by their number, as lines that run away from the root. */
function linesFromRoot(pass: StudyPass): (strand: number) => { tree: string; line: Vec3[] } {
  const rooted = pass.set.trees.map(rootedStrands);
  return (k) => {
    const { tree, strand } = pass.canonical.strands[k]!;
    const members = new Set(pass.canonical.trees[tree]!.strands[strand]!.members);
    const along = rooted[tree]!.filter((one) => members.has(one.strand.id));
    const { id, name } = pass.file.trees[tree]!;
    return { tree: name ?? id, line: joined(along) };
  };
}

function joined(strands: readonly RootedStrand[]): Vec3[] {
  return strands.flatMap(({ line }, k) => (k === 0 ? line : line.slice(1)));
}
