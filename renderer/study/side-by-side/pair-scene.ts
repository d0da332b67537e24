import type { Side, SideName } from "#renderer/study/side-by-side/sides.ts";
import { agreedStretches } from "#shared/compare/agreed-stretches.ts";
import type { Comparison } from "#shared/compare/comparison.ts";
import type { Difference, DifferenceKind } from "#shared/compare/differences.ts";
import { refine } from "#shared/geometry/polyline.ts";
import { pointMm, type Vec3 } from "#shared/geometry/types.ts";
import { distance } from "#shared/geometry/vec3.ts";
import { DIFFERENCE_GLYPHS } from "#shared/marks/difference-glyph.ts";
import { type DrawnStrand, drawnStrands } from "#shared/marks/drawn-strand.ts";
import type { MarkedPlace } from "#shared/marks/marked-place.ts";
import { NODE_GLYPHS } from "#shared/marks/node-glyph.ts";
import type { TreeMark } from "#shared/marks/tree-mark.ts";
import type { NodeId, TreeDocument } from "#shared/trees/document.ts";

/** How a side's own parts are drawn: colour and line pattern together, so that neither has to be seen alone. */
export const SIDE_MARKS: Readonly<Record<SideName, TreeMark>> = { a: { colour: 0, dash: 0 }, b: { colour: 1, dash: 1 } };

/** A piece of a strand of one side. */
export interface SideStrand extends DrawnStrand {
  readonly side: SideName;
}

/** Straight lines are cut this finely, so that the piece that differs can be told, millimetres. */
const FINE_MM = 0.1;
/** A node this near to a difference's own place needs no mark of its own, millimetres. */
const SAME_PLACE_MM = 0.1;

/** Both sets in one picture: what both have quiet, what only one has loud. Without a comparison all is quiet. */
export function pairStrands(a: Side, b: Side, comparison: Comparison | null, toleranceMm: number): SideStrand[] {
  const [linesA, linesB] = [finely(drawnStrands(a.document)), finely(drawnStrands(b.document))];
  const partners = (own: SideName) =>
    new Map(comparison?.pairs.map((pair) => (own === "a" ? [pair.a, pair.b] : [pair.b, pair.a]) as readonly [string, string]));
  const links = (own: SideName) => new Set(comparison?.crossLinks.matched.map((pair) => pair[own === "a" ? 0 : 1]));
  const of = (side: SideName, own: readonly DrawnStrand[], others: readonly DrawnStrand[]): SideStrand[] => {
    if (comparison === null) return own.map((line) => quiet(line, side));
    const partner = partners(side);
    const matchedLinks = links(side);
    const stretches = agreedStretches(own, others, (tree) => partner.get(tree), toleranceMm);
    return own.flatMap((line, k) => {
      if (line.tree === null) return [matchedLinks.has(line.id) ? quiet(line, side) : loud(line, side)];
      return stretches[k]!.map(({ first, last, agreed }) => {
        const piece = {
          ...line,
          points: line.points.subarray(3 * first, 3 * last + 3),
          radii: line.radii.subarray(first, last + 1),
        };
        return agreed ? quiet(piece, side) : loud(piece, side);
      });
    });
  };
  return [...of("a", linesA, linesB), ...of("b", linesB, linesA)];
}

/** The same strands with one line of one side picked out. */
export function withPicked(strands: readonly SideStrand[], side: SideName, line: string | null): SideStrand[] {
  return strands.map((strand) => ({ ...strand, picked: strand.side === side && strand.id === line }));
}

/**
 * Differences as marked places; each keeps the colour of the side that has what the other lacks. Where the current one is a
 * node that lies elsewhere in B, B's own node is marked as well.
 */
export function markedPlaces(differences: readonly Difference[], current: Difference | null, b: TreeDocument): MarkedPlace[] {
  const places = differences.map((difference) => ({
    at: pointMm(difference.at[0], difference.at[1], difference.at[2]),
    glyph: DIFFERENCE_GLYPHS[difference.kind],
    colour: sideOfKind(difference.kind) === null ? null : SIDE_MARKS[sideOfKind(difference.kind)!].colour,
    picked: difference === current,
  }));
  const image = current === null || current.a === null ? undefined : b.nodes.get(current.b as NodeId);
  if (image === undefined || distance(image.position, current!.at) < SAME_PLACE_MM) return places;
  return [...places, { at: image.position, glyph: NODE_GLYPHS[image.kind], colour: SIDE_MARKS.b.colour, picked: false }];
}

/** The side that alone has what a kind of difference is about; null where both have it. */
export function sideOfKind(kind: DifferenceKind): SideName | null {
  if (kind === "missed-branch" || kind === "tree-only-a" || kind === "link-only-a") return "a";
  if (kind === "extra-branch" || kind === "tree-only-b" || kind === "link-only-b") return "b";
  return null;
}

/** A name once: agreed parts of B lie on those of A. */
function quiet(line: DrawnStrand, side: SideName): SideStrand {
  return { ...line, side, manner: "quiet", mark: SIDE_MARKS[side], name: side === "a" ? line.name : "", pins: [] };
}

function loud(line: DrawnStrand, side: SideName): SideStrand {
  const name = `${side.toUpperCase()} ${line.name}`;
  return { ...line, side, manner: "loud", mark: SIDE_MARKS[side], name, pins: [], doubtful: false };
}

function finely(strands: readonly DrawnStrand[]): DrawnStrand[] {
  return strands.map((strand) => {
    if (strand.traced) return strand;
    const corners: Vec3[] = [];
    for (let k = 0; k + 2 < strand.points.length; k += 3)
      corners.push([strand.points[k]!, strand.points[k + 1]!, strand.points[k + 2]!]);
    const points = refine(corners, FINE_MM);
    return { ...strand, points: Float64Array.from(points.flat()), radii: new Float64Array(points.length).fill(Number.NaN) };
  });
}
