import { inOne, type MakePlan } from "#renderer/editor/session/stage.ts";
import { TautlineError } from "#shared/errors.ts";
import type { NodeId, TreeDocument } from "#shared/trees/document.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";
import { joinStrands } from "#shared/trees/edits/join-strands.ts";
import { placeOnLine } from "#shared/trees/edits/place-on-line.ts";
import { strandOf } from "#shared/trees/edits/refusal.ts";
import { startBranch } from "#shared/trees/edits/start-branch.ts";

/** A loose end joined to a node, or to a fork made for it on a strand. */
export function joinPlan(
  document: TreeDocument,
  { end, givesUpOrigin = false }: { readonly end: NodeId; readonly givesUpOrigin?: boolean },
  to: Anchor,
): MakePlan {
  if ("node" in to) return (now, ids) => joinStrands(now, ids, { a: end, b: to.node, givesUpOrigin });
  const { node } = placeOnLine(document, strandOf(document, to.strand), to.near);
  if (node !== null) return (now, ids) => joinStrands(now, ids, { a: end, b: node, givesUpOrigin });
  return (now, ids) => {
    const forked = startBranch(now, ids, { on: to });
    const fork = forked.operation.changes.find((change) => change.table === "node" && change.from === null);
    if (fork?.table !== "node") throw new TautlineError("internal", "The join made no fork.", { what: "join without a fork" });
    return inOne(
      () => forked,
      (then, more) => joinStrands(then, more, { a: end, b: fork.id, givesUpOrigin }),
    )(now, ids);
  };
}
