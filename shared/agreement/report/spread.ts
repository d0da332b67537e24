import type { SpreadStrand } from "#shared/agreement/report/report-data.ts";
import type { SpecimenItems, StudyPass, StudySpecimen } from "#shared/agreement/study/study.ts";
import { comparedPasses } from "#shared/agreement/study/study-quantities.ts";
import { nearestOnPolyline, resample } from "#shared/geometry/polyline.ts";
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
 * How far annotators' first passes run apart along each strand: at places 0.25 mm apart, the distance to the nearest place
 * of the other annotators' strand of the same item.
 */
export function spreadOf(specimen: StudySpecimen, items: SpecimenItems): SpecimenSpread {
  const compared = comparedPasses(specimen);
  const lineOf = compared.map((p) => linesFromRoot(specimen.passes[p]!));
  const distances: PlacedDistance[] = [];
  const strands = items.strands.items.flatMap(({ members }): SpreadStrand[] => {
    const drawn = compared.flatMap((p, c) =>
      members[p]! >= 0 ? [{ pass: specimen.passes[p]!, ...lineOf[c]!(members[p]!) }] : [],
    );
    if (drawn.length === 0 || drawn[0]!.line.length < 2) return [];
    const lines = drawn.map(({ line }) => resample(line, STEP_MM));
    const spreads = lines.map((line, i) =>
      line.map((place, k) => {
        const squares = lines.flatMap((other, j) => {
          if (i === j) return [];
          const { distance } = nearestOnPolyline(other, place);
          distances.push({ share: line.length > 1 ? k / (line.length - 1) : 0, distanceMm: distance });
          return [distance ** 2];
        });
        return Math.sqrt(squares.reduce((sum, one) => sum + one, 0) / squares.length);
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
