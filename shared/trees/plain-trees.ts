import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** A node as measures, checks and comparison read it; a tree file's node is one. Position in millimetres. */
export interface PlainNode {
  readonly id: string;
  readonly kind: string;
  readonly position: readonly number[];
  readonly leaflet?: string | undefined;
  readonly segment?: string | undefined;
  readonly zone?: string | undefined;
}

/** A strand as measures, checks and comparison read it; `points` from `from` to `to`, millimetres; radii null = below resolution. */
export interface PlainStrand {
  readonly id: string;
  readonly from: string;
  readonly to: string;
  readonly points?: readonly (readonly number[])[] | undefined;
  readonly radii?: readonly (number | null)[] | undefined;
  readonly via?: readonly (readonly number[])[] | undefined;
}

/** A tree as measures, checks and comparison read it; a tree file's tree is one. */
export interface PlainTree {
  readonly id: string;
  readonly name?: string | undefined;
  readonly root: string | null;
  readonly nodes: readonly PlainNode[];
  readonly strands: readonly PlainStrand[];
}

/** A cross-link between two nodes. */
export type PlainLink = PlainStrand;

/** Everything of one side. */
export interface PlainSet {
  readonly trees: readonly PlainTree[];
  readonly crossLinks?: readonly PlainLink[] | undefined;
}

/** Place of a node, millimetres. */
export function placeOf(node: PlainNode): Vec3 {
  return [node.position[0]!, node.position[1]!, node.position[2]!];
}

/** Centreline of a strand: its points, else node - pins - node; shape [n >= 2], millimetres. */
export function centreline(strand: PlainStrand, from: PlainNode | undefined, to: PlainNode | undefined): Vec3[] {
  if (strand.points && strand.points.length > 0) return strand.points.map((p) => [p[0]!, p[1]!, p[2]!] as const);
  const line = [...(from ? [from.position] : []), ...(strand.via ?? []), ...(to ? [to.position] : [])];
  return line.map((p) => [p[0]!, p[1]!, p[2]!] as const);
}

/** Length of a strand, millimetres: of its points, else of node - pins - node. */
export function strandLength(strand: PlainStrand, from: PlainNode | undefined, to: PlainNode | undefined): number {
  return polylineLength(centreline(strand, from, to));
}

/** A tree as messages call it: its name with its id, or the id alone. */
export function nameOfTree(tree: PlainTree): string {
  return tree.name ? `${tree.name} (${tree.id})` : tree.id;
}
