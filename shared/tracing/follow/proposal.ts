import type { PointMm } from "#shared/geometry/types.ts";
import type { Certainty, NodeKind, OriginSite } from "#shared/trees/document.ts";

/**
 * Why the run stopped at a place, or why a stretch is doubtful: it widens into muscle (`muscle`), spreads into a sheet
 * (`leaflet`), fades into noise (`faint`), leaves the scan (`scan-edge`), touches another string so that it could run on along
 * either (`touches`), closes on itself (`loop`), meets a strand that is traced already (`traced`), or the run was long enough
 * (`enough`).
 */
export type FollowReason = "muscle" | "leaflet" | "faint" | "scan-edge" | "touches" | "loop" | "traced" | "enough";

/** A place where the proposed string begins, parts or ends. Ids `n1`, `n2` ... are the proposal's own. */
export interface ProposedNode {
  readonly id: string;
  /** `origin`, `fork`, `insertion`, `muscle-end`, `lost-end` or `scan-edge`. */
  readonly kind: NodeKind;
  /** Of the origin alone: `head` where the string runs into muscle, else `unseen`. */
  readonly site?: OriginSite;
  readonly position: PointMm;
  readonly certainty: Certainty;
  /** Why the run stopped here; null at a fork. */
  readonly reason: FollowReason | null;
  /** Number of the traced line (in the request's `traced`) that the run met here; null when it met none. */
  readonly meets: number | null;
}

/** A stretch that a person should look at: first and last point number of its strand, both included, and why. */
export interface DoubtfulStretch {
  readonly first: number;
  readonly last: number;
  readonly reason: FollowReason;
}

/**
 * A strand of the proposal, from its node nearer to the origin to the other. Its curve is exactly what `solveStrand` gives for
 * `from`, `via` and `to`, so that a strand accepted whole is the same as one traced through these pins.
 */
export interface ProposedStrand {
  readonly id: string;
  readonly from: string;
  readonly to: string;
  /** Pins between the two nodes, in order. */
  readonly via: readonly PointMm[];
  /** Flat xyz, millimetres; first and last are the two nodes. */
  readonly points: readonly number[];
  /** One per point, millimetres; null = below resolution. */
  readonly radii: readonly (number | null)[];
  /** 0-1; null when part of it had to be drawn straight. */
  readonly imageFit: number | null;
  readonly doubtful: readonly DoubtfulStretch[];
}

/** What follow proposes from one click: a tree, never more than a proposal until a person accepts it. */
export interface FollowProposal {
  readonly nodes: readonly ProposedNode[];
  readonly strands: readonly ProposedStrand[];
  /** Id of the origin. */
  readonly root: string;
  /** Where the click fell: strand and number of its nearest point. */
  readonly clicked: { readonly strand: string; readonly point: number };
  /** Sum of the strands' lengths, millimetres. */
  readonly lengthMm: number;
}
