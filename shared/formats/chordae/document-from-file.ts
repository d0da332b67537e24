import type { ChordaeFile, FileLandmarks, FileLine, FileNode, FileStrand } from "#shared/formats/chordae/chordae-file.ts";
import { KNOWN_KEYS, present, unknownKeys } from "#shared/formats/chordae/known-keys.ts";
import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import type {
  CrossLink,
  Curve,
  CurveId,
  Landmarks,
  NodeId,
  Strand,
  Tree,
  TreeDocument,
  TreeId,
  TreeNode,
} from "#shared/trees/document.ts";
import { type IdOfTable, IdSource, type IdTable, isIdOf, NO_IDS_YET, raised } from "#shared/trees/ids.ts";

/**
 * The trees of a file as a document. Ids of the log's form (t1, n1, s1, x1) are kept, others get counters above all of
 * those. Lengths are rounded to 1e-6 mm, and centrelines begin and end exactly at their nodes. Trees without a name take
 * their file id. Radii that the file does not give are NaN. Unknown keys are kept in `more`; those of the file itself are not
 * part of a document.
 * @param file a validated file; not changed.
 */
export function documentFromFile(file: ChordaeFile): TreeDocument {
  const ids = new IdMap(file);
  const curves = new Map<CurveId, Curve>();
  const nodes = new Map<NodeId, TreeNode>();
  const trees = new Map<TreeId, Tree>();
  const strands = new Map<Strand["id"], Strand>();
  const crossLinks = new Map<CrossLink["id"], CrossLink>();
  for (const tree of file.trees) {
    const id = ids.of("tree", tree.id);
    const root = tree.root === null ? null : ids.of("node", tree.root);
    const more = unknownKeys(tree, KNOWN_KEYS.tree);
    trees.set(id, { id, name: tree.name ?? tree.id, root, ...(more && { more }) });
    for (const node of tree.nodes) {
      const made = treeNode(node, ids.of("node", node.id), id);
      nodes.set(made.id, made);
    }
  }
  const lineParts = (line: FileLine) => {
    const from = ids.of("node", line.from);
    const to = ids.of("node", line.to);
    const curve = line.points ? curveOf(line, nodes.get(from)!.position, nodes.get(to)!.position, ids.nextCurve()) : null;
    if (curve) curves.set(curve.id, curve);
    return { from, to, curve: curve?.id ?? null, via: (line.via ?? []).map(roundPoint) };
  };
  for (const tree of file.trees) {
    for (const strand of tree.strands) {
      const made = strandOf(strand, ids.of("strand", strand.id), ids.of("tree", tree.id), lineParts(strand));
      strands.set(made.id, made);
    }
  }
  for (const link of file.crossLinks ?? []) {
    const id = ids.of("cross-link", link.id);
    const more = unknownKeys(link, KNOWN_KEYS.crossLink);
    crossLinks.set(id, { id, ...lineParts(link), ...present({ certainty: link.certainty, more }) } as CrossLink);
  }
  const landmarks = file.landmarks ? landmarksOf(file.landmarks) : {};
  return { trees, nodes, strands, crossLinks, landmarks, dismissals: new Map(), curves };
}

/** File ids to document ids: of the log's form kept, others numbered on above them. */
class IdMap {
  private readonly known = new Map<string, string>();
  private readonly source: IdSource;

  constructor(file: ChordaeFile) {
    const list: [IdTable, string][] = file.trees.flatMap((tree): [IdTable, string][] => [
      ["tree", tree.id],
      ...tree.nodes.map((node): [IdTable, string] => ["node", node.id]),
      ...tree.strands.map((strand): [IdTable, string] => ["strand", strand.id]),
    ]);
    for (const link of file.crossLinks ?? []) list.push(["cross-link", link.id]);
    const kept = list.filter(([table, id]) => isIdOf(table, id)).map(([, id]) => id);
    this.source = new IdSource(raised(NO_IDS_YET, kept));
    for (const [table, id] of list) this.known.set(id, isIdOf(table, id) ? id : this.source.next(table));
  }

  of<T extends IdTable>(_table: T, id: string): IdOfTable[T] {
    return this.known.get(id) as IdOfTable[T];
  }

  nextCurve(): CurveId {
    return this.source.next("curve");
  }
}

function treeNode(node: FileNode, id: NodeId, tree: TreeId): TreeNode {
  const { kind, certainty, site, muscle, head, leaflet, segment, zone, cleft } = node;
  const labels = { certainty, site, muscle, head, leaflet, segment, zone, cleft, more: unknownKeys(node, KNOWN_KEYS.node) };
  return { id, tree, kind, position: roundPoint(node.position), ...present(labels) } as TreeNode;
}

function strandOf(
  strand: FileStrand,
  id: Strand["id"],
  tree: TreeId,
  line: Pick<Strand, "from" | "to" | "curve" | "via">,
): Strand {
  const { legs, strut, certainty } = strand;
  return { id, tree, ...line, ...present({ legs, strut, certainty, more: unknownKeys(strand, KNOWN_KEYS.strand) }) } as Strand;
}

function curveOf(line: FileLine, from: Vec3, to: Vec3, id: CurveId): Curve {
  const list = line.points!;
  const points = Float64Array.from(list.flat(), roundMm);
  points.set(from, 0);
  points.set(to, 3 * (list.length - 1));
  const radii = Float64Array.from(list, (_, i) => {
    const radius = line.radii?.[i] ?? null;
    return radius === null ? Number.NaN : roundMm(radius);
  });
  return { id, points, radii, madeBy: line.madeBy ?? [], imageFit: line.imageFit ?? null };
}

function landmarksOf(file: FileLandmarks): Landmarks {
  const { annulus, freeEdges, commissures, muscleHeads } = file;
  return present({
    annulus: annulus && { closed: annulus.closed, points: annulus.points.map(roundPoint) },
    freeEdges: freeEdges?.map((edge) => edge.map(roundPoint)),
    commissures: commissures?.map(roundPoint),
    muscleHeads: muscleHeads?.map(({ muscle, head, position }) => ({ muscle, head, position: roundPoint(position) })),
    more: unknownKeys(file, KNOWN_KEYS.landmarks),
  }) as Landmarks;
}
