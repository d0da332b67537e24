import { polylineLength } from "#shared/geometry/polyline.ts";
import type { Vec3 } from "#shared/geometry/types.ts";

/** A node as comparison reads it; a tree file's node is one. Position in millimetres. */
export interface ComparedNode {
  readonly id: string;
  readonly kind: string;
  readonly position: readonly number[];
}

/** A strand as comparison reads it; `points` from `from` to `to`, millimetres; radii null = below resolution. */
export interface ComparedStrand {
  readonly id: string;
  readonly from: string;
  readonly to: string;
  readonly points?: readonly (readonly number[])[] | undefined;
  readonly radii?: readonly (number | null)[] | undefined;
  readonly via?: readonly (readonly number[])[] | undefined;
}

/** A tree as comparison reads it; a tree file's tree is one. */
export interface ComparedTree {
  readonly id: string;
  readonly name?: string | undefined;
  readonly root: string | null;
  readonly nodes: readonly ComparedNode[];
  readonly strands: readonly ComparedStrand[];
}

/** A cross-link between two nodes; compared as its own list. */
export type ComparedLink = ComparedStrand;

/** Everything of one side. */
export interface ComparedSet {
  readonly trees: readonly ComparedTree[];
  readonly crossLinks?: readonly ComparedLink[] | undefined;
}

/** Place of a node, millimetres. */
export function placeOf(node: ComparedNode): Vec3 {
  return [node.position[0]!, node.position[1]!, node.position[2]!];
}

/** Centreline of a strand: its points, else node - pins - node; shape [n >= 2], millimetres. */
export function centreline(strand: ComparedStrand, from: ComparedNode | undefined, to: ComparedNode | undefined): Vec3[] {
  if (strand.points && strand.points.length > 0) return strand.points.map((p) => [p[0]!, p[1]!, p[2]!] as const);
  const line = [...(from ? [from.position] : []), ...(strand.via ?? []), ...(to ? [to.position] : [])];
  return line.map((p) => [p[0]!, p[1]!, p[2]!] as const);
}

/** Length of a strand, millimetres: of its points, else of node - pins - node. */
export function strandLength(strand: ComparedStrand, from: ComparedNode | undefined, to: ComparedNode | undefined): number {
  return polylineLength(centreline(strand, from, to));
}
