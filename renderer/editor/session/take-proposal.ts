import { joinPlan } from "#renderer/editor/session/join-plan.ts";
import type { MakePlan } from "#renderer/editor/session/stage.ts";
import { inOne } from "#renderer/editor/session/stage.ts";
import { TautlineError } from "#shared/errors.ts";
import { proposalDocument } from "#shared/tracing/follow/accept-proposal.ts";
import type { FollowProposal } from "#shared/tracing/follow/proposal.ts";
import type { NodeId, TreeDocument } from "#shared/trees/document.ts";
import type { Anchor } from "#shared/trees/edits/anchor.ts";
import { isSamePlace } from "#shared/trees/edits/pin-run.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";

/** Where a proposal meets a string that is traced already. */
export interface Meeting {
  /** The proposed node there. */
  readonly node: string;
  readonly to: Anchor;
}

/** A proposal taken as one edit; where it meets a string, it is joined to it. */
export function takeProposalPlan(document: TreeDocument, proposal: FollowProposal, meeting: Meeting | null): MakePlan {
  const incoming = proposalDocument(proposal, meeting?.node ?? null);
  const takeIn: MakePlan = (now, ids) => takeInTrees(now, ids, { incoming });
  const place = proposal.nodes.find(({ id }) => id === meeting?.node)?.position;
  if (meeting === null || place === undefined) return takeIn;
  return (now, ids) => {
    const taken = takeIn(now, ids);
    let end: NodeId | null = null;
    for (const change of taken.operation.changes)
      if (change.table === "node" && change.to !== null && isSamePlace(change.to.position, place)) end = change.id;
    if (end === null)
      throw new TautlineError("internal", "The proposal has no end to join.", { what: "proposal without its end" });
    return inOne(() => taken, joinPlan(document, { end }, meeting.to))(now, ids);
  };
}
