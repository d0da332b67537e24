import type { PointMm } from "#shared/geometry/types.ts";

/** Ids inside a pass: a letter and a counter from the log's maximum ever, never reused. */
export type TreeId = `t${number}`;
export type NodeId = `n${number}`;
export type StrandId = `s${number}`;
export type CrossLinkId = `x${number}`;
export type CurveId = `c${number}`;

/** Every kind of node; the three that are no ends come first. */
export const NODE_KINDS = [
  "origin",
  "fork",
  "waypoint",
  "insertion",
  "muscle-end",
  "wall-end",
  "ruptured",
  "cut",
  "lost-end",
  "scan-edge",
  "open",
] as const;
export type NodeKind = (typeof NODE_KINDS)[number];
/** The kinds that end a strand. */
export const END_KINDS = ["insertion", "muscle-end", "wall-end", "ruptured", "cut", "lost-end", "scan-edge", "open"] as const;
export type EndKind = (typeof END_KINDS)[number];
export type OriginSite = "head" | "wall" | "unseen" | "scan-edge";
export type Muscle = "antero-lateral" | "postero-medial";
export type Leaflet = "anterior" | "posterior" | "commissure";
export type Segment = "A1" | "A2" | "A3" | "P1" | "P2" | "P3" | "AC" | "PC";
export type Zone = "free-edge" | "rough" | "base";
export type Certainty = "sure" | "doubtful";
/** How the stretch between two pins was made. */
export type LegKind = "guide" | "straight";
/** How a stretch of a stored curve came to be. */
export type MadeBy = "guide" | "follow" | "straight" | "edited";

/** Keys of a file that this version does not know; kept through a round trip. */
export type UnknownKeys = Readonly<Record<string, unknown>>;

export interface TreeNode {
  readonly id: NodeId;
  readonly tree: TreeId;
  readonly kind: NodeKind;
  readonly position: PointMm;
  readonly certainty?: Certainty;
  readonly site?: OriginSite;
  readonly muscle?: Muscle;
  readonly head?: number;
  readonly leaflet?: Leaflet;
  readonly segment?: Segment;
  readonly zone?: Zone;
  readonly cleft?: boolean;
  readonly more?: UnknownKeys;
}

export interface Strand {
  readonly id: StrandId;
  readonly tree: TreeId;
  readonly from: NodeId;
  readonly to: NodeId;
  /** The traced centreline, from `from` to `to`; null = not traced (yet). */
  readonly curve: CurveId | null;
  /** Pins between the two nodes, in order from `from`. */
  readonly via: readonly PointMm[];
  /** One entry per stretch between neighbouring pins (via.length + 1); absent = all guided by the image. */
  readonly legs?: readonly LegKind[];
  readonly strut?: boolean;
  readonly certainty?: Certainty;
  readonly more?: UnknownKeys;
}

export interface Tree {
  readonly id: TreeId;
  readonly name: string;
  readonly root: NodeId | null;
  readonly more?: UnknownKeys;
}

export interface CrossLink {
  readonly id: CrossLinkId;
  readonly from: NodeId;
  readonly to: NodeId;
  readonly curve: CurveId | null;
  readonly via: readonly PointMm[];
  readonly certainty?: Certainty;
  readonly more?: UnknownKeys;
}

/** An immutable centreline. Written once; replaced by another id, never changed. */
export interface Curve {
  readonly id: CurveId;
  /** shape [n, 3], order xyz, millimetres rounded to 1e-6; first and last point are the two nodes' positions. */
  readonly points: Float64Array;
  /** shape [n], millimetres; NaN = below resolution. */
  readonly radii: Float64Array;
  /** [first, last, how]: point indices, both included, neighbours share a point. */
  readonly madeBy: readonly (readonly [number, number, MadeBy])[];
  /** 0-1; null when not followed in the image. */
  readonly imageFit: number | null;
}

/** Places of the valve that are not chordae; they stand the valve upright and number the muscle heads. */
export interface Landmarks {
  readonly annulus?: { readonly closed: boolean; readonly points: readonly PointMm[] };
  readonly freeEdges?: readonly (readonly PointMm[])[];
  readonly commissures?: readonly PointMm[];
  readonly muscleHeads?: readonly { readonly muscle: Muscle; readonly head: number; readonly position: PointMm }[];
  readonly more?: UnknownKeys;
}

/** A finding the person has set aside, with the reason; keyed by a stable text made of its code and place. */
export interface Dismissal {
  readonly key: string;
  readonly reason: string;
}

/** All that a pass says about its specimen: the fold of its log. Immutable; edits share structure. */
export interface TreeDocument {
  readonly trees: ReadonlyMap<TreeId, Tree>;
  readonly nodes: ReadonlyMap<NodeId, TreeNode>;
  readonly strands: ReadonlyMap<StrandId, Strand>;
  readonly crossLinks: ReadonlyMap<CrossLinkId, CrossLink>;
  readonly landmarks: Landmarks;
  readonly dismissals: ReadonlyMap<string, Dismissal>;
  /** Curves known to the log; grows only, and is no part of undo. */
  readonly curves: ReadonlyMap<CurveId, Curve>;
}

/** A document with nothing in it. */
export function emptyDocument(): TreeDocument {
  return {
    trees: new Map(),
    nodes: new Map(),
    strands: new Map(),
    crossLinks: new Map(),
    landmarks: {},
    dismissals: new Map(),
    curves: new Map(),
  };
}
