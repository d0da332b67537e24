import type {
  CrossLink,
  CrossLinkId,
  Dismissal,
  Landmarks,
  NodeId,
  Strand,
  StrandId,
  Tree,
  TreeId,
  TreeNode,
} from "#shared/trees/document.ts";

/**
 * One record of one table goes from `from` to `to`; null = not there. The closed union that every edit is made of:
 * swapping `from` and `to` is its exact inverse.
 */
export type Change =
  | { readonly table: "tree"; readonly id: TreeId; readonly from: Tree | null; readonly to: Tree | null }
  | { readonly table: "node"; readonly id: NodeId; readonly from: TreeNode | null; readonly to: TreeNode | null }
  | { readonly table: "strand"; readonly id: StrandId; readonly from: Strand | null; readonly to: Strand | null }
  | { readonly table: "cross-link"; readonly id: CrossLinkId; readonly from: CrossLink | null; readonly to: CrossLink | null }
  | { readonly table: "landmarks"; readonly from: Landmarks; readonly to: Landmarks }
  | { readonly table: "dismissal"; readonly id: string; readonly from: Dismissal | null; readonly to: Dismissal | null };

/** Stable codes of what a person did; the log keeps the code, the label shown beside it may be reworded. */
export const OPERATION_CODES = [
  "start-tree",
  "extend-strand",
  "start-branch",
  "end-strand",
  "add-cross-link",
  "take-back-pin",
  "move-node",
  "move-pin",
  "re-route",
  "cut-strand",
  "join-strands",
  "delete-strand",
  "delete-tree",
  "delete-cross-link",
  "re-root",
  "move-branch",
  "exchange-tails",
  "split-fork",
  "set-labels",
  "set-radius",
  "rename-tree",
  "set-landmarks",
  "dismiss-finding",
  "take-in-trees",
] as const;
export type OperationCode = (typeof OPERATION_CODES)[number];

/** One edit as the log keeps it: changes applied together or not at all. */
export interface Operation {
  readonly code: OperationCode;
  readonly changes: readonly Change[];
}

/** What an applied operation did, by table: ids added, updated and removed. */
export interface DocumentDiff {
  readonly added: readonly string[];
  readonly updated: readonly string[];
  readonly removed: readonly string[];
}
