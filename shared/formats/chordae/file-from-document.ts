import {
  CHORDAE_FORMAT,
  CHORDAE_VERSION,
  type ChordaeFile,
  type ChordaeHeader,
  type FileLandmarks,
  type FileLine,
  type FileNode,
  type FileStrand,
  type FileTree,
} from "#shared/formats/chordae/chordae-file.ts";
import { present } from "#shared/formats/chordae/known-keys.ts";
import { roundMm, roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { nodesOf, strandsOf } from "#shared/trees/adjacency.ts";
import type { CrossLink, Curve, Landmarks, Strand, TreeDocument, TreeNode } from "#shared/trees/document.ts";
import { byCounter } from "#shared/trees/ids.ts";

/**
 * The file that holds a document's trees: everything in the order of the ids' counters, keys in one fixed order, lengths
 * rounded to 1e-6 mm, so that the same document gives the same file whatever its history. Labels that are not set are left
 * out. Set-aside findings (`dismissals`) are no part of a tree file.
 * @param header where the trees come from; its unknown keys stand between its known ones and the trees.
 */
export function fileFromDocument(document: TreeDocument, header: ChordaeHeader): ChordaeFile {
  const trees = [...document.trees.values()].sort((a, b) => byCounter(a.id, b.id));
  const links = [...document.crossLinks.values()].sort((a, b) => byCounter(a.id, b.id));
  const { frame, volume, specimen, protocol, annotator, pass, created, software, radii, ...unknown } = header;
  return present({
    format: CHORDAE_FORMAT,
    version: CHORDAE_VERSION,
    unit: "mm",
    frame,
    volume,
    specimen,
    protocol,
    annotator,
    pass,
    created,
    software,
    radii,
    ...unknown,
    trees: trees.map(
      (tree): FileTree => ({
        id: tree.id,
        name: tree.name,
        root: tree.root,
        nodes: nodesOf(document, tree.id).map((id) => fileNode(document.nodes.get(id)!)),
        strands: strandsOf(document, tree.id).map((id) => fileStrand(document, document.strands.get(id)!)),
        ...tree.more,
      }),
    ),
    crossLinks: links.length === 0 ? undefined : links.map((link) => fileLink(document, link)),
    landmarks: fileLandmarks(document.landmarks),
  }) as ChordaeFile;
}

function fileNode(node: TreeNode): FileNode {
  const { id, kind, site, muscle, head, position, certainty, leaflet, segment, zone, cleft, more } = node;
  return present({
    id,
    kind,
    site,
    muscle,
    head,
    position: roundPoint(position),
    certainty,
    leaflet,
    segment,
    zone,
    cleft,
    ...more,
  }) as unknown as FileNode;
}

function fileStrand(document: TreeDocument, strand: Strand): FileStrand {
  const { id, from, to, strut, certainty, via, legs, more } = strand;
  const { points, radii, madeBy, imageFit } = traced(document, strand);
  const pins = via.length === 0 ? undefined : via.map(roundPoint);
  return present({ id, from, to, strut, certainty, points, radii, via: pins, legs, madeBy, imageFit, ...more }) as FileStrand;
}

function fileLink(document: TreeDocument, link: CrossLink): FileLine {
  const { id, from, to, certainty, via, more } = link;
  const { points, radii, madeBy, imageFit } = traced(document, link);
  const pins = via.length === 0 ? undefined : via.map(roundPoint);
  return present({ id, from, to, certainty, points, radii, via: pins, madeBy, imageFit, ...more }) as FileLine;
}

/**
 * What a file says of a line's centreline; nothing when it is not traced. A curve that no kernel made (`madeBy` is empty) and
 * that has no radius at all was never measured: its radii are left out, which is not the same as "below resolution".
 */
function traced(document: TreeDocument, line: Strand | CrossLink): Pick<FileLine, "points" | "radii" | "madeBy" | "imageFit"> {
  const curve = line.curve === null ? undefined : document.curves.get(line.curve);
  if (!curve) return {};
  const made = curve.madeBy.length > 0;
  const measured = made || curve.radii.some((radius) => !Number.isNaN(radius));
  return {
    points: pointsOf(curve),
    ...(measured && { radii: Array.from(curve.radii, (radius) => (Number.isNaN(radius) ? null : roundMm(radius))) }),
    ...(made && { madeBy: curve.madeBy }),
    ...((made || curve.imageFit !== null) && { imageFit: curve.imageFit === null ? null : roundMm(curve.imageFit) }),
  };
}

function pointsOf(curve: Curve): Vec3[] {
  return Array.from(curve.radii, (_, i) =>
    roundPoint([curve.points[3 * i]!, curve.points[3 * i + 1]!, curve.points[3 * i + 2]!]),
  );
}

/** Landmarks as a file holds them; undefined when there are none. */
export function fileLandmarks(landmarks: Landmarks): FileLandmarks | undefined {
  const { annulus, freeEdges, commissures, muscleHeads, more } = landmarks;
  const file = present({
    annulus: annulus && { closed: annulus.closed, points: annulus.points.map(roundPoint) },
    freeEdges: freeEdges?.map((edge) => edge.map(roundPoint)),
    commissures: commissures?.map(roundPoint),
    muscleHeads: muscleHeads?.map(({ muscle, head, position }) => ({ muscle, head, position: roundPoint(position) })),
    ...more,
  });
  return Object.keys(file).length === 0 ? undefined : (file as FileLandmarks);
}
