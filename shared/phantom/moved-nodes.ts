import type { FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { arcLengths, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add, normalise, scale, subtract } from "#shared/geometry/vec3.ts";

/** How far along its strands a moved node takes them with it, millimetres. */
const REACH_MM = 2.5;
/** A node moves by no more than this share of the shortest strand at it, or strands would fold. */
const MOST_OF_STRAND = 0.4;

/** The tree with nodes moved, the strands at them following gently. @param shifts millimetres, by node id. */
export function withMovedNodes(tree: FileTree, shifts: ReadonlyMap<string, Vec3>): FileTree {
  const shortest = new Map<string, number>();
  for (const strand of tree.strands) {
    const length = polylineLength(strand.points!);
    for (const id of [strand.from, strand.to]) shortest.set(id, Math.min(length, shortest.get(id) ?? length));
  }
  const shiftOf = (id: string): Vec3 => {
    const shift = shifts.get(id) ?? [0, 0, 0];
    const size = Math.hypot(...shift);
    const most = MOST_OF_STRAND * (shortest.get(id) ?? 0);
    return size > most ? scale(shift, most / size) : shift;
  };
  return {
    ...tree,
    nodes: tree.nodes.map((node) => ({ ...node, position: roundPoint(add(node.position, shiftOf(node.id))) })),
    strands: tree.strands.map((strand) => bent(strand, shiftOf(strand.from), shiftOf(strand.to))),
  };
}

function bent(strand: FileStrand, from: Vec3, to: Vec3): FileStrand {
  const at = arcLengths(strand.points!);
  const length = at.at(-1)!;
  const reach = Math.min(length, REACH_MM);
  // Falls from 1 at the node to 0 at its reach, level at both.
  const share = (s: number) => (s >= reach ? 0 : Math.cos((Math.PI * s) / (2 * reach)) ** 2);
  const points = strand.points!.map((p, i) =>
    roundPoint(add(p, add(scale(from, share(at[i]!)), scale(to, share(length - at[i]!))))),
  );
  return { ...strand, points };
}

/** The tree with an end strand drawn on straight beyond its end. @param beyondMm above 0. */
export function withLongEnd(tree: FileTree, strandId: string, beyondMm: number): FileTree {
  const strand = tree.strands.find((each) => each.id === strandId)!;
  const points = strand.points!;
  const back = pointAt(points, polylineLength(points) - 0.5);
  const end = roundPoint(add(points.at(-1)!, scale(normalise(subtract(points.at(-1)!, back)), beyondMm)));
  const long: FileStrand = { ...strand, points: [...points, end], radii: [...strand.radii!, strand.radii!.at(-1)!] };
  return {
    ...tree,
    nodes: tree.nodes.map((node) => (node.id === strand.to ? { ...node, position: end } : node)),
    strands: tree.strands.map((each) => (each.id === strandId ? long : each)),
  };
}
