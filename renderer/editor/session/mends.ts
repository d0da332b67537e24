import type { MakePlan } from "#renderer/editor/session/stage.ts";
import { deleteCrossLink } from "#shared/trees/edits/add-cross-link.ts";
import { cutStrand } from "#shared/trees/edits/cut-strand.ts";
import { deleteStrand, deleteTree } from "#shared/trees/edits/delete-strand.ts";
import { dismissFinding } from "#shared/trees/edits/dismiss-finding.ts";
import { endStrand } from "#shared/trees/edits/end-strand.ts";
import { exchangeTails } from "#shared/trees/edits/exchange-tails.ts";
import { dissolve } from "#shared/trees/edits/join-strands.ts";
import { moveBranch } from "#shared/trees/edits/move-branch.ts";
import { moveNode } from "#shared/trees/edits/move-node.ts";
import { insertPin, movePin, removePin, setLeg } from "#shared/trees/edits/move-pin.ts";
import { reRoot } from "#shared/trees/edits/re-root.ts";
import { renameTree } from "#shared/trees/edits/rename-tree.ts";
import { setLabels } from "#shared/trees/edits/set-labels.ts";
import { setLandmarks } from "#shared/trees/edits/set-landmarks.ts";
import { setRadius } from "#shared/trees/edits/set-radius.ts";
import { splitFork } from "#shared/trees/edits/split-fork.ts";

/** Edits that are one planned step with plain arguments, and the label each has in the history. */
const MENDS = {
  "move-node": [moveNode, "Move a node"],
  "move-pin": [movePin, "Move a pin"],
  "insert-pin": [insertPin, "Re-route over a new pin"],
  "remove-pin": [removePin, "Remove a pin"],
  "set-leg": [setLeg, "Change how a stretch is made"],
  "set-radius": [setRadius, "Set a radius"],
  cut: [cutStrand, "Cut a strand"],
  "delete-strand": [deleteStrand, "Delete a strand"],
  "delete-tree": [deleteTree, "Delete a tree"],
  "delete-link": [deleteCrossLink, "Delete a cross-link"],
  dissolve: [dissolve, "Take a node out"],
  "re-root": [reRoot, "Make it the origin"],
  "move-branch": [moveBranch, "Move a branch"],
  "exchange-tails": [exchangeTails, "Exchange tails"],
  "split-fork": [splitFork, "Split a fork"],
  "set-kind": [endStrand, "Change how a strand ends"],
  label: [setLabels, "Set labels"],
  rename: [renameTree, "Rename a tree"],
  landmarks: [setLandmarks, "Set landmarks"],
  dismiss: [dismissFinding, "Dismiss a finding"],
} as const;

export type MendName = keyof typeof MENDS;
type ArgsOf<Name extends MendName> = Parameters<(typeof MENDS)[Name][0]>[2];

/** An intent that is one of the mends, with its arguments. */
export type MendIntent = { readonly [Name in MendName]: { readonly do: Name; readonly args: ArgsOf<Name> } }[MendName];

export function isMend(intent: { readonly do: string }): intent is MendIntent {
  return Object.hasOwn(MENDS, intent.do);
}

/** The planned step of a mend and its label. */
export function mendOf(intent: MendIntent): { readonly plan: MakePlan; readonly label: string } {
  const [make, label] = MENDS[intent.do];
  // Name and arguments belong together by the type of MendIntent; the table's union alone cannot say so.
  const edit = make as (document: Parameters<MakePlan>[0], ids: Parameters<MakePlan>[1], args: unknown) => ReturnType<MakePlan>;
  return { plan: (document, ids) => edit(document, ids, intent.args), label };
}
