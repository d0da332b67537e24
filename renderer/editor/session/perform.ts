import type { Intent } from "#renderer/editor/session/intent.ts";
import { joinPlan } from "#renderer/editor/session/join-plan.ts";
import { isMend, mendOf } from "#renderer/editor/session/mends.ts";
import { performTracing } from "#renderer/editor/session/perform-tracing.ts";
import { makeEdit, type Stage } from "#renderer/editor/session/stage.ts";
import { radiusMend, strandMend } from "#renderer/editor/session/strand-mends.ts";
import { takeProposalPlan } from "#renderer/editor/session/take-proposal.ts";
import { settleAnchor } from "#renderer/editor/tracing/passing.ts";
import { NOTHING, underWayAfter } from "#renderer/editor/tracing/under-way.ts";
import { takeInTrees } from "#shared/trees/edits/take-in-trees.ts";

/** Carries out one intent: at most one edit, or one move of the history. What is under way follows. */
export async function performIntent(stage: Stage, intent: Intent, signal: AbortSignal): Promise<void> {
  if (isMend(intent)) {
    const { plan, label } = mendOf(intent);
    await makeEdit(stage, label, plan, signal);
    dropIfGone(stage);
    return;
  }
  switch (intent.do) {
    case "on-strand":
    case "radius": {
      const { document } = stage.keeper;
      return performIntent(stage, intent.do === "radius" ? radiusMend(document, intent) : strandMend(document, intent), signal);
    }
    case "join":
      await makeEdit(
        stage,
        "Join strands",
        joinPlan(stage.keeper.document, intent, settleAnchor(stage.keeper.document, intent.to)),
        signal,
      );
      dropIfGone(stage);
      return;
    case "take-in":
      await makeEdit(
        stage,
        `Take in trees of ${intent.name}`,
        (document, ids) => takeInTrees(document, ids, { incoming: intent.incoming }),
        signal,
      );
      return;
    case "take-proposal":
      await makeEdit(stage, "Take a proposal", takeProposalPlan(stage.keeper.document, intent.proposal, intent.meeting), signal);
      return;
    case "undo":
    case "redo": {
      const before = stage.keeper.document;
      await (intent.do === "undo" ? stage.keeper.undo() : stage.keeper.redo());
      stage.underWay = underWayAfter(before, stage.keeper.document);
      return;
    }
    case "jump":
      await stage.keeper.jump(intent.seq);
      stage.underWay = NOTHING;
      return;
    case "mark":
      return stage.keeper.mark(intent.name);
    default:
      return performTracing(stage, intent, signal);
  }
}

/** What was under way ends when a mend took its node away or closed its end. */
function dropIfGone(stage: Stage): void {
  const { underWay, keeper } = stage;
  const { nodes, strands } = keeper.document;
  if (underWay.kind === "strand" && !nodes.has(underWay.tip)) stage.underWay = NOTHING;
  if (underWay.kind === "branch" && "strand" in underWay.on && !strands.has(underWay.on.strand)) stage.underWay = NOTHING;
  if (underWay.kind === "link" && "strand" in underWay.from && !strands.has(underWay.from.strand)) stage.underWay = NOTHING;
}
