import type { Vec3 } from "#shared/geometry/types.ts";
import type { Curve, TreeDocument } from "#shared/trees/document.ts";
import type { PlainSet, PlainStrand } from "#shared/trees/plain-trees.ts";

/** Points and radii of a curve as lists; kept per curve, which never changes. */
const listsOfCurve = new WeakMap<Curve, { points: Vec3[]; radii: (number | null)[] }>();

function listsOf(curve: Curve): { points: Vec3[]; radii: (number | null)[] } {
  const known = listsOfCurve.get(curve);
  if (known) return known;
  const points: Vec3[] = [];
  for (let k = 0; k < curve.points.length; k += 3) points.push([curve.points[k]!, curve.points[k + 1]!, curve.points[k + 2]!]);
  const lists = { points, radii: Array.from(curve.radii, (r) => (Number.isNaN(r) ? null : r)) };
  listsOfCurve.set(curve, lists);
  return lists;
}

/** A pass's document as measures, checks and comparison read it. Ids stay. */
export function plainFromDocument(document: TreeDocument): PlainSet {
  const strandOf = (strand: {
    id: string;
    from: string;
    to: string;
    curve: Curve["id"] | null;
    via: readonly Vec3[];
  }): PlainStrand => {
    const curve = strand.curve === null ? undefined : document.curves.get(strand.curve);
    const ends = { id: strand.id, from: strand.from, to: strand.to, via: strand.via };
    return curve ? { ...ends, ...listsOf(curve) } : ends;
  };
  const nodes = [...document.nodes.values()];
  const strands = [...document.strands.values()];
  return {
    trees: [...document.trees.values()].map((tree) => ({
      id: tree.id,
      name: tree.name,
      root: tree.root,
      nodes: nodes.filter((node) => node.tree === tree.id),
      strands: strands.filter((strand) => strand.tree === tree.id).map(strandOf),
    })),
    crossLinks: [...document.crossLinks.values()].map(strandOf),
  };
}
