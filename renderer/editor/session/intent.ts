import type { MendIntent } from "#renderer/editor/session/mends.ts";
import type { Meeting } from "#renderer/editor/session/take-proposal.ts";
import type { IntentPlace } from "#renderer/editor/tracing/intent-place.ts";
import type { Sight } from "#renderer/editor/tracing/passing.ts";
import type { PointMm } from "#shared/geometry/types.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import type { EndKind, NodeId, StrandId, TreeDocument } from "#shared/trees/document.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";

/** Where a branch or cross-link leaves: a node or strand, or whatever passes the pointer by the time it is carried out. */
export type LeavePlace = Anchor | { readonly passing: Sight };

/** A place on a strand, or whatever strand passes the pointer by the time it is carried out. */
export type StrandPlace = { readonly strand: StrandId; readonly near: PointMm } | { readonly passing: Sight };

/**
 * What the person asked for, as plain data: it can wait, be kept over a reload, and be shown before it is carried out. Ids in
 * it are those of the moment; what they named may be gone when its turn comes, which is said and changes nothing.
 */
export type Intent =
  // tracing
  | { readonly do: "pin"; readonly at: IntentPlace }
  | { readonly do: "end"; readonly kind: EndKind; readonly at: IntentPlace | null }
  | { readonly do: "branch"; readonly from: LeavePlace }
  | { readonly do: "link"; readonly to: LeavePlace }
  | { readonly do: "resume"; readonly node: NodeId }
  | { readonly do: "straight" }
  | { readonly do: "back" }
  | { readonly do: "leave" }
  // mending
  | MendIntent
  | { readonly do: "on-strand"; readonly make: "cut" | "pin" | "stretch"; readonly at: StrandPlace }
  | {
      readonly do: "radius";
      readonly strand: StrandId;
      readonly near: PointMm;
      /** Length of the stretch about the place, millimetres. */
      readonly lengthMm: number;
      /** Millimetres; null = below resolution. */
      readonly radiusMm: number | null;
    }
  /** `givesUpOrigin`: the tree of the end was drawn towards its own origin, which becomes an open end. */
  | { readonly do: "join"; readonly end: NodeId; readonly to: LeavePlace; readonly givesUpOrigin?: boolean }
  | { readonly do: "take-proposal"; readonly proposal: FollowProposal; readonly meeting: Meeting | null }
  | { readonly do: "take-in"; readonly incoming: TreeDocument; readonly name: string }
  // history
  | { readonly do: "undo" }
  | { readonly do: "redo" }
  | { readonly do: "jump"; readonly seq: number }
  | { readonly do: "mark"; readonly name: string };
