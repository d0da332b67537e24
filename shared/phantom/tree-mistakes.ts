import type { ChordaeFile, FileNode, FileStrand, FileTree } from "#shared/formats/chordae/chordae-file.ts";
import { arcLengths, pointAt, polylineLength } from "#shared/geometry/polyline.ts";
import { roundPoint, type Vec3 } from "#shared/geometry/types.ts";
import { add } from "#shared/geometry/vec3.ts";
import type { SeededRandom } from "#shared/random/seeded-random.ts";

/** A strand with what it hangs on. */
export interface Branch {
  readonly tree: FileTree;
  readonly strand: FileStrand;
  readonly from: FileNode;
  readonly to: FileNode;
  readonly siblings: readonly FileStrand[];
  readonly before: FileStrand | undefined;
  readonly length: number;
}

/** All strands with what they hang on; the true trees run away from their roots. */
export function branchesOf(trees: readonly FileTree[]): Branch[] {
  return trees.flatMap((tree) => {
    const nodes = new Map(tree.nodes.map((node) => [node.id, node]));
    return tree.strands.map((strand) => ({
      tree,
      strand,
      from: nodes.get(strand.from)!,
      to: nodes.get(strand.to)!,
      siblings: tree.strands.filter((other) => other.from === strand.from && other !== strand),
      before: tree.strands.find((other) => other.to === strand.from),
      length: polylineLength(strand.points!),
    }));
  });
}

/** The list with the tree of the same id exchanged for this one. */
export function replaceTree(trees: readonly FileTree[], tree: FileTree): FileTree[] {
  return trees.map((other) => (other.id === tree.id ? tree : other));
}

/**
 * The branch's tree without it. A fork that is left with one strand goes, too: nobody sees it without the branch.
 * @param branch an end strand with a strand before it and at least one beside it.
 */
export function withoutBranch({ tree, strand, from, before, siblings }: Branch): FileTree {
  const nodes = tree.nodes.filter((node) => node.id !== strand.to);
  if (siblings.length > 1) return { ...tree, nodes, strands: tree.strands.filter((each) => each.id !== strand.id) };
  const other = siblings[0]!;
  const joined: FileStrand = {
    ...before!,
    to: other.to,
    points: [...before!.points!, ...other.points!.slice(1)],
    radii: [...before!.radii!, ...other.radii!.slice(1)],
  };
  const gone = new Set([strand.id, other.id, before!.id]);
  return {
    ...tree,
    nodes: nodes.filter((node) => node.id !== from.id),
    strands: [...tree.strands.filter((each) => !gone.has(each.id)), joined],
  };
}

/** The tree of `own` followed from its point `cut` on into the other branch's tail, to the other's end. */
export function withTail(own: Branch, other: Branch, cut: number, otherCut: number): FileTree {
  const { tree, strand, to } = own;
  const head = Math.max(1, cut - 1);
  const tail = Math.min(other.strand.points!.length - 1, otherCut + 2);
  const changed: FileStrand = {
    ...strand,
    points: [...strand.points!.slice(0, head), ...other.strand.points!.slice(tail)],
    radii: [...strand.radii!.slice(0, head), ...other.strand.radii!.slice(tail)],
  };
  const end: FileNode = { ...other.to, id: to.id };
  return {
    ...tree,
    nodes: tree.nodes.map((node) => (node.id === to.id ? end : node)),
    strands: tree.strands.map((each) => (each.id === strand.id ? changed : each)),
  };
}

/** The tree with an end strand cut off before its end. @param shortMm less than the strand's length. */
export function withShortEnd(tree: FileTree, strandId: string, shortMm: number): FileTree {
  const strand = tree.strands.find((each) => each.id === strandId)!;
  const length = polylineLength(strand.points!);
  const at = roundPoint(pointAt(strand.points!, length - shortMm));
  const kept = arcLengths(strand.points!).filter((s) => s < length - shortMm - 1e-6).length;
  const short: FileStrand = {
    ...strand,
    points: [...strand.points!.slice(0, kept), at],
    radii: strand.radii!.slice(0, kept + 1),
  };
  return {
    ...tree,
    nodes: tree.nodes.map((node) => (node.id === strand.to ? { ...node, position: at } : node)),
    strands: tree.strands.map((each) => (each.id === strandId ? short : each)),
  };
}

/** A smooth displacement of space, as a hand that is a little off here and a little off there; at most about `size` mm. */
export function handSway(size: number, random: SeededRandom): (p: Vec3) => Vec3 {
  const waves = Array.from({ length: 9 }, () => ({
    k: [random.normal(), random.normal(), random.normal()] as const,
    phase: random.between(0, 2 * Math.PI),
  }));
  return (p) => {
    const shift = [0, 0, 0];
    waves.forEach(({ k, phase }, w) => {
      shift[w % 3]! += (size / 3) * Math.sin(k[0] * p[0] + k[1] * p[1] + k[2] * p[2] + phase);
    });
    return roundPoint(add(p, shift as unknown as Vec3));
  };
}

/** Cross-links whose nodes the pass still has, their ends exactly at them. */
export function withFittingLinks(file: ChordaeFile): ChordaeFile {
  if (!file.crossLinks) return file;
  const places = new Map(file.trees.flatMap((tree) => tree.nodes.map((node) => [node.id, node.position] as const)));
  const links = file.crossLinks.filter((link) => places.has(link.from) && places.has(link.to));
  const crossLinks = links.map((link) => ({
    ...link,
    points: [places.get(link.from)!, ...link.points!.slice(1, -1), places.get(link.to)!],
  }));
  return { ...file, crossLinks };
}
